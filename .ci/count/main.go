// Command count reads the event stream of `go test -json` on standard input,
// prints what a person wants to read of it and closes with the line
//
//	N passed, N failed, N skipped
//
// One line is printed for each package. The output of a failing test, of a
// package that does not build and of a package that dies outside its tests is
// shown; that of a passing test is not, except for the words of a test that
// skipped itself. A test with subtests counts through its subtests; by itself it
// counts only where it fails although none of them does. A package that fails
// without a failing test counts as one failure.
//
// With -last the closing line is written to the named file instead, so that the
// caller can print it after everything else. The exit code is 1 if anything
// failed or if no test passed, since an empty run must not look like a good one.
package main

import (
	"bufio"
	"encoding/json"
	"flag"
	"fmt"
	"io"
	"os"
	"strings"
)

// event is one line of the stream as `go doc test2json` describes it; the build
// events carry ImportPath in place of Package.
type event struct {
	Action     string
	Package    string
	ImportPath string
	Test       string
	Elapsed    float64
	Output     string
	FailedPkg  string `json:"FailedBuild"`
}

// run is what is known of one test, or of a package outside its tests.
type run struct {
	output      []string
	subtests    bool
	failedBelow bool
}

type counter struct {
	out                     io.Writer
	passed, failed, skipped int
	runs                    map[string]*run     // by package and test
	failedIn                map[string]int      // failures counted, by package
	build                   map[string][]string // what the compiler said, by import path
}

func main() {
	last := flag.String("last", "", "write the closing line to this file")
	flag.Parse()
	c := &counter{out: os.Stdout, runs: map[string]*run{}, failedIn: map[string]int{}, build: map[string][]string{}}
	if err := c.read(os.Stdin); err != nil {
		fmt.Fprintln(os.Stderr, "count:", err)
		os.Exit(1)
	}
	line := fmt.Sprintf("%d passed, %d failed, %d skipped\n", c.passed, c.failed, c.skipped)
	if *last == "" {
		fmt.Print(line)
	} else if err := os.WriteFile(*last, []byte(line), 0o644); err != nil {
		fmt.Fprintln(os.Stderr, "count:", err)
		os.Exit(1)
	}
	if c.failed > 0 || c.passed == 0 {
		os.Exit(1)
	}
}

func (c *counter) read(in io.Reader) error {
	lines := bufio.NewReader(in)
	for {
		line, err := lines.ReadString('\n')
		if strings.HasPrefix(line, "{") {
			var e event
			if json.Unmarshal([]byte(line), &e) == nil {
				c.take(e)
				line = ""
			}
		}
		// What is no event was written by something below the test binary; it
		// is shown rather than lost.
		fmt.Fprint(c.out, line)
		if err == io.EOF {
			return nil
		}
		if err != nil {
			return err
		}
	}
}

func (c *counter) take(e event) {
	switch {
	case e.Action == "build-output":
		c.build[e.ImportPath] = append(c.build[e.ImportPath], e.Output)
	case e.Package == "":
	case e.Test == "":
		c.takePackage(e)
	default:
		c.takeTest(e)
	}
}

func (c *counter) takeTest(e event) {
	r := c.run(e.Package, e.Test)
	switch e.Action {
	case "run":
		for _, above := range parents(e.Test) {
			c.run(e.Package, above).subtests = true
		}
		return
	case "output":
		r.output = append(r.output, e.Output)
		return
	case "pass":
		if !r.subtests {
			c.passed++
		}
	case "skip":
		if !r.subtests {
			c.skipped++
			c.show("skipped: "+e.Package+" "+e.Test, r.output)
		}
	case "fail":
		if !r.failedBelow {
			c.failed++
			c.failedIn[e.Package]++
		}
		for _, above := range parents(e.Test) {
			c.run(e.Package, above).failedBelow = true
		}
		c.show("FAILED: "+e.Package+" "+e.Test, r.output)
	default:
		return
	}
	delete(c.runs, e.Package+" "+e.Test)
}

func (c *counter) takePackage(e event) {
	r := c.run(e.Package, "")
	switch e.Action {
	case "output":
		r.output = append(r.output, e.Output)
	case "pass":
		fmt.Fprintf(c.out, "ok      %s  %.1f s\n", e.Package, e.Elapsed)
	case "skip":
		fmt.Fprintf(c.out, "        %s  no test files\n", e.Package)
	case "fail":
		c.unfinished(e.Package)
		if e.FailedPkg != "" {
			c.show("DOES NOT BUILD: "+e.FailedPkg, c.build[e.FailedPkg])
			delete(c.build, e.FailedPkg) // said once, counted for each package that needs it
		}
		if c.failedIn[e.Package] == 0 {
			c.failed++
			c.show("FAILED outside its tests: "+e.Package, r.output)
		}
		fmt.Fprintf(c.out, "FAIL    %s  %.1f s\n", e.Package, e.Elapsed)
	}
}

// unfinished shows the tests that were running when the package died (a panic, a
// time limit): they never get an end event of their own.
func (c *counter) unfinished(pkg string) {
	for key, r := range c.runs {
		name, ok := strings.CutPrefix(key, pkg+" ")
		if !ok || name == "" || r.subtests {
			continue
		}
		c.failed++
		c.failedIn[pkg]++
		c.show("NOT FINISHED: "+key, r.output)
		delete(c.runs, key)
	}
}

func (c *counter) run(pkg, test string) *run {
	key := pkg + " " + test
	r := c.runs[key]
	if r == nil {
		r = &run{}
		c.runs[key] = r
	}
	return r
}

func (c *counter) show(heading string, output []string) {
	fmt.Fprintln(c.out, "---- "+heading)
	for _, line := range output {
		fmt.Fprint(c.out, "  "+line)
	}
}

// parents are the tests of which the named one is a subtest, nearest last.
func parents(test string) []string {
	var above []string
	for i := range len(test) {
		if test[i] == '/' {
			above = append(above, test[:i])
		}
	}
	return above
}
