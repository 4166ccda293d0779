package report

import (
	"bytes"
	"crypto/sha256"
	"embed"
	"encoding/base64"
	"fmt"
	"html/template"
	"io"
	"strings"

	"railproof/checks"
)

//go:embed page/*
var pageFiles embed.FS

// page is what the template of the HTML report is filled with. Every text in it is escaped there.
type page struct {
	Policy             string // Content-Security-Policy
	Style              template.CSS
	Script             template.JS
	Word, Why, Heading string
	Class, Version     string
	Counts             []pageCount
	Files              []pageFile
	Cautions           []string
}

type pageCount struct {
	Number      int
	Word, Class string
}

type pageFile struct {
	Index                       int
	Name, Title, Short, Class   string
	Faults                      []string
	Line, Load, Ambient, Policy string
	Rails                       []railDrawing
	Entries                     []pageEntry
	Needed                      []Needed
	NeededNote                  string
	Statements                  []string
	Rows                        []pageRow
	Waves                       []*waveDrawing // of what is proven
	Assumptions                 []string
	NotRead                     []string
	Sources                     []string
	JudgedBy                    string
}

type pageEntry struct {
	Label, Class, Name, Title, Found string
	Bar                              bar
	Wave                             *waveDrawing
	Lines                            []pageLine
	Items                            []string // of a group that waits for one thing
}

type pageLine struct{ Word, Text string }

// WriteHTML writes the report as one self-contained page: no network, readable with scripts off, printable.
func (r *Report) WriteHTML(w io.Writer) error {
	style, script := pageText("page.css"), pageText("page.js")
	word, why := r.Outcome()
	p := page{
		Policy: "default-src 'none'; base-uri 'none'; form-action 'none'; style-src " + hashOf(style) + "; script-src " + hashOf(script),
		Style:  template.CSS(style), Script: template.JS(script), // both are embedded files
		Word: word, Why: capital(why) + ".", Heading: r.heading(), Class: r.Exit.class(), Version: r.Version,
		Counts: countsOf(r.Totals), Cautions: Cautions,
	}
	for k := range r.Files {
		p.Files = append(p.Files, newPageFile(k+1, &r.Files[k]))
	}
	t, err := template.New("page.html").ParseFS(pageFiles, "page/page.html")
	if err != nil {
		return err
	}
	var b bytes.Buffer
	if err := t.Execute(&b, p); err != nil {
		return err
	}
	_, err = w.Write(b.Bytes())
	return err
}

func pageText(name string) string {
	text, err := pageFiles.ReadFile("page/" + name)
	if err != nil {
		panic(err) // it is embedded
	}
	return string(text)
}

// hashOf is the source expression of a Content-Security-Policy that admits exactly this text.
func hashOf(text string) string {
	sum := sha256.Sum256([]byte(text))
	return "'sha256-" + base64.StdEncoding.EncodeToString(sum[:]) + "'"
}

func (r *Report) heading() string {
	if len(r.Files) == 1 {
		return printable(joinWith(r.Files[0].Name, r.Files[0].Title, ", "))
	}
	return counted(len(r.Files), "netlist")
}

func (e Exit) class() string {
	switch e {
	case ExitPassed:
		return "proven"
	case ExitUnproven:
		return "unproven"
	}
	return "critical"
}

func countsOf(t Totals) []pageCount {
	return []pageCount{
		{t.Critical, "critical", lit(t.Critical, "critical")}, {t.Major, "major", lit(t.Major, "major")}, {t.Minor, "minor", lit(t.Minor, "minor")},
		{t.Unproven, "unproven", lit(t.Unproven, "unproven")}, {t.Proven, "proven", lit(t.Proven, "proven")}, {t.Conceded, "conceded", lit(t.Conceded, "conceded")},
	}
}

// lit gives a count its colour unless it is zero.
func lit(n int, class string) string {
	if n == 0 {
		return "none"
	}
	return class
}

func newPageFile(index int, f *File) pageFile {
	c := f.Circumstances
	p := pageFile{
		Index: index, Name: printable(f.Name), Title: printable(f.Title),
		Line: printable(c.Line), Load: printable(c.Load), Ambient: printable(c.Ambient), Policy: printable(c.Policy),
		Needed: f.Needed(), NeededNote: doubtNote(f.Needed()), Statements: f.Statements(), Assumptions: foldAssumptions(f), NotRead: f.NotRead,
		JudgedBy: capital(printable(strings.Join(f.judgedBy(), ", "))),
	}
	if f.Failure != "" {
		p.Faults = append(p.Faults, printable(f.Failure))
	}
	for _, d := range f.Diagnostics {
		p.Faults = append(p.Faults, printable(d.Error()))
	}
	p.Short, p.Class = f.short()
	p.Rails = drawRails(f)
	p.Entries = entriesOf(f)
	for k := range f.Findings {
		p.Rows = append(p.Rows, newPageRow(k, &f.Findings[k]))
	}
	p.Sources, p.Waves = sourcesOf(f), provenWaves(f)
	return p
}

