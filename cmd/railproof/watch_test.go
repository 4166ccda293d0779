package main

import (
	"bytes"
	"context"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
	"time"
)

// page is a stream whose text can be waited for.
type page struct {
	mutex   sync.Mutex
	text    bytes.Buffer
	written chan struct{}
}

func newPage() *page { return &page{written: make(chan struct{}, 1)} }

func (p *page) Write(b []byte) (int, error) {
	p.mutex.Lock()
	defer p.mutex.Unlock()
	p.text.Write(b)
	select {
	case p.written <- struct{}{}:
	default:
	}
	return len(b), nil
}

func (p *page) String() string {
	p.mutex.Lock()
	defer p.mutex.Unlock()
	return p.text.String()
}

// await waits until a text stands n times, and fails after a minute.
func (p *page) await(t *testing.T, text string, n int) {
	t.Helper()
	limit := time.After(time.Minute)
	for strings.Count(p.String(), text) < n {
		select {
		case <-p.written:
		case <-limit:
			t.Fatalf("%q does not stand %d times in\n%s", text, n, p)
		}
	}
}

// watched is a run of `check --watch` in a folder of its own.
type watched struct {
	out, err *page
	stop     context.CancelFunc
	status   chan int
}

func startWatch(t *testing.T, terminal bool, args ...string) *watched {
	t.Helper()
	ctx, cancel := context.WithCancel(context.Background())
	w := &watched{newPage(), newPage(), cancel, make(chan int, 1)}
	s := streams{out: w.out, err: w.err, outTerm: terminal, environment: func(string) (string, bool) { return "", false }}
	go func() {
		w.status <- run(ctx, append([]string{"check", "--watch", "--proven", "--color", "never"}, args...), s)
	}()
	t.Cleanup(cancel)
	return w
}

func (w *watched) end(t *testing.T) int {
	t.Helper()
	w.stop()
	select {
	case status := <-w.status:
		return status
	case <-time.After(time.Minute):
		t.Fatal("the watch does not end")
		return 0
	}
}

const watchedSupply = "Divider\n.include part.inc\nV1 a 0 10\nR1 a b 500 P70=1\n"

// put writes a file in place; replace puts another file in its place, as many editors do.
func put(t *testing.T, name, text string) {
	t.Helper()
	if err := os.WriteFile(name, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
}

func replace(t *testing.T, name, text string) {
	t.Helper()
	put(t, name+"~", text)
	if err := os.Rename(name+"~", name); err != nil {
		t.Fatal(err)
	}
}

// Each save of a netlist, of what it includes and of its sheets is checked, in whatever way it is saved; a faulty
// input is told and watching goes on; the status is that of the last check.
func TestWatch(t *testing.T) {
	t.Chdir(t.TempDir())
	if err := os.Mkdir("boards", 0o755); err != nil {
		t.Fatal(err)
	}
	put(t, ".git", "")
	put(t, "railproof.duty", "ambient 0C..41C\npolicy house.csv\n")
	put(t, "house.csv", "quantity,factor,source,confidence\nresistor-power,0.5,our own rule,stated\n")
	put(t, "boards/a.cir", watchedSupply)
	put(t, "boards/part.inc", "R2 b 0 500 P70=1\n")
	w := startWatch(t, false, filepath.FromSlash("boards/a.cir"))
	w.err.await(t, "Ctrl-C ends", 1)
	for _, step := range []struct {
		save       func(t *testing.T, name, text string)
		name, text string
		shown      *page
		want       string
	}{
		{put, "boards/a.cir", strings.Replace(watchedSupply, "Divider", "Second", 1), w.out, "Second"},
		{replace, "boards/a.cir", strings.Replace(watchedSupply, "Divider", "Third", 1), w.out, "Third"},
		{replace, "railproof.duty", "ambient 0C..42C\npolicy house.csv\n", w.out, "0..42 degC"},
		{replace, "house.csv", "quantity,factor\nresistor-power,5\n", w.err, "house.csv:2:"},
		{replace, "house.csv", "quantity,factor,source,confidence\nresistor-power,0.51,our own rule,stated\n", w.out, "510 mW"},
		{put, "boards/a.duty", "ambient 0C..43C\n", w.out, "0..43 degC"},
		{replace, "boards/part.inc", "R3 b 0 500 P70=1\n", w.out, "R3"},
		{put, "boards/part.inc", "R4 b 0 500\nR5 b\n", w.err, filepath.FromSlash("boards/part.inc:2:")},
	} {
		step.save(t, filepath.FromSlash(step.name), step.text)
		step.shown.await(t, step.want, 1)
	}
	for _, name := range []string{"R6", "R7"} { // once the second stands, the first run is over
		replace(t, filepath.FromSlash("boards/part.inc"), name+" b 0 500 P70=1\n")
		w.out.await(t, name, 1)
	}
	if status := w.end(t); status != 0 {
		t.Errorf("status %d\n%s", status, w.out)
	}
	if strings.Contains(w.out.String(), "\x1b") {
		t.Error("what is no terminal is cleared")
	}
}

// The status is that of the last check, here of a faulty input; on a terminal each run begins a fresh screen.
func TestWatchEndsWithTheLastStatus(t *testing.T) {
	t.Chdir(t.TempDir())
	put(t, "a.cir", "Divider\nV1 a 0 10\nR1 a 0 500 P70=1\n")
	w := startWatch(t, true, "a.cir")
	w.err.await(t, "Ctrl-C ends", 1)
	replace(t, "a.cir", "Divider\nV1 a\n")
	w.err.await(t, "Ctrl-C ends", 2)
	if status := w.end(t); status != 2 {
		t.Errorf("status %d", status)
	}
	if n := strings.Count(w.out.String(), clearScreen); n != 2 {
		t.Errorf("the screen is cleared %d times for 2 runs", n)
	}
	if !strings.Contains(w.err.String(), "a.cir:2:") {
		t.Error(w.err.String())
	}
}

// A netlist that is new in a folder to check is taken up; a file that is not there yet is waited for.
func TestWatchFolder(t *testing.T) {
	t.Chdir(t.TempDir())
	put(t, "a.cir", "Divider\nV1 a 0 10\nR1 a 0 500 P70=1\n")
	w := startWatch(t, false, ".", "later.cir")
	w.err.await(t, "Ctrl-C ends", 1)
	put(t, "later.cir", "Latecomer\nV1 a 0 10\nR1 a 0 500 P70=1\n")
	w.out.await(t, "Latecomer", 1)
	put(t, "b.cir", "Newcomer\nV1 a 0 10\nR1 a 0 500 P70=1\n")
	w.out.await(t, "Newcomer", 1)
	w.end(t)
}

func TestWatchRefusesWrongUsage(t *testing.T) {
	t.Chdir(t.TempDir())
	w := startWatch(t, false, "--format", "yaml", "a.cir")
	select {
	case status := <-w.status:
		if status != 2 {
			t.Errorf("status %d", status)
		}
	case <-time.After(time.Minute):
		t.Fatal("it watches")
	}
}
