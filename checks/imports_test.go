package checks

import (
	"go/parser"
	"go/token"
	"io/fs"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// allowed says which packages of the module each package may import. Arrows run one way:
// cmd -> report -> checks -> netlist, and inside checks: checks -> study -> solver, checks -> parts, policy.
var allowed = map[string][]string{
	"cmd/railproof":        {"report", "checks", "checks/parts", "checks/policy", "checks/study", "netlist", "netlist/quantity", "netlist/syntax"},
	"report":               {"checks", "checks/parts", "checks/policy", "checks/study", "netlist", "netlist/quantity", "netlist/syntax"},
	"checks":               {"checks/study", "checks/parts", "checks/policy", "netlist", "netlist/quantity", "netlist/syntax"},
	"checks/study":         {"checks/solver", "checks/parts", "netlist", "netlist/quantity"},
	"checks/solver":        {},
	"checks/parts":         {"checks/parts/records", "netlist", "netlist/quantity", "netlist/syntax"},
	"checks/parts/records": {"netlist/syntax"},
	"checks/policy":        {"checks/parts/records", "netlist/quantity", "netlist/syntax"},
	"netlist":              {"netlist/syntax", "netlist/quantity"},
	"netlist/syntax":       {"netlist/quantity"},
	"netlist/quantity":     {},
}

func TestImportsRunOneWay(t *testing.T) {
	const module = "railproof/"
	root := ".."
	seen := 0
	err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		if d.IsDir() && strings.HasPrefix(d.Name(), ".") && path != root {
			return filepath.SkipDir
		}
		if !strings.HasSuffix(path, ".go") || strings.HasSuffix(path, "_test.go") {
			return nil
		}
		folder, err := filepath.Rel(root, filepath.Dir(path))
		if err != nil {
			return err
		}
		folder = filepath.ToSlash(folder)
		may, known := allowed[folder]
		if !known {
			t.Errorf("%s: package %s has no place in the order of imports", path, folder)
			return nil
		}
		file, err := parser.ParseFile(token.NewFileSet(), path, nil, parser.ImportsOnly)
		if err != nil {
			return err
		}
		for _, spec := range file.Imports {
			name, _ := strconv.Unquote(spec.Path.Value)
			inner, own := strings.CutPrefix(name, module)
			if !own {
				continue
			}
			seen++
			ok := false
			for _, m := range may {
				ok = ok || m == inner
			}
			if !ok {
				t.Errorf("%s imports %s, against the order of imports", path, name)
			}
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	if seen == 0 {
		t.Error("no import of the module was read")
	}
}