// short is the worst of a file in a word or two.
func (f *File) short() (word, class string) {
	if f.Unread() {
		return "not checked", "critical"
	}
	for _, s := range severities {
		if n := f.Totals.of(s); n > 0 {
			return fmt.Sprintf("%d %s", n, s), string(s)
		}
	}
	if n := f.Totals.Unproven; n > 0 {
		return fmt.Sprintf("%d unproven", n), "unproven"
	}
	return "proven", "proven"
}

// entriesOf lists violations, what is unproven, and what is conceded, in the order of the ledger.
func entriesOf(f *File) []pageEntry {
	var violated, conceded, list []pageEntry
	for _, x := range fold(f.Findings) {
		switch x.Verdict {
		case checks.Violated:
			violated = append(violated, newPageEntry(&x))
		case checks.Conceded:
			conceded = append(conceded, newPageEntry(&x))
		}
	}
	list = violated
	for _, group := range unprovenGroups(f) {
		if len(group) == 1 {
			list = append(list, newPageEntry(&group[0]))
			continue
		}
		e := pageEntry{Label: string(checks.Unproven), Class: string(checks.Unproven), Title: printable(groupWords(group)), Items: groupLines(group)}
		if needs := needWords(&group[0].Finding); needs != "" {
			e.Lines = []pageLine{{"needs", printable(needs)}}
		}
		list = append(list, e)
	}
	return append(list, conceded...)
}

func newPageEntry(x *Folded) pageEntry {
	e := pageEntry{Label: labelOf(&x.Finding), Class: classOf(&x.Finding), Name: printable(x.Name()), Title: x.Title + strings.TrimPrefix(stateTail(x), " "), Found: inSentence(foundLine(&x.Finding)), Bar: newBar(&x.Finding)}
	if x.Verdict != checks.Unproven {
		e.Wave = drawWave(x)
	}
	add := func(word, text string) {
		if text != "" {
			e.Lines = append(e.Lines, pageLine{word, printable(text)})
		}
	}
	add("limit", limitWords(&x.Finding))
	if x.Rating != nil {
		add("from", joinWith(originWords(x.Rating), x.Rating.Source, "; "))
	}
	add("why", x.forAll(x.Reason))
	if x.Stress != nil {
		add("when", whenWords(x.Stress))
	}
	add("note", x.forAll(x.Note))
	if x.Verdict == checks.Unproven {
		add("needs", x.forAll(needWords(&x.Finding)))
		add("but", doubtWords(&x.Finding))
	}
	add("at", placeWords(x))
	if c := x.Concession; c != nil {
		add("until", c.Until+", up to "+ceilingWords(c)+": "+c.Reason+" ("+c.At.String()+")")
	}
	if x.Verdict == checks.Violated {
		add("fix", x.forAll(x.Remedy))
	}
	return e
}

func labelOf(f *Finding) string {
	if f.Verdict == checks.Violated {
		return string(f.Severity)
	}
	if f.NearLimit() {
		return "near limit"
	}
	return string(f.Verdict)
}

func classOf(f *Finding) string {
	if f.Verdict == checks.Violated {
		return string(f.Severity)
	}
	return string(f.Verdict)
}

// sourcesOf lists the publications behind the ratings and limits of a file, each once.
func sourcesOf(f *File) []string {
	var list []string
	seen := map[string]bool{"": true}
	add := func(text string) {
		if !seen[text] {
			seen[text] = true
			list = append(list, printable(text))
		}
	}
	for k := range f.Findings {
		x := &f.Findings[k]
		if x.Rating != nil && x.Rating.Source != "" {
			add(string(x.Rating.Symbol) + ", " + x.Rating.Origin + ": " + x.Rating.Source)
		}
		if x.Limit != nil && x.Limit.Source != "" && x.Limit.Policy != "" {
			add("policy " + x.Limit.Policy + ", " + x.Limit.Rule + ": " + x.Limit.Source)
		}
	}
	return list
}
