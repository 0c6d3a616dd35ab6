// Package ply reads triangles, polygons and points from PLY files: text, and binary with either
// order of bytes.
//
// Read are the elements vertex, by x, y and z, and face, by vertex_indices or
// vertex_index; all others are passed over as the header describes them.
//
// # Degenerate input
//
// Room is made for what the file holds, never for what its header promises: an element
// without properties takes no bytes and is not counted through.
//
// # Limitations
//
// Strips of triangles are refused. Points without faces are no mesh; Reader reads them as
// rows, with NaN as NULL. Lists of a vertex are passed over and told.
package ply

import (
	"bytes"
	"math"

	"nearcell/catalog/reader"
)

// Is tells whether the bytes begin as a PLY file.
func Is(data []byte) bool {
	return bytes.HasPrefix(data, []byte("ply\n")) || bytes.HasPrefix(data, []byte("ply\r"))
}

// Read reads the faces of a file. The error is a *reader.MeshFault.
func Read(data []byte) (*reader.Mesh, error) {
	h, err := readHeader(data)
	if err != nil {
		return nil, err
	}
	m := &reader.Mesh{Facts: reader.MeshFacts{Format: "PLY, " + h.formatName()}}
	in := h.source()
	var loops faces
	for _, e := range h.elements {
		switch {
		case e.name == "vertex":
			err = readVertices(in, e, m)
		case e.name == "face":
			err = readFaces(in, e, &loops)
		case e.name == "tristrips" && e.count > 0:
			err = &reader.MeshFault{Kind: reader.MeshKind, Line: e.line, Text: e.name}
		default:
			err = skip(in, e)
		}
		if err != nil {
			return nil, err
		}
	}
	if len(loops.start) == 0 {
		return nil, &reader.MeshFault{Kind: reader.MeshNoFaces}
	}
	return m, loops.add(m)
}

// faces are loops of corners, one after the other.
type faces struct {
	corners []int64
	start   []int
	lines   []int
}

func (f *faces) add(m *reader.Mesh) error {
	var loop []int32
	for i, from := range f.start {
		to := len(f.corners)
		if i+1 < len(f.start) {
			to = f.start[i+1]
		}
		loop = loop[:0]
		for _, k := range f.corners[from:to] {
			if k < 0 || k >= int64(len(m.Corners)) {
				return &reader.MeshFault{Kind: reader.MeshIndex, Line: f.lines[i], Got: k, Expected: int64(len(m.Corners))}
			}
			loop = append(loop, int32(k))
		}
		if len(loop) < 3 {
			return &reader.MeshFault{Kind: reader.MeshFewCorners, Line: f.lines[i], Got: int64(len(loop))}
		}
		m.AddFace(loop)
	}
	return nil
}

func readVertices(in source, e *element, m *reader.Mesh) error {
	at := [3]int{-1, -1, -1}
	for i, p := range e.properties {
		for axis, name := range [3]string{"x", "y", "z"} {
			if p.name == name && p.list == 0 {
				at[axis] = i
				m.Facts.Single = m.Facts.Single || p.kind == float32Kind
			}
		}
	}
	for axis, i := range at {
		if i < 0 {
			return &reader.MeshFault{Kind: reader.MeshNoPlace, Line: e.line, Text: string("xyz"[axis])}
		}
	}
	for i := range e.count {
		if i >= math.MaxInt32 {
			return &reader.MeshFault{Kind: reader.MeshTooLarge, Line: e.line}
		}
		if err := in.begin(e, i); err != nil {
			return err
		}
		var p [3]float64
		for k, prop := range e.properties {
			n := int64(1)
			if prop.list != 0 {
				var err error
				if n, err = count(in, prop); err != nil {
					return err
				}
			}
			for range n {
				x, err := in.value(prop.kind)
				if err != nil {
					return err
				}
				for axis := range at {
					if at[axis] == k {
						p[axis] = x
					}
				}
			}
		}
		if !reader.Finite(p) {
			return in.fault(reader.MeshNotFinite, "")
		}
		m.Corners = append(m.Corners, p)
	}
	return nil
}

// count reads the length of a list.
func count(in source, p property) (int64, error) {
	x, err := in.value(p.list)
	if err != nil {
		return 0, err
	}
	if !(x >= 0 && x <= math.MaxInt32) || x != math.Trunc(x) {
		return 0, in.fault(reader.MeshNumber, "the length of a list")
	}
	return int64(x), nil
}

func readFaces(in source, e *element, f *faces) error {
	list := -1
	for i, p := range e.properties {
		if p.list != 0 && (p.name == "vertex_indices" || p.name == "vertex_index") {
			list = i
		}
	}
	if list < 0 {
		if e.count == 0 {
			return nil
		}
		return &reader.MeshFault{Kind: reader.MeshNoPlace, Line: e.line, Text: "vertex_indices"}
	}
	for i := range e.count {
		if err := in.begin(e, i); err != nil {
			return err
		}
		for k, p := range e.properties {
			n := int64(1)
			if p.list != 0 {
				var err error
				if n, err = count(in, p); err != nil {
					return err
				}
			}
			if k == list {
				f.start, f.lines = append(f.start, len(f.corners)), append(f.lines, in.place())
			}
			for range n {
				x, err := in.value(p.kind)
				if err != nil {
					return err
				}
				if k != list {
					continue
				}
				if x != math.Trunc(x) || math.Abs(x) > 1<<53 {
					return in.fault(reader.MeshNumber, "the number of a corner")
				}
				f.corners = append(f.corners, int64(x))
			}
		}
	}
	return nil
}

// skip passes over an element.
func skip(in source, e *element) error {
	if len(e.properties) == 0 {
		return nil
	}
	for i := range e.count {
		if err := in.begin(e, i); err != nil {
			return err
		}
		for _, p := range e.properties {
			n := int64(1)
			if p.list != 0 {
				var err error
				if n, err = count(in, p); err != nil {
					return err
				}
			}
			for range n {
				if _, err := in.value(p.kind); err != nil {
					return err
				}
			}
		}
	}
	return nil
}
