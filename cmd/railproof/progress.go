package main

import (
	"fmt"
	"sync"
)

// progress counts finished files on the error stream, on a terminal only.
type progress struct {
	s          *streams
	mutex      sync.Mutex
	done, from int
}

// progressFrom is from how many files a count is worth the ink.
const progressFrom = 5

func newProgress(s *streams, files int) *progress { return &progress{s: s, from: files} }

func (p *progress) shown() bool { return p.s.errTerm && p.from >= progressFrom }

func (p *progress) step() {
	p.mutex.Lock()
	defer p.mutex.Unlock()
	p.done++
	if p.shown() {
		fmt.Fprintf(p.s.err, "\r%d of %d files", p.done, p.from)
	}
}

func (p *progress) end() {
	if p.shown() {
		fmt.Fprint(p.s.err, "\r\x1b[K")
	}
}
