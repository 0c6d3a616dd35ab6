package stl

import (
	"bytes"
	"encoding/binary"
	"errors"
	"math"
	"runtime"
	"testing"

	"nearcell/catalog/reader"
)

const oneFacet = `solid a room
  facet normal nan nan nan
    outer loop
      vertex 0 0 0
      vertex 1.5e0 0 0
      VERTEX 0 -2 .5
    endloop
  endfacet
endsolid a room
`

// binaryOf writes triangles as a binary file whose header promises said of them.
func binaryOf(said uint32, triangles ...[3][3]float32) []byte {
	var b bytes.Buffer
	b.Write(append([]byte("solid, but binary"), make([]byte, 63)...))
	binary.Write(&b, binary.LittleEndian, said)
	for _, t := range triangles {
		binary.Write(&b, binary.LittleEndian, [3]float32{})
		binary.Write(&b, binary.LittleEndian, t)
		b.Write([]byte{0, 0})
	}
	return b.Bytes()
}

var facet = [3][3]float32{{0, 0, 0}, {1.5, 0, 0}, {0, -2, 0.5}}

func TestText(t *testing.T) {
	m, err := Read([]byte(oneFacet + oneFacet))
	if err != nil {
		t.Fatal(err)
	}
	if len(m.Triangles) != 2 || m.Facts.Solids != 2 || m.Facts.Single || m.Facts.Format != "STL, text" ||
		m.Corners[5] != [3]float64{0, -2, 0.5} || m.Triangles[1] != [3]int32{3, 4, 5} {
		t.Errorf("%+v", m)
	}
	for name, c := range map[string]struct {
		text string
		kind reader.MeshFaultKind
		line int
	}{
		"cut":            {oneFacet[:60], reader.MeshCut, 4},
		"a word":         {"solid\nfacet normal 0 0 1\nouter hoop\n", reader.MeshWord, 3},
		"no number":      {"solid\nfacet normal 0 0 1\nouter loop\nvertex 1 2 x\n", reader.MeshNumber, 4},
		"not finite":     {"solid\nfacet normal 0 0 1\nouter loop\nvertex 1 2 NaN\n", reader.MeshNotFinite, 4},
		"beyond numbers": {"solid\nfacet normal 0 0 1\nouter loop\nvertex 1 2 1e999\n", reader.MeshNotFinite, 4},
		"empty":          {"solid\nendsolid\n", reader.MeshNoFaces, 0},
		"too many":       {"solid\nfacet normal 0 0 1\nouter loop\nvertex 1 2 3\nvertex 1 2 3\nvertex 1 2 3\nvertex 1 2 3\n", reader.MeshWord, 7},
	} {
		var f *reader.MeshFault
		if _, err := Read([]byte(c.text)); !errors.As(err, &f) || f.Kind != c.kind || f.Line != c.line {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func TestBinary(t *testing.T) {
	m, err := Read(binaryOf(2, facet, facet))
	if err != nil {
		t.Fatal(err)
	}
	if len(m.Triangles) != 2 || !m.Facts.Single || m.Facts.Format != "STL, binary" || m.Corners[5] != [3]float64{0, -2, 0.5} {
		t.Errorf("%+v", m)
	}
	var f *reader.MeshFault
	if _, err := Read(binaryOf(3, facet, facet)); !errors.As(err, &f) || f.Kind != reader.MeshCut && f.Kind != reader.MeshWord {
		t.Errorf("a file cut short: %v", err)
	}
	bad := facet
	bad[1][1] = float32(math.NaN())
	if _, err := Read(binaryOf(1, bad)); !errors.As(err, &f) || f.Kind != reader.MeshNotFinite {
		t.Errorf("a corner nowhere: %v", err)
	}
	if _, err := Read(binaryOf(0)); !errors.As(err, &f) || f.Kind != reader.MeshNoFaces {
		t.Errorf("no triangle: %v", err)
	}
	named := append([]byte{1}, binaryOf(1, facet, facet)[1:]...) // the header is not text
	if m, err := Read(named); err != nil || m.Facts.Skipped != 50 || len(m.Triangles) != 1 {
		t.Errorf("bytes behind the triangles: %v %v", m, err)
	}
}

// A header that promises four thousand million triangles makes no room for them.
func TestPromises(t *testing.T) {
	data := append([]byte{1}, binaryOf(math.MaxUint32, facet)[1:]...)
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	if _, err := Read(data); err == nil {
		t.Error("a file of one triangle that promises more is read")
	}
	runtime.ReadMemStats(&after)
	if after.TotalAlloc-before.TotalAlloc > 1<<20 {
		t.Errorf("%d bytes were taken", after.TotalAlloc-before.TotalAlloc)
	}
}

func FuzzRead(f *testing.F) {
	f.Add([]byte(oneFacet))
	f.Add(binaryOf(1, facet))
	f.Add(binaryOf(math.MaxUint32, facet))
	f.Add([]byte("solid\nfacet"))
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
		for _, c := range m.Corners {
			if !reader.Finite(c) {
				t.Fatal("a corner nowhere")
			}
		}
	})
}
