package main

import (
	"bufio"
	"bytes"
	"fmt"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
	"time"

	"nearcell/engine/diagram"
)

// program is the test binary as the program itself, in a folder.
func program(folder string, args ...string) *exec.Cmd {
	return &exec.Cmd{Path: os.Args[0], Args: append([]string{"nearcell"}, args...), Dir: folder}
}

// ran runs the program to its end and gives what it printed.
func ran(t *testing.T, folder string, args ...string) (out, errOut string) {
	t.Helper()
	p := program(folder, args...)
	var o, e bytes.Buffer
	p.Stdout, p.Stderr = &o, &e
	if err := p.Run(); err != nil {
		t.Fatalf("%v: %v\n%s", args, err, e.String())
	}
	return o.String(), e.String()
}

// scatter writes a campaign large enough for its diagram to be kept.
func scatter(t *testing.T, path string) {
	t.Helper()
	f, err := os.Create(path)
	if err != nil {
		t.Fatal(err)
	}
	w := bufio.NewWriter(f)
	r := rand.New(rand.NewPCG(1, 2))
	fmt.Fprintln(w, "id,x,y,z")
	for i := range diagram.KeptFrom {
		fmt.Fprintf(w, "s%05d,%.3f,%.3f,%.3f\n", i, 30*r.Float64(), 18*r.Float64(), 7*r.Float64())
	}
	if err := w.Flush(); err != nil {
		t.Fatal(err)
	}
	if err := f.Close(); err != nil {
		t.Fatal(err)
	}
}

// killedScript imports a campaign anew, has its diagram computed and kept, and saves.
const killedScript = `
CREATE OR REPLACE CAMPAIGN hall FROM 'sites.csv' WITHIN BOX (0, 0, 0) TO (30, 18, 7);
DROP DIAGRAMS;
SAVE SELECT id, volume FROM CELLS OF hall TO 'saved.csv' OVERWRITE;
CREATE OR REPLACE TABLE other AS (SELECT id, x FROM hall);
`

// TestKilledAnywhere kills the program at random moments of imports, builds, keeping and
// saving. Whenever that is, the next run finds whole objects, answers as if nothing had
// been, needs no repair, and the saved file is whole. NEARCELL_KILLS says how many times.
func TestKilledAnywhere(t *testing.T) {
	kills := 4
	if n, err := strconv.Atoi(os.Getenv("NEARCELL_KILLS")); err == nil {
		kills = n
	}
	folder := t.TempDir()
	scatter(t, filepath.Join(folder, "sites.csv"))
	if err := os.WriteFile(filepath.Join(folder, "all.ncell"), []byte(killedScript), 0o666); err != nil {
		t.Fatal(err)
	}
	start := time.Now()
	ran(t, folder, "run", "all.ncell")
	whole := time.Since(start)
	saved, err := os.ReadFile(filepath.Join(folder, "saved.csv"))
	if err != nil {
		t.Fatal(err)
	}
	const ask = "SELECT COUNT(*), SUM(volume), SUM(area) FROM CELLS OF hall; SELECT COUNT(*) FROM other;"
	want, _ := ran(t, folder, "--no-catalog", "--as", "csv", "ask",
		"CREATE CAMPAIGN hall FROM 'sites.csv' WITHIN BOX (0, 0, 0) TO (30, 18, 7); CREATE TABLE other AS (SELECT id, x FROM hall);"+ask)

	seed := uint64(time.Now().UnixNano())
	r := rand.New(rand.NewPCG(seed, 0))
	for kill := range kills {
		p := program(folder, "run", "all.ncell")
		if err := p.Start(); err != nil {
			t.Fatal(err)
		}
		at := time.Duration(r.Float64() * float64(whole))
		time.Sleep(at)
		p.Process.Kill()
		p.Wait()
		got, notes := ran(t, folder, "--as", "csv", "ask", ask)
		if got != want || strings.Contains(notes, "damaged") {
			t.Fatalf("seed %d, kill %d after %v:\n%s\n%s\nexpected\n%s", seed, kill, at, got, notes, want)
		}
		if now, err := os.ReadFile(filepath.Join(folder, "saved.csv")); err != nil || !bytes.Equal(now, saved) {
			t.Fatalf("seed %d, kill %d after %v: the saved file is not whole (%v)", seed, kill, at, err)
		}
	}
	ran(t, folder, "run", "all.ncell")
	left, err := filepath.Glob(filepath.Join(folder, ".nearcell", "*", "*.new"))
	if deeper, _ := filepath.Glob(filepath.Join(folder, ".nearcell", "diagrams", "columns", "*.new")); err != nil || len(left)+len(deeper) > 0 {
		t.Errorf("left behind: %v %v %v", left, deeper, err)
	}
}

// A disk without room keeps no diagram and answers all the same.
func TestFullDiskKeepsNoDiagram(t *testing.T) {
	disk := smallDisk(t, "1200k")
	sites := filepath.Join(t.TempDir(), "sites.csv")
	scatter(t, sites)
	catalog := filepath.Join(disk, "catalog")
	code, _, e := call("--catalog", catalog, "ask", "CREATE CAMPAIGN hall FROM '"+sites+"' WITHIN BOX (0, 0, 0) TO (30, 18, 7);")
	if code != exitFine {
		t.Fatal(e)
	}
	for range 2 {
		code, out, e := call("--catalog", catalog, "--as", "csv", "ask", "SELECT COUNT(*) AS n, ROUND(SUM(volume), 6) AS v FROM CELLS OF hall;")
		if code != exitFine || !strings.Contains(out, "20000,3780") || !strings.Contains(e, "no room for it on the disk") {
			t.Errorf("exit code %d, %s, %s", code, out, e)
		}
	}
	code, out, e := call("--catalog", catalog, "--as", "csv", "ask", "LIST DIAGRAMS; SELECT COUNT(*) AS n FROM hall;")
	if code != exitFine || strings.Count(out, "\n") > 5 || !strings.Contains(out, "20000") {
		t.Errorf("exit code %d, %s, %s", code, out, e)
	}
}
