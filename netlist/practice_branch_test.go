package netlist

import "testing"

// Branches of `.if`: a condition of parameters chooses, one that cannot be computed leaves all parts in doubt.
func TestPracticeOfBranches(t *testing.T) {
	in := func(cards string) string { return "t\nV1 a 0 5\n" + cards + "\n" }
	is := func(rest string) string { return "V1(a 0)=5 " + rest }
	const holds, fails = "assumed: the condition holds", "assumed: the condition does not hold"
	hold(t, []practice{
		{"a parameter behind the condition", in(".if (q == 2)\nR1 a 0 1k\n.endif\n.param q={p+1} p=1"), is("R1(a 0)=1000"), holds},
		{"the last definition of a parameter decides", in(".param q=1\n.if (q == 2)\nR1 a 0 1k\n.else\nR1 a 0 9k\n.endif\n.param q=2"), is("R1(a 0)=1000"), holds + "|model: defined again"},
		{"a condition in braces", in(".param q=2\n.if {q > 1}\nR1 a 0 1k\n.endif"), is("R1(a 0)=1000"), holds},
		{"a condition by a function", in(".func f(x) {x*2}\n.if (f(1) == 2)\nR1 a 0 1k\n.endif"), is("R1(a 0)=1000"), holds},
		{".elseif holds", in(".if (q == 1)\nR1 a 0 1\n.elseif (q == 2)\nR1 a 0 2\n.elseif (q > 1)\nR1 a 0 3\n.else\nR1 a 0 4\n.endif\n.param q=2"), is("R1(a 0)=2"), fails + "|" + holds},
		{"branches within branches", in(".param q=2\n.if (q < 1)\n.if (zz)\nR1 a 0 1\n.else\nR1 a 0 2\n.endif\n.elseif (q > 1)\n.if (q > 5)\nR1 a 0 3\n.else\nR1 a 0 4\n.endif\n.endif"), is("R1(a 0)=4"), fails + "|" + holds + "|" + fails},
		{"a parameter by branch", in(".param q=2\n.if (q == 2)\n.param r=1k\n.else\n.param r=9k\n.endif\nR1 a 0 {r}"), is("R1(a 0)=1000"), holds},
		{"a parameter in doubt", in(".if (zz)\n.param r=1k\n.else\n.param r=9k\n.endif\nR1 a 0 {r}"), is("R1(a 0)=unknown"), "not read: the condition|model: defined again|not read: parameter r|not read: parameter r"},
		{"a parameter in doubt, then stated", in(".if (zz)\n.param r=1k\n.endif\n.param r=2k\nR1 a 0 {r}"), is("R1(a 0)=2000"), "not read: the condition|model: defined again"},
		{"a function in doubt", in(".if (zz)\n.func f(x) {x}\n.endif\nR1 a 0 {f(2)}"), is("R1(a 0)=unknown"), "not read: the condition"},
		{"a model in doubt", in(".if (zz)\n.model DX D(IS=1n)\n.endif\nD1 a 0 DX"), is("D1(a 0)=unknown"), "not read: the condition"},
		{"a condition of a parameter in doubt", in(".param a=1\n.if (zz)\n.param a=2\n.endif\n.if (a == 1)\nR1 a 0 1\n.endif"), is("R1(a 0)=unknown"), "not read: the condition|model: defined again|not read: the condition|not read: parameter a|not read: parameter a"},
		{"a condition in a subcircuit", in("X1 a S q=2\n.subckt S p q=1\n.if (q > 1)\nR1 p 0 1\n.endif\n.ends"), is("X1.R1(a 0)=unknown"), "not read: it depends on how its subcircuit is called"},
	})
	refuse(t, map[string]string{
		"t\nV1 a 0 5\n.param q=1\n.if (q == 1)\n.param q=2\n.endif\n": "t.cir:4:1: the condition `(q == 1)` comes out otherwise with the parameters that follow it",
	})
}
