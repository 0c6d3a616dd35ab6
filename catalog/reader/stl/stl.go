// Package stl reads triangles from STL files, binary and text.
//
// A file is binary if its length is what the count in its header says, whatever its first
// word is. Normals are not read: the order of the corners tells them. Corners are not
// shared in STL, so that each triangle brings three.
//
// # Degenerate input
//
// A text file may hold several solids, with or without their ends named. Bytes behind
// the triangles of a binary file are skipped and counted. Room is made for what the file
// holds, never for what its header promises.
//
// # Limitations
//
// Colours and attribute bytes are not read. Binary files have coordinates of 32 bits.
package stl

import (
	"bytes"
	"encoding/binary"
	"math"
	"strconv"

	"nearcell/catalog/reader"
)

const (
	headerSize = 84
	facetSize  = 50
)

// Is tells whether the bytes look like an STL file.
func Is(data []byte) bool {
	return isBinary(data) || isText(data)
}

func isBinary(data []byte) bool {
	return len(data) >= headerSize && uint64(len(data)) == headerSize+facetSize*uint64(binary.LittleEndian.Uint32(data[80:]))
}

func isText(data []byte) bool {
	t := bytes.TrimLeft(data, " \t\r\n\ufeff")
	return len(t) >= 5 && bytes.EqualFold(t[:5], []byte("solid")) && bytes.IndexByte(data[:min(len(data), 512)], 0) < 0
}

// Read reads the triangles of a file. The error is a *reader.MeshFault.
func Read(data []byte) (*reader.Mesh, error) {
	if !isBinary(data) && isText(data) {
		return readText(data)
	}
	return readBinary(data)
}

func readBinary(data []byte) (*reader.Mesh, error) {
	if len(data) < headerSize {
		return nil, &reader.MeshFault{Kind: reader.MeshCut, Text: "bytes", Got: int64(len(data)), Expected: headerSize}
	}
	said := int64(binary.LittleEndian.Uint32(data[80:]))
	rest := data[headerSize:]
	if there := int64(len(rest)) / facetSize; there < said {
		return nil, &reader.MeshFault{Kind: reader.MeshCut, Offset: int64(len(data)), Text: "triangles", Got: there, Expected: said}
	}
	if said == 0 {
		return nil, &reader.MeshFault{Kind: reader.MeshNoFaces}
	}
	if said > math.MaxInt32/3 {
		return nil, &reader.MeshFault{Kind: reader.MeshTooLarge, Got: said}
	}
	m := &reader.Mesh{Corners: make([][3]float64, 0, 3*said), Triangles: make([][3]int32, 0, said)}
	m.Facts = reader.MeshFacts{Format: "STL, binary", Single: true, Solids: 1, Skipped: len(rest) - int(said)*facetSize}
	if m.Facts.Skipped > 0 {
		m.Facts.SkippedAs = "bytes behind the triangles"
	}
	for i := range said {
		f := rest[i*facetSize:]
		k := int32(len(m.Corners))
		for c := range int64(3) {
			var p [3]float64
			for axis := range int64(3) {
				p[axis] = float64(math.Float32frombits(binary.LittleEndian.Uint32(f[12+12*c+4*axis:])))
			}
			if !reader.Finite(p) {
				return nil, &reader.MeshFault{Kind: reader.MeshNotFinite, Offset: headerSize + i*facetSize + 12 + 12*c, Got: i + 1}
			}
			m.Corners = append(m.Corners, p)
		}
		m.AddFace([]int32{k, k + 1, k + 2})
	}
	return m, nil
}

// words goes through the words of a text.
type words struct {
	rest []byte
	line int
}

func (w *words) next() []byte {
	for len(w.rest) > 0 {
		switch w.rest[0] {
		case '\n':
			w.line++
			fallthrough
		case ' ', '\t', '\r', '\f', '\v':
			w.rest = w.rest[1:]
			continue
		}
		n := bytes.IndexAny(w.rest, " \t\r\n\f\v")
		if n < 0 {
			n = len(w.rest)
		}
		word := w.rest[:n]
		w.rest = w.rest[n:]
		return word
	}
	return nil
}

// skipLine passes over what is left of the line.
func (w *words) skipLine() {
	if n := bytes.IndexByte(w.rest, '\n'); n >= 0 {
		w.rest = w.rest[n:]
	} else {
		w.rest = nil
	}
}

func (w *words) expect(want string) error {
	got := w.next()
	if !bytes.EqualFold(got, []byte(want)) {
		return w.fault(reader.MeshWord, got, want)
	}
	return nil
}

func (w *words) fault(kind reader.MeshFaultKind, got []byte, want string) error {
	if got == nil && kind == reader.MeshWord {
		return &reader.MeshFault{Kind: reader.MeshCut, Line: w.line, Want: want}
	}
	return &reader.MeshFault{Kind: kind, Line: w.line, Text: string(got[:min(len(got), 60)]), Want: want}
}

func (w *words) number() (float64, error) {
	word := w.next()
	if word == nil {
		return 0, w.fault(reader.MeshWord, nil, "a number")
	}
	x, err := strconv.ParseFloat(string(word), 64)
	if err != nil && !math.IsInf(x, 0) {
		return 0, w.fault(reader.MeshNumber, word, "a number")
	}
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return 0, w.fault(reader.MeshNotFinite, word, "a number")
	}
	return x, nil
}

func readText(data []byte) (*reader.Mesh, error) {
	data = bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	w := &words{rest: data, line: 1}
	m := &reader.Mesh{Facts: reader.MeshFacts{Format: "STL, text"}}
	for {
		word := w.next()
		switch {
		case word == nil:
			if m.Facts.Faces == 0 {
				return nil, &reader.MeshFault{Kind: reader.MeshNoFaces}
			}
			return m, nil
		case bytes.EqualFold(word, []byte("solid")):
			m.Facts.Solids++
			w.skipLine()
		case bytes.EqualFold(word, []byte("endsolid")):
			w.skipLine()
		case bytes.EqualFold(word, []byte("facet")):
			if err := w.facet(m); err != nil {
				return nil, err
			}
		default:
			return nil, w.fault(reader.MeshWord, word, "facet")
		}
	}
}

// facet reads a triangle behind its first word. What is written as its normal is not
// read, so that "nan" there does no harm.
func (w *words) facet(m *reader.Mesh) error {
	if err := w.expect("normal"); err != nil {
		return err
	}
	w.skipLine()
	if err := w.expect("outer"); err != nil {
		return err
	}
	if err := w.expect("loop"); err != nil {
		return err
	}
	if len(m.Corners) > math.MaxInt32-3 {
		return &reader.MeshFault{Kind: reader.MeshTooLarge, Line: w.line}
	}
	k := int32(len(m.Corners))
	for range 3 {
		if err := w.expect("vertex"); err != nil {
			return err
		}
		var p [3]float64
		for axis := range p {
			var err error
			if p[axis], err = w.number(); err != nil {
				return err
			}
		}
		m.Corners = append(m.Corners, p)
	}
	if err := w.expect("endloop"); err != nil {
		return err
	}
	if err := w.expect("endfacet"); err != nil {
		return err
	}
	m.AddFace([]int32{k, k + 1, k + 2})
	return nil
}
