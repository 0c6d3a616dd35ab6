package vtu_test

import (
	"bytes"
	"context"
	"encoding/json"
	"encoding/xml"
	"errors"
	"io"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/vtu"
	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

// room is an L with sites in it, one of them outside, and columns of every type.
func room(t *testing.T) (*vtu.Grid, column.Schema, []column.Vector, []float64) {
	t.Helper()
	body, err := solid.NewPrism([]solid.Vec2{{}, {X: 30}, {X: 30, Y: 12}, {X: 18, Y: 12}, {X: 18, Y: 18}, {Y: 18}}, nil, 0, 7.5)
	if err != nil {
		t.Fatal(err)
	}
	sites := []voronoi.Vec{{X: 2, Y: 3, Z: 1}, {X: 17, Y: 10, Z: 2}, {X: 40, Y: 1, Z: 1}, {X: 28, Y: 2, Z: 5}, {X: 16, Y: 17, Z: 6}}
	d, err := voronoi.New(sites, voronoi.Options{Solid: body})
	if err != nil {
		t.Fatal(err)
	}
	pieces, err := d.Pieces(context.Background(), nil)
	if err != nil {
		t.Fatal(err)
	}
	cells, err := d.Measure(context.Background(), voronoi.Volume, nil)
	if err != nil {
		t.Fatal(err)
	}
	g := &vtu.Grid{}
	volume, id := column.NewBuilder(column.Real, nil), column.NewBuilder(column.Text, nil)
	level, ok := column.NewBuilder(column.Integer, nil), column.NewBuilder(column.Boolean, nil)
	for i := range pieces {
		g.Cell(pieces[i])
		volume.AppendFloat(cells.Volume[i])
		id.AppendText("L<" + string(rune('1'+i)) + "ü")
		if i == 3 {
			level.AppendNull()
		} else {
			level.AppendInt(int64(i))
		}
		ok.AppendBool(i%2 == 0)
	}
	s := column.Schema{{Name: "volume", Type: column.Real}, {Name: "id", Type: column.Text}, {Name: `le"vel`, Type: column.Integer}, {Name: "ok", Type: column.Boolean}}
	return g, s, []column.Vector{volume.Finish(), id.Finish(), level.Finish(), ok.Finish()}, cells.Volume
}

// The file is XML, and always the same.
func TestFileIsXML(t *testing.T) {
	var first, second bytes.Buffer
	for _, out := range []*bytes.Buffer{&first, &second} {
		g, s, cols, _ := room(t)
		if err := g.Write(out, s, cols); err != nil {
			t.Fatal(err)
		}
	}
	if !bytes.Equal(first.Bytes(), second.Bytes()) {
		t.Error("the same cells gave other bytes")
	}
	arrays := 0
	for d := xml.NewDecoder(&first); ; {
		token, err := d.Token()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			t.Fatal(err)
		}
		if e, ok := token.(xml.StartElement); ok && e.Name.Local == "DataArray" {
			arrays++
		}
	}
	if want := 1 + 5 + 1 + 4; arrays != want {
		t.Errorf("%d arrays, want %d", arrays, want)
	}
}

func TestTakenNames(t *testing.T) {
	var taken *vtu.TakenError
	if err := new(vtu.Grid).Write(io.Discard, column.Schema{{Name: "row"}}, make([]column.Vector, 1)); !errors.As(err, &taken) {
		t.Errorf("a column called row: %v", err)
	}
}

// VTK's own reader finds the cells, their attributes, and polyhedra with the volumes of
// the cells, which it works out by its own means.
func TestVTKReadsIt(t *testing.T) {
	python := withVTK()
	if python == "" {
		t.Skip("python3 with vtkmodules (python3-vtk9) is not installed")
	}
	g, s, cols, volumes := room(t)
	path := filepath.Join(t.TempDir(), "cells.vtu")
	f, err := os.Create(path)
	if err != nil {
		t.Fatal(err)
	}
	if err := g.Write(f, s, cols); err != nil {
		t.Fatal(err)
	}
	if err := f.Close(); err != nil {
		t.Fatal(err)
	}
	text, err := exec.Command(python, "-c", readByVTK, path).Output()
	if err != nil {
		t.Fatal(err)
	}
	var got struct {
		Cells   int64
		Types   []int
		Row, Ok []int
		Measure []float64
		Volume  []float64
		ID      []string
		Level   []*float64
	}
	if err := json.Unmarshal(text, &got); err != nil {
		t.Fatalf("%v in %s", err, text)
	}
	if got.Cells != g.Pieces() || int64(len(got.Row)) != got.Cells {
		t.Fatalf("%d cells and %d rows, want %d", got.Cells, len(got.Row), g.Pieces())
	}
	sum := make([]float64, len(volumes))
	for i, row := range got.Row {
		if got.Types[i] != 42 {
			t.Errorf("piece %d has the type %d", i, got.Types[i])
		}
		if got.Volume[i] != volumes[row-1] || got.ID[i] != "L<"+string(rune('0'+row))+"ü" || got.Ok[i] != row%2 {
			t.Errorf("piece %d of row %d: volume %v, id %q, ok %d", i, row, got.Volume[i], got.ID[i], got.Ok[i])
		}
		if level := got.Level[i]; row == 4 && level != nil || row != 4 && (level == nil || *level != float64(row-1)) {
			t.Errorf("piece %d of row %d: level %v", i, row, level)
		}
		sum[row-1] += got.Measure[i]
	}
	for i, want := range volumes {
		if math.IsNaN(want) {
			want = 0
		}
		if math.Abs(sum[i]-want) > 1e-4*want { // their measure of size is single precision
			t.Errorf("row %d: polyhedra of %g, a cell of %g", i+1, sum[i], want)
		}
	}
}

func withVTK() string {
	for _, name := range []string{"python3", "/usr/bin/python3"} {
		if path, err := exec.LookPath(name); err == nil && exec.Command(path, "-c", "import vtkmodules").Run() == nil {
			return path
		}
	}
	return ""
}

const readByVTK = `
import json, math, sys
from vtkmodules.vtkIOXML import vtkXMLUnstructuredGridReader
from vtkmodules.vtkFiltersVerdict import vtkCellSizeFilter
r = vtkXMLUnstructuredGridReader()
r.SetFileName(sys.argv[1])
r.Update()
g = r.GetOutput()
s = vtkCellSizeFilter()
s.SetInputData(g)
s.Update()
d, n = g.GetCellData(), g.GetNumberOfCells()
def numbers(a):
    return [None if math.isnan(a.GetTuple1(i)) else a.GetTuple1(i) for i in range(n)]
ids = d.GetAbstractArray("id")
print(json.dumps({
    "Cells": n, "Types": [g.GetCellType(i) for i in range(n)],
    "Row": [int(x) for x in numbers(d.GetArray("row"))], "Ok": [int(x) for x in numbers(d.GetArray("ok"))],
    "Volume": numbers(d.GetArray("volume")), "Level": numbers(d.GetArray('le"vel')), "ID": [ids.GetValue(i) for i in range(n)],
    "Measure": numbers(s.GetOutput().GetCellData().GetArray("Volume")),
}))
`
