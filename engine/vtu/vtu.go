package vtu

import (
	"bufio"
	"encoding/base64"
	"encoding/binary"
	"encoding/xml"
	"fmt"
	"io"
	"math"
	"strings"

	"nearcell/catalog/column"
	"nearcell/voronoi"
)

// polyhedron is the number of the cell type in the files (VTK_POLYHEDRON).
const polyhedron = 42

// rowArray is the name of the array that tells which row of the result a piece is of.
const rowArray = "row"

// exactWhole is the largest whole number up to which float64 has all of them.
const exactWhole = 1 << 53

// TakenError says that a column has the name of an array that every file has, or that
// two columns have the same.
type TakenError struct{ Name string }

func (e *TakenError) Error() string { return "vtu: the name " + e.Name + " is taken" }

// WholeNumberError is a whole number beyond 2^53 in a column with NULLs.
type WholeNumberError struct {
	Column string
	Value  int64
}

func (e *WholeNumberError) Error() string {
	return fmt.Sprintf("vtu: %s has NULLs and the number %d, which float64 does not hold", e.Column, e.Value)
}

// Grid collects cells and writes them.
type Grid struct {
	rows int64

	points       []byte // float64 x, y, z
	connectivity []byte // int64
	offsets      []byte
	faces        []byte
	faceOffsets  []byte
	types        []byte
	of           []byte // row of each piece, int64

	corners, used, faceWords, pieces int64
	perRow                           []int32 // pieces of each row
}

// Cell adds the pieces of the next row: none for a site without a cell.
func (g *Grid) Cell(pieces []voronoi.Piece) {
	g.rows++
	g.perRow = append(g.perRow, int32(len(pieces)))
	for i := range pieces {
		g.piece(&pieces[i])
	}
}

// Rows is how many rows there are so far, Pieces how many polyhedra.
func (g *Grid) Rows() int64   { return g.rows }
func (g *Grid) Pieces() int64 { return g.pieces }

func (g *Grid) piece(p *voronoi.Piece) {
	first := g.corners
	for k, c := range p.Corners {
		for _, x := range [3]float64{c.X, c.Y, c.Z} {
			g.points = binary.LittleEndian.AppendUint64(g.points, math.Float64bits(x))
		}
		g.connectivity = whole(g.connectivity, first+int64(k))
	}
	g.corners += int64(len(p.Corners))
	g.offsets = whole(g.offsets, g.corners)
	g.faces = whole(g.faces, int64(len(p.Faces)))
	g.faceWords++
	for _, f := range p.Faces {
		g.faces = whole(g.faces, int64(len(f.Loop)))
		for _, c := range f.Loop {
			g.faces = whole(g.faces, first+int64(c))
		}
		g.faceWords += 1 + int64(len(f.Loop))
	}
	g.faceOffsets = whole(g.faceOffsets, g.faceWords)
	g.types = append(g.types, polyhedron)
	g.of = whole(g.of, g.rows)
	g.pieces++
}

func whole(b []byte, n int64) []byte { return binary.LittleEndian.AppendUint64(b, uint64(n)) }

// Write writes the grid with the columns of its rows, of which there must be as many as
// cells were added.
func (g *Grid) Write(w io.Writer, schema column.Schema, cols []column.Vector) error {
	taken := map[string]bool{rowArray: true}
	for i, f := range schema {
		if taken[f.Name] {
			return &TakenError{f.Name}
		}
		taken[f.Name] = true
		if int64(cols[i].N) != g.rows {
			return fmt.Errorf("vtu: %d values of %s for %d cells", cols[i].N, f.Name, g.rows)
		}
	}
	out := &file{w: bufio.NewWriterSize(w, 1<<16)}
	out.text("<?xml version=\"1.0\"?>\n<VTKFile type=\"UnstructuredGrid\" version=\"1.0\" byte_order=\"LittleEndian\" header_type=\"UInt64\">\n<UnstructuredGrid>\n")
	out.text(fmt.Sprintf("<Piece NumberOfPoints=\"%d\" NumberOfCells=\"%d\">\n", g.corners, g.pieces))
	out.text("<Points>\n")
	out.array("points", "Float64", 3, g.points)
	out.text("</Points>\n<Cells>\n")
	out.array("connectivity", "Int64", 1, g.connectivity)
	out.array("offsets", "Int64", 1, g.offsets)
	out.array("types", "UInt8", 1, g.types)
	out.array("faces", "Int64", 1, g.faces)
	out.array("faceoffsets", "Int64", 1, g.faceOffsets)
	out.text("</Cells>\n<CellData>\n")
	out.array(rowArray, "Int64", 1, g.of)
	for i, f := range schema {
		if err := g.column(out, f, &cols[i]); err != nil {
			return err
		}
	}
	out.text("</CellData>\n</Piece>\n</UnstructuredGrid>\n</VTKFile>\n")
	if out.err != nil {
		return out.err
	}
	return out.w.Flush()
}

