package diagram

import (
	"errors"
	"unsafe"

	"nearcell/catalog/store"
	"nearcell/voronoi"
)

// measureParts are the names of the measures in a kept diagram, in their order.
var measureParts = []struct {
	measure voronoi.Measures
	name    string
}{
	{voronoi.Volume, "volume"}, {voronoi.Area, "area"}, {voronoi.Faces, "faces"}, {voronoi.Neighbours, "neighbours"},
	{voronoi.Bounded, "bounded"}, {voronoi.Clipped, "clipped"}, {voronoi.WallArea, "wall_area"},
	{voronoi.Centroid, "centroid"}, {voronoi.Farthest, "farthest"}, {voronoi.NearestFace, "nearest_face"},
}

// measureArrays is one measure of all cells as arrays.
func measureArrays(m voronoi.Measures, c *voronoi.Cells) store.Arrays {
	number := func(x []float64) store.Arrays { return store.Arrays{{Name: "values", F64: x}} }
	switch m {
	case voronoi.Volume:
		return number(c.Volume)
	case voronoi.Area:
		return number(c.Area)
	case voronoi.WallArea:
		return number(c.WallArea)
	case voronoi.Farthest:
		return number(c.Farthest)
	case voronoi.NearestFace:
		return number(c.NearestFace)
	case voronoi.Neighbours:
		return store.Arrays{{Name: "values", I32: c.Neighbours}}
	case voronoi.Bounded:
		return store.Arrays{{Name: "values", U8: bytesOf(c.Bounded)}}
	case voronoi.Clipped:
		return store.Arrays{{Name: "values", U8: bytesOf(c.Clipped)}}
	case voronoi.Faces:
		return store.Arrays{{Name: "faces", I32: c.Faces}, {Name: "edges", I32: c.Edges},
			{Name: "vertices", I32: c.Vertices}, {Name: "shaped", U8: bytesOf(c.Shaped)}}
	case voronoi.Centroid:
		x := unsafe.Slice(&c.Centroid[0].X, 3*len(c.Centroid))
		return store.Arrays{{Name: "values", F64: x}, {Name: "has", U8: bytesOf(c.HasCentroid)}}
	}
	return nil
}

var errColumn = errors.New("a kept measure of another length")

// takeArrays puts one measure of n cells out of arrays into c.
func takeArrays(m voronoi.Measures, a store.Arrays, n int, c *voronoi.Cells) error {
	good := true
	number := func(to *[]float64, name string, n int) {
		x := a.Find(name).F64
		if good = good && len(x) == n; good {
			*to = x
		}
	}
	count := func(to *[]int32, name string) {
		x := a.Find(name).I32
		if good = good && len(x) == n; good {
			*to = x
		}
	}
	flag := func(to *[]bool, name string) {
		x := a.Find(name).U8
		if good = good && len(x) == n; good {
			*to = flagsOf(x)
		}
	}
	switch m {
	case voronoi.Volume:
		number(&c.Volume, "values", n)
	case voronoi.Area:
		number(&c.Area, "values", n)
	case voronoi.WallArea:
		number(&c.WallArea, "values", n)
	case voronoi.Farthest:
		number(&c.Farthest, "values", n)
	case voronoi.NearestFace:
		number(&c.NearestFace, "values", n)
	case voronoi.Neighbours:
		count(&c.Neighbours, "values")
	case voronoi.Bounded:
		flag(&c.Bounded, "values")
	case voronoi.Clipped:
		flag(&c.Clipped, "values")
	case voronoi.Faces:
		count(&c.Faces, "faces")
		count(&c.Edges, "edges")
		count(&c.Vertices, "vertices")
		flag(&c.Shaped, "shaped")
	case voronoi.Centroid:
		var x []float64
		number(&x, "values", 3*n)
		flag(&c.HasCentroid, "has")
		if good {
			c.Centroid = unsafe.Slice((*voronoi.Vec)(unsafe.Pointer(&x[0])), n)
		}
	}
	if !good {
		return errColumn
	}
	return nil
}

func bytesOf(flags []bool) []uint8 {
	out := make([]uint8, len(flags))
	for i, f := range flags {
		if f {
			out[i] = 1
		}
	}
	return out
}

// flagsOf copies: a bool that is neither 0 nor 1 would be none.
func flagsOf(b []uint8) []bool {
	out := make([]bool, len(b))
	for i, x := range b {
		out[i] = x != 0
	}
	return out
}
