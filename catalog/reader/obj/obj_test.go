package obj

import (
	"errors"
	"math"
	"testing"

	"nearcell/catalog/reader"
)

const tetrahedron = "# a corner of a box\no corner\nv 0 0 0\nv 1 0 0 0.5 0.5 0.5\nv 0 1 0\nv 0 0 1 \\\n 1\nvn 0 0 1\n" +
	"f 1/1/1 3//1 2\nf -4 -3 -1\nf 2 3 4\ns off\nusemtl x\nsparkle 3\nf 1 \\\n4 3\n"

func TestRead(t *testing.T) {
	m, err := Read([]byte(tetrahedron))
	if err != nil {
		t.Fatal(err)
	}
	want := [][3]int32{{0, 2, 1}, {0, 1, 3}, {1, 2, 3}, {0, 3, 2}}
	if len(m.Triangles) != 4 || len(m.Corners) != 4 || m.Facts.Skipped != 1 || m.Facts.SkippedAs != "sparkle" {
		t.Fatalf("%+v", m)
	}
	for i, w := range want {
		if m.Triangles[i] != w {
			t.Errorf("face %d is %v, want %v", i, m.Triangles[i], w)
		}
	}
	for name, c := range map[string]struct {
		text string
		kind reader.MeshFaultKind
		line int
	}{
		"empty":               {"", reader.MeshNoFaces, 0},
		"two corners":         {"v 0 0 0\nf 1 1\n", reader.MeshFewCorners, 2},
		"two numbers":         {"v 0 0\n", reader.MeshWord, 1},
		"no number":           {"v 0 0 a\n", reader.MeshNumber, 1},
		"nowhere":             {"v 0 0 inf\n", reader.MeshNotFinite, 1},
		"corner 0":            {"v 0 0 0\nf 0 1 1\n", reader.MeshIndex, 2},
		"a corner too many":   {"v 0 0 0\n\nf 1 1 2\n", reader.MeshIndex, 3},
		"a corner before one": {"v 0 0 0\nf -1 -1 -2\n", reader.MeshIndex, 2},
		"a surface":           {"v 0 0 0\nsurf 0 1 0 1 1 2 3\n", reader.MeshKind, 2},
	} {
		var f *reader.MeshFault
		if _, err := Read([]byte(c.text)); !errors.As(err, &f) || f.Kind != c.kind || f.Line != c.line {
			t.Errorf("%s: %v", name, err)
		}
	}
}

// A plan with a re-entrant corner is cut into triangles that lie in it: their areas, all of
// one sign, add up to it, wherever the loop begins and however it lies in space.
func TestPolygons(t *testing.T) {
	for _, text := range []string{
		"v 0 0 0\nv 30 0 0\nv 30 12 0\nv 18 12 0\nv 18 18 0\nv 0 18 0\n",
		"v 0 0 0\nv 0 30 0\nv 0 30 12\nv 0 18 12\nv 0 18 18\nv 0 0 18\n",
		"v 0 0 0\nv 0 0 30\nv 12 0 30\nv 12 0 18\nv 18 0 18\nv 18 0 0\n",
	} {
		for _, face := range []string{"f 1 2 3 4 5 6", "f 4 5 6 1 2 3", "f 6 5 4 3 2 1", "f 3 2 1 6 5 4"} {
			m, err := Read([]byte(text + face))
			if err != nil {
				t.Fatal(err)
			}
			if len(m.Triangles) != 4 || m.Facts.Polygons != 1 || m.Facts.Faces != 1 {
				t.Fatalf("%+v", m)
			}
			total, sum := 0.0, [3]float64{}
			for _, c := range m.Triangles {
				var u, v, n [3]float64
				for i := range u {
					u[i], v[i] = m.Corners[c[1]][i]-m.Corners[c[0]][i], m.Corners[c[2]][i]-m.Corners[c[0]][i]
				}
				for i := range n {
					n[i] = u[(i+1)%3]*v[(i+2)%3] - u[(i+2)%3]*v[(i+1)%3]
					sum[i] += n[i] / 2
				}
				total += math.Sqrt(n[0]*n[0]+n[1]*n[1]+n[2]*n[2]) / 2
			}
			if total != 468 || math.Abs(sum[0])+math.Abs(sum[1])+math.Abs(sum[2]) != 468 {
				t.Errorf("%s of %q: areas of %v, vector %v", face, text[:20], total, sum)
			}
		}
	}
}

func FuzzRead(f *testing.F) {
	f.Add([]byte(tetrahedron))
	f.Add([]byte("v 0 0 0\nv 1 0 0\nv 1 1 0\nv 0 1 0\nv 0 .5 0\nf 1 2 3 4 5"))
	f.Add([]byte("v 0 0 0\\\nf -1 -1 -1\\"))
	f.Fuzz(func(t *testing.T, data []byte) {
		m, err := Read(data)
		if err != nil {
			var fault *reader.MeshFault
			if !errors.As(err, &fault) {
				t.Fatal(err)
			}
			return
		}
		if len(m.Triangles) == 0 || len(m.Triangles) > len(data) || m.Facts.Faces > len(data) {
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
