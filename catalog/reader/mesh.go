package reader

import (
	"fmt"
	"math"
)

// Mesh is what a file of triangles holds.
type Mesh struct {
	Corners   [][3]float64
	Triangles [][3]int32 // numbers of corners, counter-clockwise from outside as the file has it
	Facts     MeshFacts

	ears int // corners looked at for ears
}

// MeshFacts are what a user may have to be told about the reading of a mesh.
type MeshFacts struct {
	Format    string // "STL, binary", …
	Single    bool   // coordinates of 32 bits
	Faces     int    // of the file
	Polygons  int    // of these with more than three corners; they were cut into triangles
	Solids    int    // STL, text: how many the file has
	Skipped   int    // bytes behind the end, or lines of kinds that say nothing about the shape
	SkippedAs string // the first such kind
}

// MeshFaultKind is what is wrong with a file of triangles.
type MeshFaultKind uint8

const (
	MeshCut        MeshFaultKind = iota + 1 // the file ends too early: Got of Expected Text
	MeshWord                                // Text stands where Want should
	MeshNumber                              // Text is no number
	MeshNotFinite                           // Text is no finite number
	MeshIndex                               // a face names corner Got, and there are Expected
	MeshFewCorners                          // a face with Got corners
	MeshUnknown                             // the file is none of STL, PLY and OBJ
	MeshHeader                              // PLY: Text in the header says nothing that can be followed
	MeshNoPlace                             // PLY: vertices without Text
	MeshNoFaces                             // no face in the file
	MeshKind                                // faces of the kind Text, which are not read
	MeshTooLarge                            // more corners than can be numbered
)

// MeshFault is the error of a file of triangles.
type MeshFault struct {
	Kind     MeshFaultKind
	Line     int   // from 1; 0: in the binary part
	Offset   int64 // in the binary part
	Text     string
	Want     string
	Got      int64
	Expected int64
}

// Error is a plain technical text; users are told in other words.
func (f *MeshFault) Error() string {
	return fmt.Sprintf("reader: mesh fault %d, line %d, offset %d: %q (%d of %d, want %q)", f.Kind, f.Line, f.Offset, f.Text, f.Got, f.Expected, f.Want)
}

// AddFace adds a face with these corners, which exist, cut into triangles.
func (m *Mesh) AddFace(loop []int32) {
	m.Facts.Faces++
	if len(loop) == 3 {
		m.Triangles = append(m.Triangles, [3]int32{loop[0], loop[1], loop[2]})
		return
	}
	m.Facts.Polygons++
	m.cutEars(loop)
}

// cutEars cuts a polygon into triangles ear by ear, seen along its area vector. Where no
// ear is found, because the polygon crosses itself or is flat, the rest is a fan: its
// sides are the polygon's in any case.
func (m *Mesh) cutEars(loop []int32) {
	p := func(i int32) [3]float64 { return m.Corners[i] }
	n := areaOf(loop, p)
	rest := append([]int32(nil), loop...)
	for len(rest) > 3 {
		ear := -1
		if m.ears > mostEars {
			m.fan(rest)
			return
		}
		for i := range rest {
			a, b, c := rest[(i+len(rest)-1)%len(rest)], rest[i], rest[(i+1)%len(rest)]
			if !(area(p(a), p(b), p(c), n) > 0) {
				continue
			}
			free := true
			for _, x := range rest {
				q := p(x)
				m.ears++
				if x == a || x == b || x == c || q == p(a) || q == p(b) || q == p(c) {
					continue
				}
				if area(p(a), p(b), q, n) >= 0 && area(p(b), p(c), q, n) >= 0 && area(p(c), p(a), q, n) >= 0 {
					free = false
					break
				}
			}
			if free {
				ear = i
				break
			}
		}
		if ear < 0 {
			m.fan(rest)
			return
		}
		k := len(rest)
		m.Triangles = append(m.Triangles, [3]int32{rest[(ear+k-1)%k], rest[ear], rest[(ear+1)%k]})
		rest = append(rest[:ear], rest[ear+1:]...)
	}
	if len(rest) == 3 {
		m.Triangles = append(m.Triangles, [3]int32{rest[0], rest[1], rest[2]})
	}
}

// mostEars is how many corners are looked at for ears in one file. Faces take the square
// of their corners, contrived ones the cube; from there on they are fans.
const mostEars = 200_000_000

func (m *Mesh) fan(rest []int32) {
	for k := 1; k+1 < len(rest); k++ {
		m.Triangles = append(m.Triangles, [3]int32{rest[0], rest[k], rest[k+1]})
	}
}

// areaOf is the area vector of a loop.
func areaOf(loop []int32, p func(int32) [3]float64) (n [3]float64) {
	o := p(loop[0])
	for k := 1; k+1 < len(loop); k++ {
		c := crossAt(o, p(loop[k]), p(loop[k+1]))
		for i := range n {
			n[i] += c[i]
		}
	}
	return n
}

func crossAt(o, a, b [3]float64) (n [3]float64) {
	var u, v [3]float64
	for i := range o {
		u[i], v[i] = a[i]-o[i], b[i]-o[i]
	}
	for i := range n {
		j, k := (i+1)%3, (i+2)%3
		n[i] = float64(u[j]*v[k]) - float64(u[k]*v[j])
	}
	return n
}

// area is that of a triangle, seen along n.
func area(a, b, c, n [3]float64) float64 {
	x := crossAt(a, b, c)
	return float64(x[0]*n[0]) + float64(x[1]*n[1]) + float64(x[2]*n[2])
}

// Finite tells whether all coordinates of a corner are finite.
func Finite(p [3]float64) bool {
	for _, x := range p {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			return false
		}
	}
	return true
}
