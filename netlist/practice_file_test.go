package netlist

import (
	"strings"
	"testing"
)

// wide is text in UTF-16, low byte first.
func wide(text string) string {
	var b strings.Builder
	for _, r := range text {
		b.WriteByte(byte(r))
		b.WriteByte(byte(r >> 8))
	}
	return b.String()
}

// The file itself: line ends, encodings, the title, the end.
func TestPracticeOfFiles(t *testing.T) {
	const two = "V1(a 0)=5 R1(a 0)=1000"
	const micro = two + " C1(a 0)=1e-05"
	hold(t, []practice{
		{"CRLF", "t\r\nV1 a 0 5\r\nR1 a 0 1k\r\n", two, ""},
		{"CR alone", "t\rV1 a 0 5\rR1 a 0 1k\r", two, ""},
		{"line ends mixed", "t\rV1 a 0 5\r\nR1 a 0 1k\n", two, ""},
		{"no line end at the end", "t\nV1 a 0 5\nR1 a 0 1k", two, ""},
		{"Latin-1 micro sign", "t\nV1 a 0 5\nR1 a 0 1k\nC1 a 0 10\xb5\n", micro, ""},
		{"Latin-1 accents in a path", "* D:\\Ol\xe1\\a\nV1 a 0 5\nR1 a 0 1k\n", two, ""},
		{"UTF-8 micro sign beside a Latin-1 comment", "* Ol\xe1\nV1 a 0 5\nR1 a 0 1k\nC1 a 0 10\xc2\xb5F\n", micro, ""},
		{"UTF-8 micro sign U+00B5", "t\nV1 a 0 5\nR1 a 0 1k\nC1 a 0 10µ\n", micro, ""},
		{"Greek mu U+03BC", "t\nV1 a 0 5\nR1 a 0 1k\nC1 a 0 10μF\n", micro, ""},
		{"micro sign encoded twice", "t\nV1 a 0 5\nR1 a 0 1k\nC1 a 0 10Âµ\n", micro, ""},
		{"micro sign that was lost is no unit", "t\nV1 a 0 5\nR1 a 0 1k\nC1 a 0 10\ufffdF\n", two + " C1(a 0)=unknown", ""},
		{"micro sign of an old code page is no unit", "t\nV1 a 0 5\nR1 a 0 1k\nC1 a 0 10\xe6F\n", two + " C1(a 0)=unknown", ""},
		{"UTF-8 with byte order mark", "\ufefft\nV1 a 0 5\nR1 a 0 1k\n", two, ""},
		{"UTF-16LE without byte order mark", wide("* t\nV1 a 0 5\nR1 a 0 1k\nC1 a 0 10µ\n"), micro, ""},
		{"UTF-16LE with byte order mark", "\xff\xfe" + wide("* t\nV1 a 0 5\nR1 a 0 1k\n"), two, ""},
		{"UTF-16BE with byte order mark", "\xfe\xff\x00" + strings.TrimSuffix(wide("* t\nV1 a 0 5\nR1 a 0 1k\n"), "\x00"), two, ""},
		{"tabs", "t\nV1\ta\t0\t5\nR1\ta\t0\t1k\n", two, ""},
		{"blank first line", "\nV1 a 0 5\nR1 a 0 1k\n", two, ""},
		{"comment as title", "* supply\nV1 a 0 5\nR1 a 0 1k\n", two, ""},
		{"free text as title", "Bridge with 470u\nV1 a 0 5\nR1 a 0 1k\n", two, ""},
		{"title with a comment mark", "Supply; second try $ x\nV1 a 0 5\nR1 a 0 1k\n", two, ""},
		{"title that parses as an element", "Lab 4, Task 2, EE 101\nV1 a 0 5\nR1 a 0 1k\n", two, ""},
		{"title that is a well-formed element of other nodes", "R9 b c 100\nV1 a 0 5\nR1 a 0 1k\n", two, "assumed: reads like an element but is the title"},
		{"first line really is an element", "R9 a 0 1.2k ; load\nV1 a 0 5\nR1 a 0 1k\n", two + " R9(a 0)=1200", "assumed: R9 the first line is taken as an element"},
		{"first line is a diode", "D9 a 0 DX\nV1 a 0 5\nR1 a 0 1k\n.model DX D\n", two + " D9(a 0)=DX[IS=1e-14,N=1,BV=0]", "assumed: D9 the first line is taken as an element"},
		{"first line is a directive", ".options reltol=1m ; x\nV1 a 0 5\nR1 a 0 1k\n", two, ""},
		{"first line is .title", ".title x\nV1 a 0 5\nR1 a 0 1k\n", two, ""},
		{"first line is .param, continued", ".param r=\n+ 1k ; note\nV1 a 0 5\nR1 a 0 {r}\n", two, ""},
		{".end missing", "t\nV1 a 0 5\nR1 a 0 1k\n", two, ""},
		{"control block behind .end", "t\nV1 a 0 5\nR1 a 0 1k\n.end\n.control\nR9 a 0 1\n.endc\n", two, ""},
		{".end twice", "t\nV1 a 0 5\nR1 a 0 1k\n.end\n\n.END\n", two, "assumed: a second .end: the circuit ends at the first"},
		{"elements behind .end", "t\nV1 a 0 5\nR1 a 0 1k\n.end\nCx a 0 1u\n", two, "after end: Cx stands behind .end"},
		{"words behind .end", "t\nV1 a 0 5\nR1 a 0 1k\n.end\nrun it again\nplot v(a) v(b)\n", two, ""},
		{"typos of directives", "t\nV1 a 0 5\nR1 a 0 1k\n.endA\n.trans 1\n", two, "not read: .enda|not read: .trans"},
		{"end-of-file mark of old systems", "t\nV1 a 0 5\nR1 a 0 1k\n\x1a", two, ""},
	})
	c := accepted(t, "Bridge with 470u ; x\nV1 a 0 5\nR1 a 0 1k\n")
	if c.Title != "Bridge with 470u ; x" {
		t.Errorf("title %q", c.Title)
	}
	refuse(t, map[string]string{
		"(export (version D)\n (components))\n":                           "t.cir:1:1: this is a board netlist in S-expressions",
		"[Main]\nName=x\nKind=2\n":                                        "t.cir:1:1: this is a settings file in sections",
		"DEF X U 0 40 Y N 1 F N\n" + strings.Repeat("F0 \"U\"\n1 a\n", 9): "t.cir:1:1: no line of the file reads like a SPICE-style card",
	})
}

