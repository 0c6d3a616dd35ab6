package predicate

import (
	"os"
	"os/exec"
	"runtime"
	"strings"
	"testing"
)

// levelRun marks the run of the tests inside the test below, which must not start
// another one.
const levelRun = "NEARCELL_LEVEL_RUN"

// TestOtherLevel runs the tests of the geometry's kernels once more at the other
// instruction level: v1 rounds every product, v3 lets the compiler fuse x*y + z.
// Error-free sums, bounds and cuts must survive both.
func TestOtherLevel(t *testing.T) {
	if os.Getenv(levelRun) != "" {
		t.Skip("this is the run at the other level")
	}
	if runtime.GOARCH != "amd64" {
		t.Skip("GOAMD64 means nothing on " + runtime.GOARCH)
	}
	if _, err := exec.LookPath("go"); err != nil {
		t.Skip("no go command here to build the tests again with")
	}
	current, err := exec.Command("go", "env", "GOAMD64").Output()
	if err != nil {
		t.Skipf("go env: %v", err)
	}
	level := "v3"
	if strings.TrimSpace(string(current)) == "v3" {
		level = "v1"
	}
	cmd := exec.Command("go", "test", "-count=1", "-p=1", ".", "../polyhedron", "../solid")
	cmd.Env = append(os.Environ(), "GOAMD64="+level, levelRun+"=1")
	out, err := cmd.CombinedOutput()
	if strings.Contains(string(out), "This program can only be run on AMD64 processors with") {
		t.Skipf("this processor does not have GOAMD64=%s", level)
	}
	if err != nil {
		t.Fatalf("under GOAMD64=%s: %v\n%s", level, err, out)
	}
	t.Logf("under GOAMD64=%s:\n%s", level, out)
}
