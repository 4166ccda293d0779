package main

import (
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
)

var recipe = regexp.MustCompile("(?s)<!-- runs as: ([^\n]*?) -->\n```[a-z]*\n(.*?)```\n")

// repository is a folder with a passing netlist in boards, the recipes of the README as files, and the program
// on its path.
type repository struct {
	t           *testing.T
	folder      string
	environment []string
}

func newRepository(t *testing.T, tools string) *repository {
	t.Helper()
	r := &repository{t: t, folder: t.TempDir(), environment: append(os.Environ(),
		"PATH="+tools+string(os.PathListSeparator)+os.Getenv("PATH"), "GIT_CONFIG_GLOBAL="+os.DevNull, "GIT_CONFIG_SYSTEM="+os.DevNull,
		"GIT_AUTHOR_NAME=a", "GIT_AUTHOR_EMAIL=a@localhost", "GIT_COMMITTER_NAME=a", "GIT_COMMITTER_EMAIL=a@localhost")}
	r.write("boards/sound.cir", supplyWith("35"))
	readme, err := os.ReadFile(filepath.Join("..", "..", "README.md"))
	if err != nil {
		t.Fatal(err)
	}
	for _, m := range recipe.FindAllStringSubmatch(string(readme), -1) {
		r.write(m[1], m[2])
	}
	return r
}

func (r *repository) write(name, text string) {
	r.t.Helper()
	path := filepath.Join(r.folder, name)
	if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
		r.t.Fatal(err)
	}
	if err := os.WriteFile(path, []byte(text), 0o755); err != nil {
		r.t.Fatal(err)
	}
}

// supplyWith is a half-wave supply of 16 V crest whose reservoir has a rated voltage: 35 V is enough, 10 V is not.
func supplyWith(rated string) string {
	return "Half-wave supply\nV1 ac 0 SIN(0 16 50)\nD1 ac out DX VRRM=100 IFAV=1 IFSM=100\nC1 out 0 470u V=" + rated +
		"\nRL out 0 1k P70=5\n.model DX D(RS=0.5)\n*: winding V1 as-drawn\n"
}

// run runs a program in the repository and tells whether it ended well.
func (r *repository) run(program string, args ...string) (output string, ok bool) {
	r.t.Helper()
	c := exec.Command(program, args...)
	c.Dir, c.Env = r.folder, r.environment
	out, err := c.CombinedOutput()
	if _, exited := err.(*exec.ExitError); err != nil && !exited {
		r.t.Fatal(err)
	}
	return string(out), err == nil
}

func need(t *testing.T, programs ...string) {
	t.Helper()
	for _, p := range programs {
		if _, err := exec.LookPath(p); err != nil {
			t.Skipf("SKIPPED, NOT PROVEN: %s is missing, so the README's recipe for it is not run", p)
		}
	}
}

// The CI step, the Makefile rule and the hook of the README pass a supply that conforms and stop at one that does not.
func TestReadmeRecipes(t *testing.T) {
	tools := t.TempDir()
	if out, err := exec.Command("go", "build", "-o", filepath.Join(tools, "railproof"), ".").CombinedOutput(); err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	t.Run("git", func(t *testing.T) { testHook(t, tools) })
	for _, l := range []struct {
		program string
		args    []string
		leaves  string // a file that the recipe writes
	}{{"sh", []string{"-e", "step.sh"}, "railproof.xml"}, {"make", []string{"rails"}, ""}} {
		t.Run(l.program, func(t *testing.T) {
			need(t, l.program)
			r := newRepository(t, tools)
			out, ok := r.run(l.program, l.args...)
			if !ok || !strings.Contains(out, "PASSED") {
				t.Errorf("a supply that conforms:\n%s", out)
			}
			if _, err := os.Stat(filepath.Join(r.folder, l.leaves)); err != nil {
				t.Error(err)
			}
			r.write("boards/unsound.cir", supplyWith("10"))
			if out, ok := r.run(l.program, l.args...); ok || !strings.Contains(out, "STOPPED") {
				t.Errorf("a supply that does not:\n%s", out)
			}
		})
	}
}

// The hook lets a commit through that conforms, whatever else lies in the folder, and refuses one that does not.
func testHook(t *testing.T, tools string) {
	need(t, "git", "sh", "mktemp")
	r := newRepository(t, tools)
	must := func(args ...string) string {
		t.Helper()
		out, ok := r.run("git", args...)
		if !ok {
			t.Fatalf("git %v\n%s", args, out)
		}
		return out
	}
	must("init", "--quiet")
	hook, err := os.ReadFile(filepath.Join(r.folder, "pre-commit"))
	if err != nil {
		t.Fatal(err)
	}
	r.write(".git/hooks/pre-commit", string(hook))
	must("add", "boards")
	r.write("boards/unsound.cir", supplyWith("10")) // in the folder, not in the commit
	must("commit", "--quiet", "-m", "conforms")
	first := must("rev-parse", "HEAD")
	must("add", "boards")
	if out, ok := r.run("git", "commit", "--quiet", "-m", "does not"); ok || !strings.Contains(out, "STOPPED") {
		t.Errorf("the hook lets it through:\n%s", out)
	}
	if must("rev-parse", "HEAD") != first {
		t.Error("a commit was made")
	}
}

// The README's table has a row for each command.
func TestReadmeNamesEveryCommand(t *testing.T) {
	readme, err := os.ReadFile(filepath.Join("..", "..", "README.md"))
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range newRoot(&streams{}).Commands() {
		if c.Name() != "help" && !c.Hidden && !strings.Contains(string(readme), "\n| `railproof "+c.Name()) {
			t.Errorf("no row for %s", c.Name())
		}
	}
}
