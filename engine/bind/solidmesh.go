package bind

import (
	"errors"
	"fmt"
	"strings"

	"nearcell/catalog/reader"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// meshFault words what is wrong with a file of triangles.
func (b *binder) meshFault(err error, file *lang.Text) error {
	var f *reader.MeshFault
	if !errors.As(err, &f) {
		return problem.New("mesh-file", b.at(file), "'%s' cannot be read: %v", file.Value, err)
	}
	where := "'" + file.Value + "'"
	if f.Line > 0 {
		where = fmt.Sprintf("line %d of '%s'", f.Line, file.Value)
	}
	p := problem.New("mesh-file", b.at(file), "%s cannot be read", where)
	switch f.Kind {
	case reader.MeshCut:
		p.Message = where + " is where the file ends too early"
		switch {
		case f.Expected > 0 && f.Text == "bytes":
			p.Message = fmt.Sprintf("'%s' has %d bytes, less than the heading of a binary STL file", file.Value, f.Got)
		case f.Expected > 0:
			p.Message = fmt.Sprintf("'%s' is cut short: it has %d of the %d items '%s' that it promises", file.Value, f.Got, f.Expected, f.Text)
		case f.Want != "":
			p.Message = fmt.Sprintf("%s: the file ends where %s should stand", where, f.Want)
		}
		p.WithHint("was it copied or exported whole?")
	case reader.MeshWord:
		p.Message = fmt.Sprintf("%s: '%s' stands where %s should", where, f.Text, f.Want)
	case reader.MeshNumber:
		p.Message = fmt.Sprintf("%s: '%s' stands where %s should", where, f.Text, orNumber(f.Want))
	case reader.MeshNotFinite:
		p.Message = fmt.Sprintf("%s: a coordinate is no finite number", where)
	case reader.MeshIndex:
		p.Message = fmt.Sprintf("%s: a face names corner %d, and there are %d", where, f.Got, f.Expected)
	case reader.MeshFewCorners:
		p.Message = fmt.Sprintf("%s: a face of %s", where, count(int(f.Got), "corner"))
	case reader.MeshHeader:
		p.Message = fmt.Sprintf("%s: '%s' is nothing that a PLY heading says", where, f.Text)
	case reader.MeshNoPlace:
		p.Message = fmt.Sprintf("'%s': the element on line %d has no property %s", file.Value, f.Line, f.Text)
	case reader.MeshNoFaces:
		p.Message = fmt.Sprintf("'%s' has no faces", file.Value)
		p.WithHint("points alone bound no solid: export the surface as triangles")
	case reader.MeshKind:
		p.Message = fmt.Sprintf("%s: shapes of the kind '%s' are not read", where, f.Text)
		p.WithHint("export the surface as triangles or polygons")
	case reader.MeshTooLarge:
		p.Message = fmt.Sprintf("'%s' has too many corners", file.Value)
	}
	return p
}

func orNumber(want string) string {
	if want == "" {
		return "a number"
	}
	return want
}

func place3(v solid.Vec) string { return fmt.Sprintf("(%.7g, %.7g, %.7g)", v.X, v.Y, v.Z) }

// faultyMesh words why triangles bound no solid.
func (b *binder) faultyMesh(err error, s lang.Solid, name string) error {
	var e *mesh.Error
	if !errors.As(err, &e) {
		return b.faultySolid(err, s)
	}
	what := "this solid"
	if name != "" {
		what = "'" + name + "'"
	}
	p := problem.New("mesh", b.at(s), "%s cannot be a solid: %v", what, err)
	switch e.Fault {
	case mesh.Leak:
		p.Code, p.Message = "leak", leak(e, what)
		p.WithHint("%s", leakHint(e, s))
	case mesh.Overlap:
		p.Message = fmt.Sprintf("%s overlaps itself: triangles %d and %d cross or cover one another near %s", what, e.Triangles[0]+1, e.Triangles[1]+1, place3(e.At))
		if e.Count > 1 {
			p.Message += fmt.Sprintf(" (%d such pairs)", e.Count)
		}
		p.WithHint("space inside two pieces would count twice: export the pieces one by one and join them with PLUS")
	case mesh.Nested:
		p.Message = fmt.Sprintf("a piece of %s lies inside another, near %s, and both are solid", what, place3(e.At))
		p.WithHint("a hollow has its triangles turned the other way round; what stands inside the piece can be taken away with MINUS")
	case mesh.NoVolume:
		p.Code, p.Message = "no-volume", fmt.Sprintf("%s, or a piece of it, has no volume", what)
	case mesh.Empty:
		p.Code, p.Message = "no-volume", fmt.Sprintf("%s has no triangle with three different corners", what)
	case mesh.NothingLeft:
		p.Code, p.Message = "no-volume", "nothing is left of this solid"
		p.WithHint("DESCRIBE shows the box of each of the solids")
	case mesh.NotFinite:
		p.Code, p.Message = "solid", fmt.Sprintf("a coordinate of %s is too large", what)
	case mesh.NoPlan:
		p.Message = fmt.Sprintf("the survey %s has %s on one line: no surface passes through them", what, count(e.Count, "place"))
	case mesh.TwoHeights:
		p.Message = fmt.Sprintf("point %d of the survey %s stands at (%.7g, %.7g) like an earlier one, at another height", e.Corner+1, what, e.At.X, e.At.Y)
	case mesh.NotClosed:
		p.Code, p.Message = "failed", fmt.Sprintf("the solids could not be combined near %s", place3(e.At))
		p.WithHint("this is a fault of the program; moving one of the solids by a little is a way round it")
	}
	return p
}

// leak lists the open edges of a mesh.
func leak(e *mesh.Error, what string) string {
	var out strings.Builder
	verb := "edges are"
	if e.Count == 1 {
		verb = "edge is"
	}
	fmt.Fprintf(&out, "%s is not closed: %d %s open, %.6g m in all, with ends at (in m) ", what, e.Count, verb, e.Length)
	for i, edge := range e.Edges {
		if i > 0 {
			out.WriteString(", ")
		}
		fmt.Fprintf(&out, "%s to %s", place3(edge[0]), place3(edge[1]))
	}
	if more := e.Count - len(e.Edges); more > 0 {
		fmt.Fprintf(&out, " and %d more", more)
	}
	return out.String()
}

func leakHint(e *mesh.Error, s lang.Solid) string {
	m, isMesh := s.(*lang.MeshSolid)
	switch {
	case e.Turned > 0 && 2*e.Turned >= e.Count:
		return "along most of these edges both triangles run the same way: some triangles are turned inside out against their neighbours"
	case e.Junctions > 0:
		return fmt.Sprintf("at %s, near %s, a side of one triangle was divided and that of its neighbour was not: divide both", count(e.Junctions, "place"), place3(e.At))
	case e.Crowded > 0 && 2*e.Crowded >= e.Count:
		return "along most of these edges more than two triangles meet and do not pair off: is a wall inside the solid?"
	case isMesh && m.Weld == nil:
		return "a triangle is missing there; or corners differ by rounding: WELD 0.001 joins those within a millimetre"
	}
	return "a triangle is missing there"
}

// tellMesh notes what was done to the triangles of a file.
func tellMesh(c *Content, name string, m *reader.Mesh, r *mesh.Report, s *lang.MeshSolid, body *mesh.Mesh) {
	if r.Welded > 0 {
		c.tell(note.Note, "WELD moved %s of '%s' onto others, at most %.3g m", count(r.Welded, "corner"), name, r.Farthest)
	} else if s.Weld != nil {
		c.tell(note.Note, "WELD found nothing to join in '%s'", name)
	}
	if r.Dropped > 0 {
		c.tell(note.Note, "%s of '%s' bounded nothing and went: two corners in one place, or two triangles back to back", count(r.Dropped, "triangle"), name)
	}
	switch {
	case r.InsideOut:
		c.tell(note.Warning, "'%s' is inside out: all its triangles were turned", name)
	case r.Flipped > 0:
		c.tell(note.Warning, "%s of '%s' inside out and turned", were(r.Flipped, "piece"), name)
	}
	if r.Touching {
		c.tell(note.Note, "faces of '%s' lie on one another, with the solid on both sides: they are no walls", name)
	}
	if m.Facts.Skipped > 0 {
		c.tell(note.Warning, "'%s' has %s that says nothing known about the shape and was passed over, the first '%s'", name, count(m.Facts.Skipped, "line or byte"), m.Facts.SkippedAs)
	}
	what := fmt.Sprintf("%s with %s", m.Facts.Format, count(len(m.Triangles), "triangle"))
	if f := body.Facts(); f.Pieces > 1 || f.Voids > 0 {
		what += fmt.Sprintf("; %s, %s", count(f.Pieces, "piece"), count(f.Voids, "void"))
	}
	lo, hi := body.Bounds()
	unit := "taken as metres: UNIT mm reads millimetres"
	if !s.Unit.IsZero() {
		unit = "read as " + s.Unit.Text
	}
	c.tell(note.Note, "'%s' is %s; its coordinates are %s; it spans %.6g x %.6g x %.6g m", name, what, unit, hi.X-lo.X, hi.Y-lo.Y, hi.Z-lo.Z)
}

func were(n int, noun string) string {
	if n == 1 {
		return "1 " + noun + " was"
	}
	return fmt.Sprintf("%d %ss were", n, noun)
}
