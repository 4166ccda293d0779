package main

import (
	"time"

	"github.com/schollz/progressbar/v3"
)

// progress is a bar on the error stream, on a terminal only. It may be stepped from several cores at once.
type progress struct{ bar *progressbar.ProgressBar }

// progressFrom is from how many files a bar is worth the ink.
const progressFrom = 5

// newProgress begins a bar that counts up to n of what is named.
func newProgress(s *streams, n int, what string) *progress {
	return &progress{progressbar.NewOptions(n,
		progressbar.OptionSetWriter(s.err), progressbar.OptionSetVisibility(s.errTerm && n >= progressFrom),
		progressbar.OptionSetDescription(what), progressbar.OptionShowCount(), progressbar.OptionSetElapsedTime(false),
		progressbar.OptionSetWidth(24), progressbar.OptionThrottle(100*time.Millisecond), progressbar.OptionClearOnFinish(), progressbar.OptionUseANSICodes(true),
		progressbar.OptionSetTheme(progressbar.Theme{Saucer: "#", SaucerHead: "#", SaucerPadding: ".", BarStart: "|", BarEnd: "|"}),
	)}
}

// A bar that cannot be drawn is no reason to stop.
func (p *progress) step() { _ = p.bar.Add(1) }

func (p *progress) end() { _ = p.bar.Finish() }