// Lines, comments and blocks.
func TestPracticeOfLines(t *testing.T) {
	const two = "V1(a 0)=5 R1(a 0)=1000"
	diode := func(is string) string { return "V1(a 0)=5 D1(a 0)=DX[IS=" + is + ",N=2,BV=0]" }
	hold(t, []practice{
		{"continuation", "t\nV1 a 0 5\nD1 a 0 DX\n.model DX D(IS=1n\n+ N=2)\n", diode("1e-09"), ""},
		{"continuation glued to the word", "t\nV1 a 0\n+5\nD1 a 0 DX\n.model DX D(IS=1n\n+N=2)\n", diode("1e-09"), ""},
		{"continuation behind comment and blank line", "t\nV1 a 0 5\nR1 a 0\n* note\n\n; other\n+ 1k\n", two, ""},
		{"continuation with a comment behind it", "t\nV1 a 0 5\nR1 a ; first node\n+ 0 ; second\n+ 1k\n", two, ""},
		{"; inline", "t\nV1 a 0 5 ; five\nR1 a 0 1k;hot\n", two, ""},
		{"full-line ;", "t\nV1 a 0 5\n;tran 10m\nR1 a 0 1k\n", two, ""},
		{"$ between blanks", "t\nV1 a 0 5 $ ceramic\nR1 a 0 1k $\n", two, ""},
		{"$ inside a name is no comment", "t\nV1 N$1 0 5\nR1 $N_2 N$1 1k\n", "V1(N$1 0)=5 R1($N_2 N$1)=1000", ""},
		{"comment marks inside quotes", "t\nV1 a 0 5\nR1 a 0 1k mfg=\"A; B $ C\"\n", two, ""},
		{"indented *, # and // lines", "t\n# x\n// y\n   * z\n\t* z\nV1 a 0 5\nR1 a 0 1k\n", two, ""},
		{"elements commented out", "t\nV1 a 0 5\n*D7 5 6 DX\nR1 a 0 1k\n", two, ""},
		{"indented deck", "t\n    V1 a 0 5\n\t R1 a 0 1k\n  .end\n", two, ""},
		{"control block", "t\nV1 a 0 5\n.control\necho \"unbalanced\n.tran 1u 1\nlet p=v(a)*2\nwrdata out > x {(\n.endc\nR1 a 0 1k\n", two, ""},
		{"control block in upper case", "t\nV1 a 0 5\n.CONTROL\nR9 a 0 1\n.ENDC\nR1 a 0 1k\n", two, ""},
		{"control block that is never closed", "t\nV1 a 0 5\nR1 a 0 1k\n.control\nrun\n.end\n", two, "not read: its block has no .endc"},
		{"directives in any case", "t\n.PARAM r=1k\nV1 a 0 5\nR1 a 0 {R}\n.End\n", two, ""},
		{"analysis and output cards", "t\n.options reltol=1m\n.save v(a)\n.probe\n.meas tran x max v(a)\n.four 50 v(a)\n.nodeset v(a)=1\n.tran 1u 1\n.ac dec 1 1 1\n.dc v1 0 1 1\n.op\n.print v(a)\n.plot v(a)\nV1 a 0 5\nR1 a 0 1k\n", two, ""},
		{"initial voltages and runs over values are named once", "t\n.step param q 1 2 1\n.ic V(a)=1\n.IC v(b)=2\nV1 a 0 5\nR1 a 0 1k\n", two, "not read: .step: the circuit is solved with the values of the other cards|not read: .ic: nodes begin at what the elements themselves state"},
		{"cards of one program are named once", "t\n.simulator x\n.simulator y\nV1 a 0 5\nR1 a 0 1k\n", two, "not read: .simulator"},
		{".if that holds", "t\n.param q=2\nV1 a 0 5\n.if (q == 2)\nR1 a 0 1k\n.else\nR1 a 0 2k\n.endif\n", two, "assumed: the condition holds"},
		{".if that does not hold", "t\n.param q=2\nV1 a 0 5\n.if (q > 2)\nR1 a 0 9\n.elseif (q < 1)\nR1 a 0 8\n.else\nR1 a 0 1k\n.endif\n", two, "assumed: the condition does not hold|assumed: the condition does not hold"},
		{".if that cannot be computed", "t\nV1 a 0 5\n.if (zz)\nR1 a 0 1\n.else\nR2 a 0 2\n.endif\nR3 a 0 3\n", "V1(a 0)=5 R1(a 0)=unknown R2(a 0)=unknown R3(a 0)=3", "not read: the condition of .if"},
		{".temp is read", "t\n.temp 60\nV1 a 0 5\nR1 a 0 1k\n", two, ""},
	})
	if c := accepted(t, "t\n.temp 60\nV1 a 0 5\nR1 a 0 1k\n"); c.Temperature != 60 {
		t.Errorf("temperature %g", c.Temperature)
	}
	refuse(t, map[string]string{
		"t\nV1 a 0 5\n.if (1)\nR1 a 0 1\n": "t.cir:3:1: .if without .endif",
		"t\nV1 a 0 5\n.else\nR1 a 0 1\n":   "t.cir:3:1: .else without .if",
		"t\nV1 a 0 5\n.ends\nR1 a 0 1\n":   "t.cir:3:1: .ends without .subckt",
	})
}
