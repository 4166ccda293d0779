package report

import (
	"encoding/xml"
	"fmt"
	"io"
	"strings"

	"railproof/checks"
)

// The elements of a JUnit XML document, as far as readers agree on them.
type (
	junitRun struct {
		XMLName  xml.Name     `xml:"testsuites"`
		Name     string       `xml:"name,attr"`
		Tests    int          `xml:"tests,attr"`
		Failures int          `xml:"failures,attr"`
		Errors   int          `xml:"errors,attr"`
		Skipped  int          `xml:"skipped,attr"`
		Suites   []junitSuite `xml:"testsuite"`
	}
	junitSuite struct {
		Name     string      `xml:"name,attr"`
		Tests    int         `xml:"tests,attr"`
		Failures int         `xml:"failures,attr"`
		Errors   int         `xml:"errors,attr"`
		Skipped  int         `xml:"skipped,attr"`
		Cases    []junitCase `xml:"testcase"`
	}
	junitCase struct {
		Class   string        `xml:"classname,attr"`
		Name    string        `xml:"name,attr"`
		File    string        `xml:"file,attr,omitempty"`
		Line    int           `xml:"line,attr,omitempty"`
		Failure *junitMessage `xml:"failure"`
		Error   *junitMessage `xml:"error"`
		Skipped *junitMessage `xml:"skipped"`
		Output  string        `xml:"system-out,omitempty"`
	}
	junitMessage struct {
		Message string `xml:"message,attr"`
		Type    string `xml:"type,attr,omitempty"`
		Text    string `xml:",chardata"`
	}
)

// WriteJUnit writes JUnit XML: a suite a file, a case for each check on each element. A violation is a
// failure whatever the gate, an unproven finding is skipped with its reason, an unread file is an error.
func (r *Report) WriteJUnit(w io.Writer) error {
	run := junitRun{Name: "railproof"}
	for k := range r.Files {
		s := junitOf(&r.Files[k])
		run.Tests += s.Tests
		run.Failures += s.Failures
		run.Errors += s.Errors
		run.Skipped += s.Skipped
		run.Suites = append(run.Suites, s)
	}
	if _, err := io.WriteString(w, xml.Header); err != nil {
		return err
	}
	e := xml.NewEncoder(w)
	e.Indent("", " ")
	if err := e.Encode(run); err != nil {
		return err
	}
	_, err := io.WriteString(w, "\n")
	return err
}

func junitOf(f *File) junitSuite {
	s := junitSuite{Name: printable(f.Name)}
	if f.Unread() {
		messages := []string{}
		if f.Failure != "" {
			messages = append(messages, printable(f.Failure))
		}
		for _, d := range f.Diagnostics {
			messages = append(messages, printable(d.Error()))
		}
		s.Tests, s.Errors = 1, 1
		s.Cases = []junitCase{{Class: s.Name, Name: "read", Error: &junitMessage{Message: messages[0], Type: "input", Text: strings.Join(messages, "\n")}}}
		return s
	}
	for k := range f.Findings {
		x := &f.Findings[k]
		c := junitCase{Class: x.Check, Name: printable(caseName(x)), File: printable(slashed(x.At.File)), Line: x.At.Line}
		message := &junitMessage{Message: printable(summary(x)), Text: printable(detail(x))}
		switch x.Verdict {
		case checks.Violated:
			message.Type = string(x.Severity)
			c.Failure = message
			s.Failures++
		case checks.Unproven:
			message.Type = string(x.Verdict)
			c.Skipped = message
			s.Skipped++
		default:
			c.Output = message.Message
		}
		s.Tests++
		s.Cases = append(s.Cases, c)
	}
	return s
}

// caseName is unique within a check: the element, and the quantity where there is one.
func caseName(f *Finding) string {
	name := f.Element
	if name == "" {
		name = "circuit"
	}
	if q := f.quantity(); q != "" {
		name += " " + q
	}
	return name
}

// summary tells a finding in one sentence.
func summary(f *Finding) string {
	name := f.Element
	if name == "" {
		name = "circuit"
	}
	text := name + ": " + f.Title + " " + string(f.Verdict)
	if f.Verdict == checks.Violated || f.Verdict == checks.Conceded {
		text += " (" + string(f.Severity) + ")"
	}
	if line := foundLine(f); line != "" {
		text += ", " + inSentence(line)
	}
	if f.Reason != "" {
		text += ": " + f.Reason
	}
	if c := f.Concession; c != nil {
		text += fmt.Sprintf("; conceded until %s, up to %s: %s", c.Until, ceilingWords(c), c.Reason)
	}
	return text
}

// detail tells the rest: condition, limit, need, remedy.
func detail(f *Finding) string {
	var parts []string
	add := func(word, text string) {
		if text != "" {
			parts = append(parts, word+" "+text)
		}
	}
	if f.Stress != nil {
		add("when", whenWords(f.Stress))
	}
	add("limit", limitWords(f))
	if f.Rating != nil {
		add("from", originWords(f.Rating))
	}
	add("note", f.Note)
	add("needs", needWords(f))
	add("fix", f.Remedy)
	return strings.Join(parts, "; ")
}
