package main

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"github.com/fsnotify/fsnotify"

	"railproof/netlist"
	"railproof/report"
)

// settleTime is how long files must be quiet before a run: editors write in several steps.
const settleTime = 100 * time.Millisecond

// clearScreen takes the cursor home and clears the screen; what has scrolled off it stays.
const clearScreen = "\x1b[H\x1b[2J"

// watch repeats a run whenever a file it read is saved, until the context ends, and returns the outcome of the last
// whole run. Faults of the input are told, and watching goes on.
type watch struct {
	s       *streams
	o       *checkOptions
	args    []string
	watcher *fsnotify.Watcher
	cleared bool
}

// watchCheck runs `check` once, and again after each save. Wrong usage ends it at once.
func watchCheck(ctx context.Context, s *streams, o *checkOptions, args []string) error {
	if _, err := o.targets(report.Formats()); err != nil {
		return err
	}
	if _, err := o.report(); err != nil {
		return err
	}
	watcher, err := fsnotify.NewWatcher()
	if err != nil {
		return fmt.Errorf("files cannot be watched: %w", err)
	}
	defer watcher.Close()
	w := &watch{s: s, o: o, args: args, watcher: watcher}
	w.o.fresh = w.clear
	if err := w.follow(); err != nil { // before the first run, so that no save is missed
		return err
	}
	outcome := w.run(ctx)
	for w.wait(ctx) {
		if next := w.run(ctx); ctx.Err() == nil {
			outcome = next
		}
	}
	return outcome
}

// run checks once and tells what went wrong, the status aside.
func (w *watch) run(ctx context.Context) error {
	w.cleared = false
	err := checkOnce(ctx, w.s, w.o, w.args)
	if ctx.Err() != nil {
		return err
	}
	var status exitStatus
	if err != nil && !errors.As(err, &status) {
		w.clear()
		w.s.say("railproof: " + err.Error())
		err = exitStatus(report.ExitBadInput)
	}
	if failure := w.follow(); failure != nil {
		w.s.say("railproof: " + failure.Error())
	}
	w.s.say("watching " + counted(len(w.files()), "file") + "; Ctrl-C ends")
	return err
}

// clear begins a fresh screen on a terminal, once a run.
func (w *watch) clear() {
	if w.s.outTerm && !w.cleared {
		fmt.Fprint(w.s.out, clearScreen)
	}
	w.cleared = true
}

// files are those that are read or would be: what was opened so far, and the places of sheets to come.
func (w *watch) files() []string {
	list := w.o.opened.list()
	if w.o.baseline != "" {
		list = append(list, w.o.baseline)
	}
	for _, a := range w.args {
		if info, err := os.Stat(a); err != nil || !info.IsDir() {
			list = append(list, a)
		}
	}
	slices.Sort(list)
	return slices.Compact(list)
}

// follow watches the folders of all files: an editor that saves by renaming puts another file in the place of the
// one that was there. The folder behind a link is watched too.
func (w *watch) follow() error {
	folders := slices.Clone(w.o.include)
	for _, file := range w.files() {
		folders = append(folders, filepath.Dir(file))
		if real, err := filepath.EvalSymlinks(file); err == nil {
			folders = append(folders, filepath.Dir(real))
		}
	}
	for _, a := range w.args {
		if info, err := os.Stat(a); err == nil && info.IsDir() {
			folders = append(folders, a)
		}
	}
	for _, folder := range folders {
		absolute, err := filepath.Abs(folder)
		if err != nil {
			return err
		}
		if err := w.watcher.Add(absolute); err != nil {
			return fmt.Errorf("%s cannot be watched: %w", folder, err)
		}
	}
	return nil
}

// wait blocks until a save has settled; false when the context ends or the watcher does.
func (w *watch) wait(ctx context.Context) bool {
	var settled <-chan time.Time
	for {
		select {
		case <-ctx.Done():
			return false
		case <-settled:
			return true
		case event, open := <-w.watcher.Events:
			if !open {
				return false
			}
			if w.concerns(event) {
				settled = time.After(settleTime)
			}
		case err, open := <-w.watcher.Errors:
			if !open {
				return false
			}
			w.s.say("railproof: " + err.Error())
			settled = time.After(settleTime) // saves may have been missed
		}
	}
}

// concerns reports whether an event is the save of a file that is read, or of one that would be: a sheet that
// was not there, and in a folder to check another netlist.
func (w *watch) concerns(event fsnotify.Event) bool {
	if event.Op == fsnotify.Chmod {
		return false
	}
	changed := event.Name
	if filepath.Base(changed) == netlist.SharedSheet && !w.o.noShared {
		return true
	}
	ending := strings.ToLower(filepath.Ext(changed))
	for _, a := range w.args {
		info, err := os.Stat(a)
		if err == nil && info.IsDir() && slices.Contains(netlistEndings, ending) && within(a, changed) {
			return true
		}
	}
	for _, file := range w.files() {
		sheet := strings.TrimSuffix(file, filepath.Ext(file)) + ".duty"
		if samePath(file, changed) || samePath(sheet, changed) {
			return true
		}
	}
	return false
}

// within reports whether a path stands in a folder or below it.
func within(folder, path string) bool {
	absolute, err := filepath.Abs(folder)
	if err != nil {
		return false
	}
	inside, err := filepath.Rel(absolute, path)
	return err == nil && filepath.IsLocal(inside)
}

// samePath reports whether a file as named is an absolute path, itself or behind a link.
func samePath(file, absolute string) bool {
	if a, err := filepath.Abs(file); err == nil && a == absolute {
		return true
	}
	real, err := filepath.EvalSymlinks(file)
	if err != nil {
		return false
	}
	a, err := filepath.Abs(real)
	return err == nil && a == absolute
}

func counted(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}
