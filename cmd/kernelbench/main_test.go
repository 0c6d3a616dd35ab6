package main

import (
	"bytes"
	"encoding/binary"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"testing"
)

func write(t *testing.T, xyz ...float64) string {
	t.Helper()
	var b []byte
	for _, x := range xyz {
		b = binary.LittleEndian.AppendUint64(b, math.Float64bits(x))
	}
	name := filepath.Join(t.TempDir(), "sites.f64")
	if err := os.WriteFile(name, b, 0o666); err != nil {
		t.Fatal(err)
	}
	return name
}

func TestLine(t *testing.T) {
	// A square pyramid with its apex twice: two tetrahedra, five vertices.
	name := write(t, 0, 0, 0, 2, 0, 0, 0, 2, 0, 2, 2, 0, 1, 1, 1.5, 1, 1, 1.5)
	var prints [2]string
	for i, args := range [][]string{{name}, {"-threads", "2", name}} {
		var out, complaints bytes.Buffer
		if err := run(args, &out, &complaints); err != nil {
			t.Fatal(err)
		}
		var line struct {
			Lib, Mode, Fingerprint string
			Threads, Points        int
			Vertices, Tets         int
			Seconds                float64
			CPU                    float64 `json:"cpu_seconds"`
			Start                  int64   `json:"rss_start"`
			Peak                   int64   `json:"peak_rss"`
		}
		d := json.NewDecoder(&out)
		d.DisallowUnknownFields()
		if err := d.Decode(&line); err != nil {
			t.Fatal(err)
		}
		if line.Points != 6 || line.Vertices != 5 || line.Tets != 2 || line.Threads != i+1 || line.Lib != "nearcell" {
			t.Errorf("%v: %+v", args, line)
		}
		prints[i] = line.Fingerprint
	}
	if prints[0] != prints[1] || len(prints[0]) != 16 {
		t.Errorf("fingerprints %q", prints)
	}
}

func TestComplaints(t *testing.T) {
	short := filepath.Join(t.TempDir(), "short.f64")
	if err := os.WriteFile(short, make([]byte, 25), 0o666); err != nil {
		t.Fatal(err)
	}
	for _, args := range [][]string{
		{}, {"a", "b"}, {short}, {"a", "-threads", "0"}, {"no-such-file"}, {"a", "-what"},
		{write(t, 1, 2, math.NaN())},
	} {
		if err := run(args, &bytes.Buffer{}, &bytes.Buffer{}); err == nil {
			t.Errorf("%v: no error", args)
		}
	}
}

// The cells of the corners of a box and its middle fill it; a repeated site has none.
func TestCells(t *testing.T) {
	name := write(t, 0, 0, 0, 2, 0, 0, 0, 2, 0, 2, 2, 0, 0, 0, 2, 2, 0, 2, 0, 2, 2, 2, 2, 2, 1, 1, 1, 2, 2, 2)
	cells := filepath.Join(t.TempDir(), "cells.f64")
	for _, args := range [][]string{{name, "-cells", cells}, {name, "-cells", cells, "-measures", "-threads", "2"}} {
		var out, complaints bytes.Buffer
		if err := run(args, &out, &complaints); err != nil {
			t.Fatal(err)
		}
		var line struct {
			Total float64 `json:"cells_total"`
		}
		if err := json.Unmarshal(out.Bytes(), &line); err != nil || line.Total != 8 {
			t.Errorf("%s gives %v, %v", out.Bytes(), line, err)
		}
		b, err := os.ReadFile(cells)
		if err != nil || len(b) != 80 {
			t.Fatalf("%d bytes, %v", len(b), err)
		}
		for i := range 10 {
			v, want := math.Float64frombits(binary.LittleEndian.Uint64(b[8*i:])), 0.5
			switch {
			case i == 8: // a truncated octahedron of half the box
				want = 4
			case i == 9:
				if !math.IsNaN(v) {
					t.Errorf("a repeated site has the volume %v", v)
				}
				continue
			}
			if math.Abs(v-want) > 1e-15 {
				t.Errorf("cell %d has the volume %v, want %v", i, v, want)
			}
		}
	}
	if err := run([]string{name, "-cells", filepath.Join(name, "x")}, &bytes.Buffer{}, &bytes.Buffer{}); err == nil {
		t.Error("cells are written into a file that is no folder")
	}
}
