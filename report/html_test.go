package report

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
	"time"

	"railproof/checks"
)

func TestHTMLHostileNames(t *testing.T) {
	const evil = `"><script>alert(1)</script><img src=x onerror=alert(2)>`
	r := benchResult(t)
	r.Title, r.RailMap[0], r.Circumstances.Load = evil, evil, evil
	r.Findings[0].Element, r.Findings[0].Remedy, r.Findings[0].Note = evil, evil, evil
	r.Findings[5].Needs.Symbol = evil
	r.Assumptions[0].Value = evil
	r.NotRead[0] = evil
	text := string(written(t, New([]Input{{File: evil, Result: r}}, Options{Now: day}), "html", Style{}))
	if strings.Contains(text, "<img") || strings.Count(text, "<script>") != 1 {
		t.Error("a name became markup")
	}
}

// The page asks for nothing from outside, and its policy would not let it.
func TestHTMLIsSelfContained(t *testing.T) {
	text := string(written(t, benchReport(t), "html", Style{}))
	for _, pattern := range []string{`(?i)\bsrc\s*=`, `(?i)url\(`, `@import`, `(?i)https?:`, `\bstyle\s*=`, `\bon[a-z]+\s*=`, `href="[^#]`} {
		if found := regexp.MustCompile(pattern).FindString(text); found != "" {
			t.Errorf("%q stands in the page", found)
		}
	}
	if !strings.Contains(text, `content="default-src &#39;none&#39;;`) {
		t.Error("no strict Content-Security-Policy")
	}
	for _, c := range Cautions {
		if !strings.Contains(text, strings.Split(c, ".")[0]) {
			t.Errorf("the page does not carry the caution %q", c)
		}
	}
}

// chromium runs a page and returns the document after its scripts and what the console said.
func chromium(t *testing.T, page []byte, width string) (document, console string) {
	t.Helper()
	program, err := exec.LookPath("chromium")
	if err != nil {
		t.Skipf("THE HTML REPORT WAS NOT RUN IN A BROWSER: no chromium on this machine (apt-get install chromium)")
	}
	folder := t.TempDir()
	file := filepath.Join(folder, "page.html")
	if err := os.WriteFile(file, page, 0o666); err != nil {
		t.Fatal(err)
	}
	command := exec.Command(program, "--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking", "--enable-logging=stderr",
		"--user-data-dir="+filepath.Join(folder, "profile"), "--window-size="+width+",1600", "--timeout=20000", "--dump-dom", "file://"+file)
	var out, log bytes.Buffer
	command.Stdout, command.Stderr = &out, &log
	if err := command.Start(); err != nil {
		t.Fatal(err)
	}
	timer := time.AfterFunc(time.Minute, func() { _ = command.Process.Kill() })
	err = command.Wait()
	timer.Stop()
	if err != nil {
		t.Fatalf("chromium: %v\n%s", err, log.String())
	}
	var lines []string
	for _, line := range strings.Split(log.String(), "\n") {
		if strings.Contains(line, "CONSOLE") {
			lines = append(lines, line)
		}
	}
	return out.String(), strings.Join(lines, "\n")
}

func TestHTMLInABrowser(t *testing.T) {
	page := written(t, benchReport(t), "html", Style{})
	document, console := chromium(t, page, "1280")
	if console != "" {
		t.Errorf("the console is not silent:\n%s", console)
	}
	if n := strings.Count(document, `<button type="button">`); n != 9 {
		t.Errorf("%d sort buttons, want one for each of the 9 columns: did the script run under the policy?", n)
	}
	if strings.Contains(string(page), "<button") {
		t.Error("buttons that do nothing stand in the page as written")
	}
	// A control: a script that the policy does not name must be refused, and the console must say so.
	_, console = chromium(t, bytes.Replace(page, []byte("</body>"), []byte("<script>document.title = 'x'</script></body>"), 1), "1280")
	if !strings.Contains(console, "Content Security Policy") {
		t.Errorf("a foreign script was let through: %q", console)
	}
}

// Sorting by a column puts its rows in order, back to front at the second press, empty cells last.
func TestHTMLSorting(t *testing.T) {
	const press = `const b=document.querySelectorAll("thead button");`
	for _, c := range []struct {
		script string
		want   string
	}{
		{press + `b[4].click()`, "R1;D1;D2;D3;D4;DZ1;R1;circuit;C1;V1"},              // margin: -29 %, -4.5 % four times, 3.3 %, 42 %, none
		{press + `b[4].click();b[4].click()`, "R1;DZ1;D1;D2;D3;D4;R1;circuit;C1;V1"}, // the other way round
		{press + `b[0].click()`, "circuit;V1;D1;D2;D3;D4;C1;R1;R1;DZ1"},              // netlist order
	} {
		page := string(written(t, benchReport(t), "html", Style{}))
		page = strings.Replace(page, "script-src ", "script-src "+strings.ReplaceAll(hashOf(c.script), "'", "&#39;")+" ", 1)
		page = strings.Replace(page, "</body>", "<script>"+c.script+"</script></body>", 1)
		document, console := chromium(t, []byte(page), "1280")
		if console != "" {
			t.Fatal(console)
		}
		table := document[strings.Index(document, `class="sortable"`):]
		var names []string
		for _, m := range regexp.MustCompile(`<th scope="row" data-key="-?\d+">([^<]*)</th>`).FindAllStringSubmatch(table, -1) {
			names = append(names, m[1])
		}
		if got := strings.Join(names, ";"); got != c.want {
			t.Errorf("after %s the rows are %s, want %s", c.script, got, c.want)
		}
	}
}

// Of the bar, stress and limit are drawn to one scale: 41.8 V against 40 V and 50 V.
func TestBar(t *testing.T) {
	r := benchReport(t)
	for k := range r.Files[0].Findings {
		f := &r.Files[0].Findings[k]
		if f.Element != "D1" {
			continue
		}
		// 50 V is the largest and takes 0.94 of 160: 150.4; 41.8/50 and 40/50 of that.
		if b := newBar(f); b.Rating != "150.4" || b.Stress != "125.7" || b.Limit != "120.3" {
			t.Errorf("%+v", b)
		}
	}
}

// Findings that wait for one and the same thing share an entry, in every format for people.
func TestGroupOfUnproven(t *testing.T) {
	r := benchResult(t)
	for k := range r.Findings {
		if f := &r.Findings[k]; f.Verdict != checks.Proven && f.Check != "after-end" {
			f.Verdict, f.Severity, f.Reason, f.Needs, f.Remedy = checks.Unproven, "", "the subcircuit FOO is not defined", nil, ""
		}
	}
	rep := New([]Input{{File: r.File, Result: r}}, Options{Now: day})
	for _, format := range []string{"text", "html", "markdown"} {
		text := string(written(t, rep, format, Style{}))
		if !strings.Contains(text, "7 findings: the subcircuit FOO is not defined") || !strings.Contains(text, "(headline): D1..D4") {
			t.Errorf("%s does not gather them:\n%s", format, text)
		}
	}
}
