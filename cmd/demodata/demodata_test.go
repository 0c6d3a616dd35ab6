package main

import (
	"bytes"
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"testing"
	"time"
)

// The files in the repository are those the generator makes, byte by byte, on
// every machine and at every level of the compiler.
func TestCommittedFiles(t *testing.T) {
	files, err := generate()
	if err != nil {
		t.Fatal(err)
	}
	if len(files) != 30 {
		t.Fatalf("%d files, want 30", len(files))
	}
	for _, f := range files {
		committed, err := os.ReadFile(filepath.Join("..", "..", "testdata", "demo", f.name))
		if err != nil {
			t.Error(err)
			continue
		}
		if !bytes.Equal(committed, f.text) {
			t.Errorf("%s differs from what the generator makes, first in line %d: run `go run ./cmd/demodata`", f.name, firstDifference(committed, f.text))
		}
	}
}

func firstDifference(a, b []byte) int {
	line := 1
	for i := 0; i < len(a) && i < len(b) && a[i] == b[i]; i++ {
		if a[i] == '\n' {
			line++
		}
	}
	return line
}

func TestWriteLeavesOldFilesWhereFolderIsMissing(t *testing.T) {
	if err := write(filepath.Join(t.TempDir(), "absent")); err == nil {
		t.Error("writing into a folder that does not exist succeeded")
	}
}

func TestFence(t *testing.T) {
	for _, c := range []struct {
		v       float64
		perUnit int
		want    int
		text    string
		tie     bool
	}{
		{4.237, 100, 424, "4.24", false},
		{-0.037, 100, -4, "-0.04", false},
		{-12.34, 10, -123, "-12.3", false},
		{0.5, 1, 1, "1", true},
		{2.125, 100, 213, "2.13", true},
		{2.125 + 1e-12, 100, 213, "2.13", true},
		{2.125 + 1e-9, 100, 213, "2.13", false},
		{math.NaN(), 100, 0, "", true},
	} {
		var f fence
		got := f.steps(c.v, c.perUnit)
		if (f.err != nil) != c.tie {
			t.Errorf("%v: error %v, want a tie: %v", c.v, f.err, c.tie)
		}
		if math.IsNaN(c.v) {
			continue
		}
		if got != c.want {
			t.Errorf("%v: %d steps of 1/%d, want %d", c.v, got, c.perUnit, c.want)
		}
		if text := decimal(got, c.perUnit); text != c.text {
			t.Errorf("%v: written %q, want %q", c.v, text, c.text)
		}
	}
}

// The sequence of PCG is fixed by its algorithm; if this changes, every file does.
func TestStreamsDiffer(t *testing.T) {
	a, b := newStream(1), newStream(2)
	same := 0
	sum, squares := 0.0, 0.0
	for range 20000 {
		u, v := a.uniform(), b.uniform()
		if u == v {
			same++
		}
		if u < 0 || u >= 1 {
			t.Fatalf("uniform gave %v", u)
		}
		x := a.bell()
		sum += x
		squares += x * x
	}
	if same > 0 {
		t.Errorf("two streams agree in %d numbers", same)
	}
	if mean, sd := sum/20000, math.Sqrt(squares/20000); math.Abs(mean) > 0.03 || math.Abs(sd-1) > 0.02 {
		t.Errorf("bell has mean %v and deviation %v", mean, sd)
	}
}

// table is a generated file taken apart again.
func table(t *testing.T, name string) [][]string {
	t.Helper()
	files, err := generate()
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range files {
		if f.name == name {
			rows, err := csv.NewReader(bytes.NewReader(f.text)).ReadAll()
			if err != nil {
				t.Fatal(err)
			}
			return rows[1:]
		}
	}
	t.Fatalf("there is no file %s", name)
	return nil
}

func number(t *testing.T, text string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

func sites(t *testing.T, name string) map[string]point {
	all := map[string]point{}
	for _, r := range table(t, name) {
		all[r[0]] = point{number(t, r[1]), number(t, r[2]), number(t, r[3])}
	}
	return all
}

func TestSites(t *testing.T) {
	for name, outside := range map[string]string{"sites.csv": "L17", "sites2.csv": ""} {
		all := sites(t, name)
		if len(all) != 54 {
			t.Errorf("%s: %d loggers, want 54", name, len(all))
		}
		east := 0
		for id, p := range all {
			if inside(p, 0.1) == (id == outside) {
				t.Errorf("%s: %s at %v; only %q belongs outside the walls", name, id, p, outside)
			}
			if p.x > 20 {
				east++
			}
		}
		// The hall's air east of x = 20 m is 120 of 456 m² of floor.
		if share := float64(east) / 54; share < 0.45 {
			t.Errorf("%s: only %.2f of the loggers crowd in the east, which is %.2f of the hall", name, share, 120.0/456)
		}
	}
}

func TestLog(t *testing.T) {
	rows := table(t, "log.csv")
	last := map[string]string{}
	got := map[string]int{}
	lost := 0
	for _, r := range rows {
		last[r[1]] = r[0]
		got[r[1]]++
		if r[2] == "" {
			lost++
		} else if v := number(t, r[2]); v < -2 || v > 25 {
			t.Errorf("%v: not the temperature of a chilled store", r)
		}
	}
	for id, n := range got {
		want, until := 672, "2031-04-13T23:45:00Z"
		if id == "L38" {
			want, until = 4*96+47, "2031-04-11T11:30:00Z"
		}
		if n != want || last[id] != until {
			t.Errorf("%s: %d rows until %s, want %d until %s", id, n, last[id], want, until)
		}
	}
	if len(got) != 54 {
		t.Errorf("%d loggers, want 54", len(got))
	}
	if lost < 20 || lost > 70 {
		t.Errorf("%d readings lost, want a few dozen", lost)
	}
	if second := table(t, "log2.csv"); len(second) != 54*168 {
		t.Errorf("the second log has %d rows, want %d", len(second), 54*168)
	}
}

func TestWalk(t *testing.T) {
	rows := table(t, "walk.csv")
	if len(rows) != 1200 {
		t.Errorf("%d readings, want 1200", len(rows))
	}
	atDoor := 0
	var before time.Time
	for _, r := range rows {
		p := point{number(t, r[2]), number(t, r[3]), number(t, r[4])}
		if !inside(p, 0.02) {
			t.Errorf("reading %s at %v is not in the hall", r[0], p)
		}
		if math.Hypot(p.x-door.x, p.y-door.y) < 5 {
			atDoor++
		}
		at, err := time.Parse(time.RFC3339, r[1])
		if err != nil || !at.After(before) {
			t.Errorf("reading %s at %s: %v, not later than the one before", r[0], r[1], err)
		}
		before = at
	}
	if share := float64(atDoor) / 1200; share < 0.3 {
		t.Errorf("only %.2f of the walk was taken within 5 m of the dock door", share)
	}
}
