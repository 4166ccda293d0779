package report

import (
	"crypto/sha256"
	"encoding/hex"
	"strconv"
	"strings"
)

// fingerprintVersion grows when the recipe changes, so that fingerprints of two recipes never meet.
const fingerprintVersion = "rp1"

// fingerprint gives every finding of a file its fingerprint: a hash of check, element path and quantity. It
// holds no line number, value or file name, so it stays when the netlist is edited elsewhere or moved.
// Findings that agree in all three are told apart by their rank among each other.
func fingerprint(list []Finding) {
	seen := map[string]int{}
	for k := range list {
		f := &list[k]
		key := strings.Join([]string{f.Check, strings.ToLower(f.Element), f.quantity()}, "\x00")
		seen[key]++
		if n := seen[key]; n > 1 {
			key += "\x00" + strconv.Itoa(n)
		}
		sum := sha256.Sum256([]byte(key))
		f.Fingerprint = fingerprintVersion + "-" + hex.EncodeToString(sum[:12])
	}
}