// column writes the values of the rows, each once for every piece of its row.
func (g *Grid) column(out *file, f column.Field, v *column.Vector) error {
	name := f.Name
	if v.Type == column.Text || v.Type == column.Timestamp {
		out.open(name, "String", 1, "ascii")
		g.eachPiece(func(row int) {
			if !v.IsNull(row) {
				text := v.Text
				if v.Type == column.Timestamp {
					text = func(i int) string { return column.FormatTimestamp(v.I[i]) }
				}
				for _, c := range []byte(text(row)) {
					out.text(fmt.Sprintf("%d ", c))
				}
			}
			out.text("0\n")
		})
		out.text("</DataArray>\n")
		return nil
	}
	kind, width := "Float64", 1
	nulls := v.NullCount() > 0
	switch {
	case v.Type == column.Point:
		width = 3
	case v.Type == column.Integer && !nulls:
		kind = "Int64"
	case v.Type == column.Boolean && !nulls:
		kind = "UInt8"
	}
	var data []byte
	var fault error
	g.eachPiece(func(row int) {
		for axis := range width {
			switch {
			case kind == "Int64":
				data = whole(data, v.I[row])
			case kind == "UInt8" && column.Bit(v.Bits, row):
				data = append(data, 1)
			case kind == "UInt8":
				data = append(data, 0)
			default:
				x, err := real(name, v, row, axis)
				if err != nil && fault == nil {
					fault = err
				}
				data = binary.LittleEndian.AppendUint64(data, math.Float64bits(x))
			}
		}
	})
	out.array(name, kind, width, data)
	return fault
}

// real is a value as a float64, NaN for NULL.
func real(name string, v *column.Vector, row, axis int) (float64, error) {
	if v.IsNull(row) {
		return math.NaN(), nil
	}
	switch v.Type {
	case column.Real:
		return v.F[row], nil
	case column.Point:
		return v.F[3*row+axis], nil
	case column.Interval:
		return float64(v.I[row]) / 1e6, nil
	case column.Boolean:
		if column.Bit(v.Bits, row) {
			return 1, nil
		}
		return 0, nil
	case column.Integer:
		if n := v.I[row]; n < -exactWhole || n > exactWhole {
			return 0, &WholeNumberError{name, n}
		}
		return float64(v.I[row]), nil
	}
	return math.NaN(), nil // a column of NULLs
}

func (g *Grid) eachPiece(do func(row int)) {
	for row, n := range g.perRow {
		for range n {
			do(row)
		}
	}
}

// file writes and keeps the first error.
type file struct {
	w   *bufio.Writer
	err error
}

func (f *file) text(s string) {
	if f.err == nil {
		_, f.err = f.w.WriteString(s)
	}
}

func (f *file) open(name, kind string, width int, format string) {
	var escaped strings.Builder
	if err := xml.EscapeText(&escaped, []byte(name)); err != nil && f.err == nil {
		f.err = err
	}
	f.text(fmt.Sprintf("<DataArray type=\"%s\" Name=\"%s\" NumberOfComponents=\"%d\" format=\"%s\">\n", kind, escaped.String(), width, format))
}

// array writes numbers as one block: their size in bytes, and they themselves.
func (f *file) array(name, kind string, width int, data []byte) {
	f.open(name, kind, width, "binary")
	if f.err == nil {
		e := base64.NewEncoder(base64.StdEncoding, f.w)
		_, f.err = e.Write(binary.LittleEndian.AppendUint64(nil, uint64(len(data))))
		if f.err == nil {
			_, f.err = e.Write(data)
		}
		if err := e.Close(); f.err == nil {
			f.err = err
		}
	}
	f.text("\n</DataArray>\n")
}
