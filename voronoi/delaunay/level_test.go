package delaunay

import (
	"fmt"
	"math/rand/v2"
	"os"
	"os/exec"
	"runtime"
	"strings"
	"testing"
)

// levelRun marks the run of TestPrints inside TestOtherLevel.
const levelRun = "NEARCELL_LEVEL_RUN"

// prints are the fingerprints of every kind of set, one a line.
func prints(t *testing.T) string {
	everyRoundParallel(t)
	var b strings.Builder
	for _, kind := range kindNames() {
		sites := kinds[kind](rand.New(rand.NewPCG(3, 9)), 700)
		for threads := 1; threads <= 3; threads++ {
			d := build(t, sites, threads)
			fmt.Fprintf(&b, "print %s %d %d %016x\n", strings.ReplaceAll(kind, " ", "-"), threads, d.NumTets(), d.Fingerprint())
		}
	}
	return b.String()
}

func TestPrints(t *testing.T) {
	if os.Getenv(levelRun) == "" {
		t.Skip("run by TestOtherLevel")
	}
	fmt.Print(prints(t))
}

// TestOtherLevel compares the sets with those of the other instruction level: v1
// rounds every product, v3 lets the compiler fuse x*y + z. Bounds differ in their last
// bits, decisions must not.
func TestOtherLevel(t *testing.T) {
	if os.Getenv(levelRun) != "" {
		t.Skip("this is the run at the other level")
	}
	if runtime.GOARCH != "amd64" {
		t.Skip("GOAMD64 means nothing on " + runtime.GOARCH)
	}
	current, err := exec.Command("go", "env", "GOAMD64").Output()
	if err != nil {
		t.Skipf("no go command here to build the tests again with: %v", err)
	}
	level := "v3"
	if strings.TrimSpace(string(current)) == "v3" {
		level = "v1"
	}
	cmd := exec.Command("go", "test", "-count=1", "-p=1", "-v", "-run", "^TestPrints$", ".")
	cmd.Env = append(os.Environ(), "GOAMD64="+level, levelRun+"=1")
	out, err := cmd.CombinedOutput()
	if strings.Contains(string(out), "This program can only be run on AMD64 processors with") {
		t.Skipf("this processor does not have GOAMD64=%s", level)
	}
	if err != nil {
		t.Fatalf("under GOAMD64=%s: %v\n%s", level, err, out)
	}
	var other strings.Builder
	for line := range strings.Lines(string(out)) {
		if strings.HasPrefix(line, "print ") {
			other.WriteString(line)
		}
	}
	if mine := prints(t); mine != other.String() {
		t.Errorf("sets differ under GOAMD64=%s:\n%s\nhere:\n%s", level, other.String(), mine)
	}
}
