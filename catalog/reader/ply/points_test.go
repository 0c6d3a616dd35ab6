package ply

import (
	"bytes"
	"context"
	"encoding/binary"
	"errors"
	"fmt"
	"math"
	"testing"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

func readRows(data string) (*reader.Result, error) {
	return Reader{}.Read(context.Background(), &reader.Source{Name: "p.ply", Data: []byte(data)}, reader.Options{})
}

func head(format string, n int) string {
	return fmt.Sprintf("ply\nformat %s 1.0\ncomment made for a test\nelement camera 1\nproperty float w\nelement vertex %d\nproperty double x\nproperty float y\nproperty uchar red\n"+
		"property list uchar int near\nproperty int class\nelement face 1\nproperty list uchar int vertex_indices\nend_header\n", format, n)
}

func binaryPoints(order binary.AppendByteOrder) string {
	b := order.AppendUint32(nil, math.Float32bits(9))
	for i := range 2 {
		b = order.AppendUint64(b, math.Float64bits(0.1+float64(i)))
		b = order.AppendUint32(b, math.Float32bits(2.5))
		b = append(b, 255, 2)
		b = order.AppendUint32(order.AppendUint32(b, 7), 8)
		b = order.AppendUint32(b, uint32(0xFFFFFFFF))
	}
	b = append(b, 3)
	for range 3 {
		b = order.AppendUint32(b, 0)
	}
	return string(b)
}

func TestPoints(t *testing.T) {
	for name, data := range map[string]string{
		"text":       head("ascii", 2) + "9\n0.1 2.5 255 2 7 8 -1\n1.1 2.5 255 2 7 8 -1\n3 0 0 0\n",
		"low first":  head("binary_little_endian", 2) + binaryPoints(binary.LittleEndian),
		"high first": head("binary_big_endian", 2) + binaryPoints(binary.BigEndian),
	} {
		r, err := readRows(data)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		want := "x REAL 0.1 1.1; y REAL 2.5 2.5; red INTEGER 255 255; class INTEGER -1 -1; "
		got := ""
		for i, f := range r.Table.Schema {
			got += fmt.Sprint(f.Name, " ", f.Type)
			for row := range r.Table.N {
				if v := r.Table.Cols[i].Value(row); v.Type == column.Real {
					got += fmt.Sprint(" ", v.F)
				} else {
					got += fmt.Sprint(" ", v.I)
				}
			}
			got += "; "
		}
		if got != want {
			t.Errorf("%s gives\n%s, want\n%s", name, got, want)
		}
		if r.Facts.Unread != 2 || len(r.Facts.Columns) != 1 || r.Facts.Columns[0].Column != "near" {
			t.Errorf("%s: told of %d others and %v", name, r.Facts.Unread, r.Facts.Columns)
		}
	}
}

func TestPointFaults(t *testing.T) {
	small := "ply\nformat ascii 1.0\nelement vertex 3\nproperty float x\nproperty uchar c\nend_header\n"
	for name, c := range map[string]struct {
		data string
		kind reader.FaultKind
		line int
	}{
		"cut":          {small + "1 2\n3 4\n5", reader.CutShort, 9},
		"a word":       {small + "1 2\nx 4\n5 6\n", reader.NotANumber, 8},
		"a fraction":   {small + "1 2\n3 4.5\n5 6\n", reader.NotANumber, 8},
		"out of range": {small + "1 2\n3 256\n5 6\n", reader.NotANumber, 8},
		"infinite":     {small + "1 2\n3 4\ninf 6\n", reader.NotFinite, 9},
		"twice":        {"ply\nformat ascii 1.0\nelement vertex 1\nproperty float x\nproperty float x\nend_header\n1 2\n", reader.HeadingRepeated, 3},
		"no vertices":  {"ply\nformat ascii 1.0\nelement face 0\nproperty list uchar int a\nend_header\n", reader.NothingToRead, 0},
		"other":        {"x,y\n1,2\n", reader.NotTheFormat, 0},
		"empty":        {"", reader.EmptyFile, 0},
		"lies":         {"ply\nformat binary_little_endian 1.0\nelement vertex 9000000000000\nproperty double x\nend_header\n12345678", reader.CutShort, 0},
	} {
		_, err := readRows(c.data)
		var faults *reader.Faults
		if !errors.As(err, &faults) || faults.List[0].Kind != c.kind || faults.List[0].Line != c.line {
			t.Errorf("%s: %v, want %s in line %d", name, err, c.kind, c.line)
		}
	}
	r, err := readRows(small + "1 2\nnan 4\n5 6\n")
	if err != nil || r.Facts.Missing[0] != 1 || r.Facts.Columns[0].Kind != reader.NaNMissing {
		t.Errorf("NaN: %v", err)
	}
}

func FuzzPoints(f *testing.F) {
	f.Add([]byte(head("ascii", 2) + "9\n0.1 2.5 255 2 7 8 -1\n1.1 2.5 255 2 7 8 -1\n3 0 0 0\n"))
	f.Add([]byte(head("binary_little_endian", 2) + binaryPoints(binary.LittleEndian)))
	f.Add([]byte(head("binary_big_endian", 2) + binaryPoints(binary.BigEndian)))
	f.Fuzz(func(t *testing.T, data []byte) {
		r, err := readRows(string(bytes.Clone(data)))
		var faults *reader.Faults
		if err != nil && !errors.As(err, &faults) {
			t.Fatal(err)
		}
		if err == nil {
			if err := r.Table.Validate(); err != nil {
				t.Fatal(err)
			}
		}
	})
}
