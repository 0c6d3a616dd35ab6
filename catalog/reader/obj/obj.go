// Package obj reads triangles and polygons from Wavefront OBJ files.
//
// Read are lines that begin with v and f; a face names its corners by number, from 1, or
// backwards from the last corner before it, from -1; what follows a slash is not read.
// A backslash at the end of a line joins the next one to it. Polygons are cut into
// triangles along their corners.
//
// # Degenerate input
//
// A fourth number behind a corner, a weight or the first part of a colour, is not read.
// Faces may stand before their corners only where their numbers count from 1.
//
// # Limitations
//
// Groups and objects are one mesh. Lines of all other kinds are counted; curves and
// surfaces without triangles are refused, as leaving them out would leave holes.
package obj

import (
	"bytes"
	"math"
	"strconv"

	"nearcell/catalog/reader"
)

// known are the words that say nothing about the shape.
var known = map[string]bool{
	"vt": true, "vn": true, "vp": true, "g": true, "o": true, "s": true, "mg": true, "usemtl": true, "mtllib": true, "l": true, "p": true,
	"bevel": true, "c_interp": true, "d_interp": true, "lod": true, "shadow_obj": true, "trace_obj": true, "maplib": true, "usemap": true,
}

// curved are the words of shapes that are not made of flat faces.
var curved = map[string]bool{"curv": true, "curv2": true, "surf": true, "cstype": true, "bzp": true, "bsp": true, "cdc": true, "res": true}

// Is tells whether the bytes look like an OBJ file: some line begins with v and numbers.
func Is(data []byte) bool {
	rest := data[:min(len(data), 1<<16)]
	for len(rest) > 0 {
		line, next, _ := bytes.Cut(rest, []byte("\n"))
		rest = next
		fields := bytes.Fields(line)
		if len(fields) >= 4 && string(fields[0]) == "v" {
			_, err := strconv.ParseFloat(string(fields[1]), 64)
			return err == nil
		}
	}
	return false
}

// file is a file that is being read.
type file struct {
	*reader.Mesh
	line  int
	faces [][]int64 // numbers from 0; checked when all corners are known
	lines []int
}

// Read reads the faces of a file. The error is a *reader.MeshFault.
func Read(data []byte) (*reader.Mesh, error) {
	f := &file{Mesh: &reader.Mesh{Facts: reader.MeshFacts{Format: "OBJ"}}}
	rest := bytes.TrimPrefix(data, []byte("\xef\xbb\xbf"))
	for len(rest) > 0 {
		f.line++
		line, next, _ := bytes.Cut(rest, []byte("\n"))
		rest = next
		first := f.line
		for {
			trimmed := bytes.TrimRight(line, " \t\r")
			if len(trimmed) == 0 || trimmed[len(trimmed)-1] != '\\' || len(rest) == 0 {
				break
			}
			more, next, _ := bytes.Cut(rest, []byte("\n"))
			rest = next
			f.line++
			line = append(append([]byte{}, trimmed[:len(trimmed)-1]...), append([]byte(" "), more...)...)
		}
		if i := bytes.IndexByte(line, '#'); i >= 0 {
			line = line[:i]
		}
		if err := f.read(bytes.Fields(line), first); err != nil {
			return nil, err
		}
	}
	return f.Mesh, f.finish()
}

func (f *file) read(words [][]byte, line int) error {
	if len(words) == 0 {
		return nil
	}
	switch word := string(words[0]); {
	case word == "v":
		return f.corner(words[1:], line)
	case word == "f" || word == "fo":
		return f.face(words[1:], line)
	case curved[word]:
		return &reader.MeshFault{Kind: reader.MeshKind, Line: line, Text: word}
	case !known[word]:
		if f.Facts.Skipped == 0 {
			f.Facts.SkippedAs = word[:min(len(word), 60)]
		}
		f.Facts.Skipped++
	}
	return nil
}

func (f *file) corner(words [][]byte, line int) error {
	if len(words) < 3 {
		return &reader.MeshFault{Kind: reader.MeshWord, Line: line, Text: "", Want: "three numbers"}
	}
	var p [3]float64
	for i := range p {
		x, err := strconv.ParseFloat(string(words[i]), 64)
		if err != nil && !math.IsInf(x, 0) {
			return &reader.MeshFault{Kind: reader.MeshNumber, Line: line, Text: short(words[i]), Want: "a number"}
		}
		if p[i] = x; math.IsNaN(x) || math.IsInf(x, 0) {
			return &reader.MeshFault{Kind: reader.MeshNotFinite, Line: line, Text: short(words[i])}
		}
	}
	if len(f.Corners) >= math.MaxInt32 {
		return &reader.MeshFault{Kind: reader.MeshTooLarge, Line: line}
	}
	f.Corners = append(f.Corners, p)
	return nil
}

func short(b []byte) string { return string(b[:min(len(b), 60)]) }

func (f *file) face(words [][]byte, line int) error {
	if len(words) < 3 {
		return &reader.MeshFault{Kind: reader.MeshFewCorners, Line: line, Got: int64(len(words))}
	}
	loop := make([]int64, len(words))
	for i, w := range words {
		text, _, _ := bytes.Cut(w, []byte("/"))
		k, err := strconv.ParseInt(string(text), 10, 64)
		if err != nil {
			return &reader.MeshFault{Kind: reader.MeshNumber, Line: line, Text: short(w), Want: "the number of a corner"}
		}
		switch {
		case k > 0:
			loop[i] = k - 1
		case k < 0 && -k <= int64(len(f.Corners)):
			loop[i] = int64(len(f.Corners)) + k
		default:
			return &reader.MeshFault{Kind: reader.MeshIndex, Line: line, Got: k, Expected: int64(len(f.Corners))}
		}
	}
	f.faces, f.lines = append(f.faces, loop), append(f.lines, line)
	return nil
}

// finish makes triangles of the faces, now that all corners are known.
func (f *file) finish() error {
	if len(f.faces) == 0 {
		return &reader.MeshFault{Kind: reader.MeshNoFaces}
	}
	var loop []int32
	for i, face := range f.faces {
		loop = loop[:0]
		for _, k := range face {
			if k >= int64(len(f.Corners)) {
				return &reader.MeshFault{Kind: reader.MeshIndex, Line: f.lines[i], Got: k + 1, Expected: int64(len(f.Corners))}
			}
			loop = append(loop, int32(k))
		}
		f.AddFace(loop)
	}
	return nil
}
