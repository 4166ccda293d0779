package syntax

import (
	"flag"
	"os"
	"strings"
	"testing"
)

var rewriteGrammar = flag.Bool("write", false, "rewrite the grammars in netlist/GRAMMAR.md")

// The grammars printed in the documentation are those of the parsers.
func TestGrammarDocument(t *testing.T) {
	const path = "../GRAMMAR.md"
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	doc := string(text)
	for name, grammar := range map[string]string{"card": CardGrammar(), "formula": FormulaGrammar()} {
		head := "<!-- grammar: " + name + " -->\n```ebnf\n"
		at := strings.Index(doc, head)
		if at < 0 {
			t.Fatalf("no %s grammar in %s", name, path)
		}
		from := at + len(head)
		to := from + strings.Index(doc[from:], "```")
		if strings.TrimSpace(doc[from:to]) == strings.TrimSpace(grammar) {
			continue
		}
		if !*rewriteGrammar {
			t.Errorf("the %s grammar in %s is not the parser's: go test ./netlist/syntax -run Grammar -write", name, path)
			continue
		}
		doc = doc[:from] + strings.TrimSpace(grammar) + "\n" + doc[to:]
	}
	if *rewriteGrammar {
		if err := os.WriteFile(path, []byte(doc), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}
