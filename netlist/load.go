package netlist

// Source says where a netlist is to be read from and what may be read with it.
type Source struct {
	File        string   // netlist path
	DutyFile    string   // --duty; empty: FILE with the ending .duty beside it, if there
	IncludeDirs []string // --include folders
	Library     Library  // known types; may be nil
}
