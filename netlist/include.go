package netlist

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"strings"

	"railproof/netlist/syntax"
)

const (
	maxIncludeDepth = 20
	maxIncludes     = 1000 // files read, a file that is included twice counting twice
	maxSubcktDepth  = 50
	maxIncludedSize = 256 << 20 // bytes of all included files together
)

// files opens what a netlist includes, inside the folders that may be read and nowhere else.
type files struct {
	roots []*os.Root
	names []string        // of the roots, for messages
	open  map[string]bool // files being read, against loops
	told  func(file string)
	read  int64
	count int
}

// newFiles opens the netlist's folder and the --include folders.
func newFiles(folders []string) (*files, error) {
	f := &files{open: map[string]bool{}, told: func(string) {}}
	for _, dir := range folders {
		root, err := os.OpenRoot(dir)
		if err != nil {
			f.close()
			return nil, err
		}
		f.roots, f.names = append(f.roots, root), append(f.names, dir)
	}
	return f, nil
}

func (f *files) close() {
	for _, r := range f.roots {
		r.Close()
	}
}

// find looks for a file as named inside each root, then by its base name. from is the folder of the including
// file within root number in.
func (f *files) find(name, from string, in int) (root int, local string, ok bool) {
	slashed := strings.ReplaceAll(name, `\`, "/")
	foreign := path.IsAbs(slashed) || len(slashed) > 1 && slashed[1] == ':' || strings.HasPrefix(slashed, "~")
	var candidates []struct {
		root int
		name string
	}
	try := func(root int, name string) {
		if name = path.Clean(name); filepath.IsLocal(name) {
			candidates = append(candidates, struct {
				root int
				name string
			}{root, name})
		}
	}
	if !foreign {
		if in < len(f.roots) {
			try(in, path.Join(from, slashed))
		}
		for k := range f.roots {
			try(k, slashed)
		}
	}
	base := path.Base(slashed)
	if in < len(f.roots) {
		try(in, path.Join(from, base))
	}
	for k := range f.roots {
		try(k, base)
	}
	for _, c := range candidates {
		if info, err := f.roots[c.root].Stat(c.name); err == nil && info.Mode().IsRegular() {
			return c.root, c.name, true
		}
	}
	for _, c := range candidates { // decks of systems whose file names have no case
		if name, ok := f.anyCase(c.root, c.name); ok {
			return c.root, name, true
		}
	}
	return 0, "", false
}

// anyCase finds a file whose base name differs in case only; the first in order of names.
func (f *files) anyCase(root int, name string) (string, bool) {
	folder, base := path.Split(name)
	entries, err := fs.ReadDir(f.roots[root].FS(), path.Clean("./"+folder))
	if err != nil {
		return "", false
	}
	for _, e := range entries {
		if e.Type().IsRegular() && strings.EqualFold(e.Name(), base) {
			return path.Join(folder, e.Name()), true
		}
	}
	return "", false
}

// lines reads a file of a root as logical lines.
func (f *files) lines(root int, name string) ([]syntax.Line, []syntax.Inline, []Diagnostic, error) {
	shown := filepath.Join(f.names[root], filepath.FromSlash(name))
	f.told(shown)
	file, err := f.roots[root].Open(name)
	if err != nil {
		return nil, nil, nil, err
	}
	defer file.Close()
	text, err := readLimited(file)
	if err != nil {
		return nil, nil, nil, err
	}
	if f.read += int64(len(text)); f.read > maxIncludedSize {
		return nil, nil, nil, fmt.Errorf("the included files together are larger than 256 MiB")
	}
	decoded := syntax.Decode(text)
	if kind := syntax.Foreign(decoded); kind != "" {
		return nil, nil, nil, foreignFile{kind}
	}
	lines, inline, faults := syntax.IncludedLines(shown, decoded)
	return lines, inline, faults, nil
}

// foreignFile is an included file of another kind.
type foreignFile struct{ kind string }

func (f foreignFile) Error() string { return "the file is " + f.kind }

// readLimited reads a file up to the limit of its size.
func readLimited(r *os.File) ([]byte, error) {
	if info, err := r.Stat(); err == nil && info.Size() > syntax.MaxFile {
		return nil, errTooLarge
	}
	text, err := io.ReadAll(io.LimitReader(r, syntax.MaxFile+1))
	if err == nil && len(text) > syntax.MaxFile {
		return nil, errTooLarge
	}
	return text, err
}

var errTooLarge = errors.New("the file is larger than 64 MiB")

// include follows `.include FILE`, `.lib FILE` and `.lib FILE SECTION`.
func (c *collector) include(key string, l *syntax.Line) {
	rest := strings.TrimSpace(l.Text[len(firstWord(l.Text)):])
	name, section := splitPath(rest, key == "lib")
	if name == "" {
		c.fault(l.Start(), "."+key+" without a file name", "."+key+" FILE")
		return
	}
	if c.depth >= maxIncludeDepth {
		c.fault(l.Start(), fmt.Sprintf("files include one another more than %d deep", maxIncludeDepth), "fewer levels of inclusion")
		return
	}
	if c.files != nil && c.files.count >= maxIncludes {
		c.fault(l.Start(), fmt.Sprintf("more than %d files are included", maxIncludes), "fewer inclusions")
		return
	}
	base := path.Base(strings.ReplaceAll(name, `\`, "/"))
	if c.files == nil {
		c.remark(RemarkLibraryNotRead, l.Start(), "", base+" is not read here")
		return
	}
	root, local, ok := c.files.find(name, c.files.folder(l.File), c.files.rootOf(l.File))
	if !ok {
		c.files.told(filepath.Join(c.files.names[0], base))
		c.remark(RemarkLibraryNotRead, l.Start(), "", base+" is not beside the netlist nor in an --include folder")
		return
	}
	id := fmt.Sprintf("%d:%s:%s", root, local, strings.ToLower(section))
	if c.files.open[id] {
		c.fault(l.Start(), base+" includes itself", "no loop of inclusions")
		return
	}
	c.files.count++
	lines, inline, faults, err := c.files.lines(root, local)
	if foreign := (foreignFile{}); errors.As(err, &foreign) {
		c.remark(RemarkLibraryNotRead, l.Start(), "", base+" is "+foreign.kind+", not a SPICE-style library")
		return
	}
	if err != nil {
		if errors.Is(err, fs.ErrNotExist) || errors.Is(err, fs.ErrPermission) {
			c.remark(RemarkLibraryNotRead, l.Start(), "", base+" cannot be opened")
			return
		}
		c.fault(l.Start(), err.Error(), "a readable SPICE-style file")
		return
	}
	c.faults = append(c.faults, faults...)
	for _, i := range inline {
		c.inline = append(c.inline, DutyLine{Text: i.Text, At: i.At})
	}
	if section != "" && !hasSection(lines, section) {
		c.remark(RemarkLibraryNotRead, l.Start(), "", base+" has no section "+section)
		return
	}
	if len(lines) > 0 && !plausible(lines) {
		c.remark(RemarkLibraryNotRead, l.Start(), "", base+" holds nothing that reads like a SPICE-style card")
		return
	}
	c.files.open[id] = true
	c.depth++
	c.block(lines, strings.ToLower(section))
	c.depth--
	delete(c.files.open, id)
}

// plausible reports whether a file that is included holds at least one line that is plainly a SPICE-style card: a
// dot card that defines something, a passive part or source with a number, or a call. Files of other programs under
// the same ending (assembler, symbol libraries) hold none, and are named once instead of refused line by line.
func plausible(lines []syntax.Line) bool {
	parts := false // cards of parts without a number, weaker evidence: no card is a single word
	for k := range lines {
		words := strings.Fields(lines[k].Text)
		if len(words) == 0 {
			continue
		}
		first := strings.ToLower(words[0])
		switch first {
		case ".model", ".subckt", ".macro", ".param", ".params", ".func", ".lib", ".include", ".inc", ".incl", ".global", ".end", ".ends", ".title":
			return true
		}
		if len(words) == 1 && first[0] != '.' && first[0] != '*' {
			return false
		}
		if len(words) < 4 {
			continue
		}
		switch first[0] {
		case 'r', 'c', 'l', 'v', 'i', 'e', 'g':
			for _, w := range words[3:] {
				if _, number := spice(w); number || strings.ContainsAny(w, "{='") || keyword(strings.SplitN(w, "(", 2)[0]) {
					return true
				}
			}
		case 'x', 'd', 'q', 'm':
			parts = parts || !strings.Contains(lines[k].Text, ",")
		}
	}
	return parts
}

func hasSection(lines []syntax.Line, section string) bool {
	for k := range lines {
		if strings.EqualFold(firstWord(lines[k].Text), ".lib") && strings.EqualFold(sectionHead(lines[k].Text), section) {
			return true
		}
	}
	return false
}

// splitPath takes a path, quoted or to the end of the line, and for .lib the section behind it. A path with
// blanks that is not quoted ends at the last word with a dot in it.
func splitPath(rest string, lib bool) (name, section string) {
	if rest == "" {
		return "", ""
	}
	if q := rest[0]; q == '"' || q == '\'' || q == '<' {
		closing := q
		if q == '<' {
			closing = '>'
		}
		if end := strings.IndexByte(rest[1:], closing); end >= 0 {
			return rest[1 : end+1], strings.TrimSpace(rest[end+2:])
		}
		return strings.Trim(rest, `"'<>`), ""
	}
	f := strings.Fields(rest)
	if lib && len(f) >= 2 && !strings.ContainsAny(f[len(f)-1], `./\`) && strings.ContainsAny(f[len(f)-2], `.`) {
		return strings.Join(f[:len(f)-1], " "), f[len(f)-1]
	}
	return rest, ""
}

// rootOf and folder say in which root a file that was read stands, and in which folder of it.
func (f *files) rootOf(file string) int {
	for k, n := range f.names {
		if rel, err := filepath.Rel(n, file); err == nil && filepath.IsLocal(rel) {
			return k
		}
	}
	return 0
}

func (f *files) folder(file string) string {
	k := f.rootOf(file)
	if k < len(f.names) {
		if rel, err := filepath.Rel(f.names[k], file); err == nil && filepath.IsLocal(rel) {
			return filepath.ToSlash(filepath.Dir(rel))
		}
	}
	return "."
}
