package main

import (
	"os"
	"path/filepath"
	"testing"

	"context"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){
		"railproof": func() { os.Exit(run(context.Background(), os.Args[1:], standardStreams())) },
	})
}

// TestScript runs the whole program as testdata/script/*.txtar say. In a script $SAMPLES is the folder of the
// sample supplies, and `exits N program ...` runs a program and asks for its exit status.
func TestScript(t *testing.T) {
	samples, err := filepath.Abs("../../testdata")
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{
		Dir: "../../testdata/script", RequireExplicitExec: true, RequireUniqueNames: true,
		Setup: func(e *testscript.Env) error {
			e.Setenv("SAMPLES", samples)
			return nil
		},
		Cmds: map[string]func(ts *testscript.TestScript, neg bool, args []string){"exits": exits},
	})
}

// exits runs `exits N program args...` and asks for exit status N.
func exits(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: exits STATUS program [args...]")
	}
	err := ts.Exec(args[1], args[2:]...)
	got := 0
	if err != nil {
		status, ok := err.(interface{ ExitCode() int })
		if !ok {
			ts.Fatalf("%v", err)
		}
		got = status.ExitCode()
	}
	if want := args[0]; want != string(rune('0'+got)) {
		ts.Fatalf("exit status %d, want %s", got, want)
	}
}
