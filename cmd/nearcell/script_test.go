package main

import (
	"errors"
	"flag"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){
		"nearcell": func() { os.Exit(execute(os.Args[1:], os.Stdin, os.Stdout, os.Stderr)) },
	})
}

var rewrite = flag.Bool("rewrite", false, "write what the program prints into the scripts")

// TestScripts runs the stories in testdata/script, each in a folder of its own.
// $DEMO and $REFERENCE are the project's folders of test data. Nothing that a story says
// depends on the number of threads, which is that of the processors that Go uses.
func TestScripts(t *testing.T) {
	if *rewrite {
		scriptsWith(t, "1")
		return
	}
	for _, threads := range []string{"1", "2", "4"} {
		t.Run(threads+" threads", func(t *testing.T) { scriptsWith(t, threads) })
	}
}

func scriptsWith(t *testing.T, threads string) {
	demo, err := filepath.Abs("../../testdata/demo")
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{
		Dir:           "testdata/script",
		UpdateScripts: *rewrite,
		Setup: func(e *testscript.Env) error {
			e.Setenv("DEMO", demo)
			e.Setenv("GOMAXPROCS", threads)
			e.Setenv("REFERENCE", filepath.Join(filepath.Dir(demo), "reference"))
			return nil
		},
		Cmds: map[string]func(*testscript.TestScript, bool, []string){"exits": exits, "damage": damage},
	})
}

// exits CODE COMMAND… runs a command that must end with exactly that code.
func exits(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) < 2 {
		ts.Fatalf("usage: exits CODE COMMAND…")
	}
	want, err := strconv.Atoi(args[0])
	ts.Check(err)
	got := 0
	var failed *exec.ExitError
	if err := ts.Exec(args[1], args[2:]...); errors.As(err, &failed) {
		got = failed.ExitCode()
	} else {
		ts.Check(err)
	}
	if got != want {
		ts.Fatalf("exit code %d, wanted %d", got, want)
	}
}

// damage PATTERN flips a bit in the middle of the one file that the pattern names.
func damage(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 1 {
		ts.Fatalf("usage: damage PATTERN")
	}
	files, err := filepath.Glob(ts.MkAbs(args[0]))
	ts.Check(err)
	if len(files) != 1 {
		ts.Fatalf("%s names %d files", args[0], len(files))
	}
	data, err := os.ReadFile(files[0])
	ts.Check(err)
	data[len(data)/2] ^= 1
	ts.Check(os.WriteFile(files[0], data, 0o600))
}
