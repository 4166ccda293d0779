package netlist

import (
	"os"
	"path/filepath"
	"strings"

	"railproof/netlist/quantity"
	"railproof/netlist/syntax"
)

// SharedSheet is the name of a duty sheet whose statements hold for every netlist of its folder and of those below.
const SharedSheet = "railproof.duty"

// FindSharedSheet walks up from the folder of a netlist and returns the first shared sheet, empty if there is
// none. The walk ends with the first folder that holds `.git`, or at the root of the file system. The netlist's own
// sheet is not its shared sheet too. The path returned is relative if the netlist's is.
func FindSharedSheet(netlist, ownSheet string) string {
	folder := filepath.Dir(netlist)
	absolute, err := filepath.Abs(folder)
	if err != nil {
		return ""
	}
	own, _ := os.Stat(ownSheet)
	for {
		name := filepath.Join(folder, SharedSheet)
		if info, err := os.Stat(name); err == nil && !info.IsDir() && !(own != nil && os.SameFile(own, info)) {
			return name
		}
		if _, err := os.Lstat(filepath.Join(folder, ".git")); err == nil {
			return ""
		}
		parent := filepath.Dir(absolute)
		if parent == absolute {
			return ""
		}
		folder, absolute = filepath.Join(folder, ".."), parent
	}
}

// Origin says where a statement stands. Of two about the same thing the one of the greater origin counts.
type Origin uint8

// The origins, in the order in which they give way.
const (
	FromSharedSheet Origin = iota
	FromNetlist            // on a line that begins with `*:`
	FromSheet
)

func (o Origin) String() string {
	return [...]string{"the shared sheet", "the netlist", "the sheet"}[o]
}

// Statement is something stated about one subject: in force, or with Why it is not.
type Statement struct {
	Text   string // as a duty sheet spells it: "rate C1 UR=25V"
	Origin Origin
	At     Position
	Why    string
}

// statements are what is stated about a netlist, and the checks that a concession may name (nil: any).
type statements struct {
	sheets sheets
	checks []string
}

// sheets are the statements about a netlist, by origin.
type sheets [FromSheet + 1][]DutyLine

func (in *interpreter) shared() bool { return in.current.origin == FromSharedSheet }

// absent reports that the netlist has nothing by a name. The shared sheet speaks of many netlists, so there it
// only leaves the statement idle.
func (in *interpreter) absent(at Position, what, expected string) {
	if in.shared() {
		in.why = what
		return
	}
	in.fault(at, what, expected)
}

// unfit reports a statement that does not fit the element it names. Of the shared sheet it is passed over,
// and that is told.
func (in *interpreter) unfit(at Position, what, expected string) {
	if in.shared() {
		in.why = what
		in.remark(at, "the shared sheet does not fit this netlist: "+what+"; passed over")
		return
	}
	in.fault(at, what, expected)
}

// supersededBy finds what the netlist itself says of the subject of an entry of the shared sheet under another key:
// a source is the line or a winding, and a line stated for every source leaves no other.
func (in *interpreter) supersededBy(e *dutyEntry) (by *dutyEntry) {
	keyword, source, _ := strings.Cut(strings.ToLower(e.key), " ")
	if e.lost || e.origin != FromSharedSheet || keyword != "line" && keyword != "winding" {
		return nil
	}
	for i := range in.entries {
		own := &in.entries[i]
		if own.lost || own.origin == FromSharedSheet {
			continue
		}
		other, its, _ := strings.Cut(strings.ToLower(own.key), " ")
		switch {
		case (other == "line" || other == "winding") && its == source && source != "",
			other == "line" && keyword == "line" && (its == "" || source == ""):
			return own
		}
	}
	return nil
}

// verifyRating reads a value stated for a part that this netlist does not have: it must be one for some kind of part.
func (in *interpreter) verifyRating(symbol Symbol, setting syntax.Setting) bool {
	var first error
	for _, m := range meanings {
		if m.Symbol != symbol {
			continue
		}
		_, _, err := readRating(m, setting.Value.Text())
		if err == nil {
			return true
		}
		if first == nil {
			first = err
		}
	}
	if first != nil {
		in.quantityFault(first, setting.Value.Raw, setting.Value.At())
	}
	return first == nil
}

// verifyLoad reads a range of the shared sheet for a load that this netlist does not have.
func (in *interpreter) verifyLoad(s *syntax.LoadStatement) {
	if _, err := quantity.ParseInterval(s.Range.Raw, quantity.Ampere); err != nil {
		if _, inOhms := quantity.ParseInterval(s.Range.Raw, quantity.Ohm); inOhms != nil {
			in.quantityFault(err, s.Range.Raw, s.Range.At())
		}
	}
}
