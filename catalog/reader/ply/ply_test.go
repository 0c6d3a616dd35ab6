package ply

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"runtime"
	"testing"

	"nearcell/catalog/reader"
)

const body = `comment a tetrahedron
element vertex 4
property float x
property double y
property short z
property uchar red
element camera 1
property list uchar float view
element face 4
property uchar flags
property list uchar int vertex_indices
end_header
`

const text = "ply\nformat ascii 1.0\n" + body + `0 0 0 1
1 0 0 1
0 1 0 1
0 0 1 1
2 5 6
0 3 0 2 1
0 3 0 1 3
0 3 1 2 3
0 3 0 3 2
`

// binaryOf writes the same file with this order of bytes.
func binaryOf(name string, order binary.ByteOrder) []byte {
	var b bytes.Buffer
	b.WriteString("ply\nformat " + name + " 1.0\n" + body)
	put := func(x any) { binary.Write(&b, order, x) }
	for _, p := range [][3]int{{0, 0, 0}, {1, 0, 0}, {0, 1, 0}, {0, 0, 1}} {
		put(float32(p[0]))
		put(float64(p[1]))
		put(int16(p[2]))
		put(uint8(1))
	}
	put(uint8(2))
	put([2]float32{5, 6})
	for _, c := range [][3]int32{{0, 2, 1}, {0, 1, 3}, {1, 2, 3}, {0, 3, 2}} {
		put(uint8(0))
		put(uint8(3))
		put(c)
	}
	return b.Bytes()
}

func TestRead(t *testing.T) {
	for format, data := range map[string][]byte{
		"PLY, text":                     []byte(text),
		"PLY, binary, low bytes first":  binaryOf("binary_little_endian", binary.LittleEndian),
		"PLY, binary, high bytes first": binaryOf("binary_big_endian", binary.BigEndian),
	} {
		m, err := Read(data)
		if err != nil {
			t.Errorf("%s: %v", format, err)
			continue
		}
		if m.Facts.Format != format || !m.Facts.Single || len(m.Corners) != 4 ||
			fmt.Sprint(m.Triangles) != "[[0 2 1] [0 1 3] [1 2 3] [0 3 2]]" || m.Corners[3] != [3]float64{0, 0, 1} {
			t.Errorf("%s: %+v", format, m)
		}
		for cut := len(data) - 1; cut > 0; cut -= 7 {
			var f *reader.MeshFault
			if m, err := Read(data[:cut]); err == nil && len(m.Triangles) == 4 {
				if format != "PLY, text" || cut < len(data)-2 {
					t.Errorf("%s: whole after %d bytes of %d", format, cut, len(data))
				}
			} else if err == nil || !errors.As(err, &f) {
				t.Errorf("%s: cut after %d bytes: %v %v", format, cut, m, err)
			}
		}
	}
}

func TestFaults(t *testing.T) {
	head := "ply\nformat ascii 1.0\nelement vertex 1\nproperty float x\nproperty float y\nproperty float z\n"
	faces := "element face 1\nproperty list uchar int vertex_index\nend_header\n"
	for name, c := range map[string]struct {
		text string
		kind reader.MeshFaultKind
		line int
	}{
		"no end":          {head, reader.MeshCut, 7},
		"a word":          {"ply\nformat ascii 1.0\nhello\n", reader.MeshHeader, 3},
		"a format":        {"ply\nformat morse 1.0\n", reader.MeshHeader, 2},
		"no format":       {"ply\nend_header\n", reader.MeshHeader, 2},
		"a kind":          {"ply\nelement vertex 1\nproperty quaternion x\n", reader.MeshHeader, 3},
		"a count":         {"ply\nelement vertex -1\n", reader.MeshHeader, 2},
		"no z":            {"ply\nformat ascii 1.0\nelement vertex 1\nproperty float x\nproperty float y\nend_header\n1 2\n", reader.MeshNoPlace, 3},
		"no faces":        {head + "end_header\n0 0 0\n", reader.MeshNoFaces, 0},
		"nowhere":         {head + faces + "0 0 nan\n", reader.MeshNotFinite, 10},
		"no number":       {head + faces + "0 0 z\n", reader.MeshNumber, 10},
		"no corner":       {head + faces + "0 0 0\n3 0 0 1\n", reader.MeshIndex, 11},
		"half a corner":   {head + faces + "0 0 0\n3 0 0 0.5\n", reader.MeshNumber, 11},
		"two corners":     {head + faces + "0 0 0\n2 0 0\n", reader.MeshFewCorners, 11},
		"half a length":   {head + faces + "0 0 0\n2.5 0 0\n", reader.MeshNumber, 11},
		"strips":          {head + "element tristrips 1\nproperty list int int vertex_indices\nend_header\n0 0 0\n", reader.MeshKind, 7},
		"faces, no lists": {head + "element face 1\nproperty int a\nend_header\n0 0 0\n1\n", reader.MeshNoPlace, 7},
	} {
		var f *reader.MeshFault
		if _, err := Read([]byte(c.text)); !errors.As(err, &f) || f.Kind != c.kind || f.Line != c.line {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// Headers that promise what the file has not take neither room nor time.
func TestPromises(t *testing.T) {
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	for _, format := range []string{"ascii", "binary_little_endian"} {
		for _, e := range []string{
			"element vertex 9000000000000000000\nproperty float x\nproperty float y\nproperty float z\n",
			"element nothing 9000000000000000000\n",
			"element face 9000000000000000000\nproperty list int int vertex_indices\n",
		} {
			if _, err := Read([]byte("ply\nformat " + format + " 1.0\n" + e + "end_header\n\x7f\x7f\x7f\x7f")); err == nil {
				t.Errorf("%s: %q is read", format, e)
			}
		}
	}
	runtime.ReadMemStats(&after)
	if after.TotalAlloc-before.TotalAlloc > 1<<20 {
		t.Errorf("%d bytes were taken", after.TotalAlloc-before.TotalAlloc)
	}
}

func FuzzRead(f *testing.F) {
	f.Add([]byte(text))
	f.Add(binaryOf("binary_little_endian", binary.LittleEndian))
	f.Add(binaryOf("binary_big_endian", binary.BigEndian))
	f.Fuzz(func(t *testing.T, data []byte) {
		m, err := Read(data)
		if err != nil {
			var fault *reader.MeshFault
			if !errors.As(err, &fault) {
				t.Fatal(err)
			}
			return
		}
		if len(m.Triangles) == 0 || len(m.Triangles) > len(data) {
			t.Fatalf("%d triangles out of %d bytes", len(m.Triangles), len(data))
		}
		for _, c := range m.Triangles {
			for _, k := range c {
				if k < 0 || int(k) >= len(m.Corners) || !reader.Finite(m.Corners[k]) {
					t.Fatal("a triangle without a corner")
				}
			}
		}
	})
}
