package main

import (
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
)

// netlistEndings are the file endings that count as netlists when a folder is given.
var netlistEndings = []string{".cir", ".net", ".sp", ".spice", ".ckt"}

// findInputs turns arguments into files: a file stands for itself whatever its ending; a folder for every
// netlist below it, in the order of their paths. Folders whose name begins with a dot are passed over; a link
// to a file counts as a file, one to a folder is not followed. A file that is named twice is taken once.
func findInputs(arguments []string) ([]string, error) {
	var files []string
	for _, a := range arguments {
		info, err := os.Stat(a)
		if err != nil || !info.IsDir() {
			files = append(files, filepath.Clean(a)) // a missing file is reported with the others
			continue
		}
		found, err := netlistsBelow(a)
		if err != nil {
			return nil, err
		}
		if len(found) == 0 {
			return nil, fmt.Errorf("%s holds no netlist; expected files ending in %s", a, strings.Join(netlistEndings, ", "))
		}
		files = append(files, found...)
	}
	var unique []string
	seen := map[string]bool{}
	for _, f := range files {
		if !seen[f] {
			seen[f] = true
			unique = append(unique, f)
		}
	}
	return unique, nil
}

func netlistsBelow(folder string) ([]string, error) {
	var found []string
	err := filepath.WalkDir(folder, func(path string, d fs.DirEntry, err error) error {
		switch {
		case err != nil:
			return err
		case d.IsDir():
			if path != folder && strings.HasPrefix(d.Name(), ".") {
				return filepath.SkipDir
			}
		case slices.Contains(netlistEndings, strings.ToLower(filepath.Ext(path))):
			if info, err := os.Stat(path); err != nil || info.Mode().IsRegular() {
				found = append(found, filepath.Clean(path)) // a dangling link is reported with the unread files
			}
		}
		return nil
	})
	return found, err
}
