package bind

import (
	"math"

	"nearcell/catalog/column"
	"nearcell/catalog/frame"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// KeepInFrame makes a solid that is written in the coordinates of a drawing, at the site:
// boxes and prisms become prisms there, or triangles where the frame turns them in space;
// what comes from files is brought there corner by corner. name is the frame's, for
// messages.
func KeepInFrame(env *Env, s lang.Solid, f *frame.Similarity, name string) (*KeptSolid, error) {
	b := newBinder(env)
	b.contents = map[lang.Solid]*Content{}
	own, err := b.inFrame(s, f, name)
	if err != nil {
		return nil, err
	}
	return b.kept(own, s)
}

func (b *binder) inFrame(s lang.Solid, f *frame.Similarity, name string) (lang.Solid, error) {
	switch s := s.(type) {
	case *lang.SolidOp:
		left, err := b.inFrame(s.Left, f, name)
		if err != nil {
			return nil, err
		}
		right, err := b.inFrame(s.Right, f, name)
		if err != nil {
			return nil, err
		}
		return &lang.SolidOp{At: s.At, Minus: s.Minus, Left: left, Right: right}, nil
	case *lang.BoxSolid, *lang.PrismSolid:
		own, err := b.canonical(s)
		if err != nil {
			return nil, err
		}
		if f.Upright {
			return prismInFrame(own, f), nil
		}
		return b.turnedInSpace(own, s, f, name)
	case *lang.MeshSolid, *lang.BoxesSolid, *lang.TerrainSolid:
		return b.fileInFrame(s, f, name)
	}
	return nil, problem.New("control-points", b.at(s), "IN FRAME %s speaks of a solid that is written out, and %s has coordinates of its own", name, b.text(s)).
		WithHint("make each part IN FRAME %s under a name of its own, then combine the names without IN FRAME", name)
}

// prismInFrame is a box or a prism at the site, where upright stays upright.
func prismInFrame(own lang.Solid, f *frame.Similarity) lang.Solid {
	if s, ok := own.(*lang.BoxSolid); ok {
		x0, y0, x1, y1 := number(s.From.X), number(s.From.Y), number(s.To.X), number(s.To.Y)
		return &lang.PrismSolid{At: s.At, Outer: moved(s.At, f, [][2]float64{{x0, y0}, {x1, y0}, {x1, y1}, {x0, y1}}),
			From: height(s.At, f, s.From.Z), To: height(s.At, f, s.To.Z)}
	}
	p := own.(*lang.PrismSolid)
	out := &lang.PrismSolid{At: p.At, Outer: moved(p.At, f, corners(p.Outer)), From: height(p.At, f, p.From), To: height(p.At, f, p.To)}
	for _, h := range p.Holes {
		out.Holes = append(out.Holes, moved(p.At, f, corners(h)))
	}
	return out
}

// turnedInSpace is a box or a prism that a frame turns in space: triangles, under the
// words that they were written with.
func (b *binder) turnedInSpace(own, written lang.Solid, f *frame.Similarity, name string) (lang.Solid, error) {
	body, err := b.build(own)
	if err != nil {
		return nil, b.faultySolid(err, written)
	}
	there, err := surfaceInFrame(body.(mesh.Surfaced), f, 0)
	if err != nil {
		return nil, b.faultyMesh(err, written, "")
	}
	at := lang.At{Pos: written.Span()}
	tree := &lang.MeshSolid{At: at, File: &lang.Text{At: at, Value: b.text(written) + " IN FRAME " + name}}
	b.contents[tree] = &Content{Body: there}
	return tree, nil
}

// fileInFrame is a solid from a file at the site.
func (b *binder) fileInFrame(s lang.Solid, f *frame.Similarity, name string) (lang.Solid, error) {
	if m, ok := s.(*lang.MeshSolid); ok && !m.Unit.IsZero() && math.Abs(f.Scale-1) > 0.01 {
		return nil, problem.New("length-unit", b.at(&m.Unit), "the frame %s makes metres of the drawing's lengths, by %s: UNIT %s would do so once more", name,
			column.FormatReal(f.Scale), m.Unit.Text).WithHint("leave UNIT out, if the file counts as the drawing does")
	}
	quiet, env := *b, *b.env
	env.Notes = nil // lengths in them are the drawing's
	quiet.env = &env
	own, err := quiet.canonical(s)
	if err != nil {
		return nil, err
	}
	c := b.contents[own]
	there := &Content{Source: c.Source}
	for _, t := range c.told {
		if t.level == note.Warning {
			there.told = append(there.told, t)
		}
	}
	if c.boxes != nil {
		err = there.boxesInFrame(c.boxes, f)
	} else {
		lo, hi := c.Body.Bounds()
		size := func(lo, hi solid.Vec) float64 {
			return max(math.Abs(lo.X), math.Abs(lo.Y), math.Abs(lo.Z), math.Abs(hi.X), math.Abs(hi.Y), math.Abs(hi.Z))
		}
		var body *mesh.Mesh
		if body, err = surfaceInFrame(c.Body.(mesh.Surfaced), f, precision(c.single)); err == nil {
			there.Body = body
			low, high := body.Bounds()
			there.single = c.single && size(low, high) < 4*f.Scale*size(lo, hi) // else its digits say more
		}
	}
	if err != nil {
		return nil, b.faultyMesh(err, s, "")
	}
	lo, hi := there.Body.Bounds()
	there.tell(note.Note, "%s spans x from %.10g to %.10g, y from %.10g to %.10g, z from %.10g to %.10g m at the site", b.text(s), lo.X, hi.X, lo.Y, hi.Y, lo.Z, hi.Z)
	if b.env.Notes != nil {
		for _, t := range there.told {
			b.env.Notes.Add(t.level, note.Import, "%s", t.text)
		}
	}
	b.contents[own] = there
	return own, nil
}

// atSite is a corner of a drawing at the site.
func atSite(f *frame.Similarity, v solid.Vec) solid.Vec {
	p := f.Apply(frame.Point{v.X, v.Y, v.Z})
	return solid.Vec{X: tidy(p[0]), Y: tidy(p[1]), Z: tidy(p[2])}
}

// surfaceInFrame brings a surface to the site, corner by corner.
func surfaceInFrame(s mesh.Surfaced, f *frame.Similarity, precision float64) (*mesh.Mesh, error) {
	v, t := s.Surface()
	there := make([]solid.Vec, len(v))
	for i, p := range v {
		there[i] = atSite(f, p)
	}
	tri := make([][3]int32, len(t))
	for i, c := range t {
		if tri[i] = c; f.Mirrored {
			tri[i] = [3]int32{c[0], c[2], c[1]}
		}
	}
	return mesh.Restore(there, tri, precision)
}

// boxesInFrame brings boxes to the site.
func (c *Content) boxesInFrame(boxes []solid.Part, f *frame.Similarity) error {
	for _, p := range boxes {
		lo, hi := p.Solid.Bounds()
		var k block
		for i := range k {
			v := lo
			if i&1 != 0 {
				v.X = hi.X
			}
			if i&2 != 0 {
				v.Y = hi.Y
			}
			if i&4 != 0 {
				v.Z = hi.Z
			}
			k[i] = atSite(f, v)
		}
		if err := c.addBlock(p.Name, k); err != nil {
			return err
		}
	}
	var err error
	c.Body, err = mesh.NewBoxes(c.boxes)
	return err
}

// block are the corners of a box that a frame has turned: bit 0 of the number says x, bit
// 1 y and bit 2 z of the drawing.
type block [8]solid.Vec

// addBlock adds a turned box: a prism where it stands upright, else triangles.
func (c *Content) addBlock(name string, k block) error {
	made, err := k.solid()
	if err != nil {
		return err
	}
	c.boxes = append(c.boxes, solid.Part{Name: name, Solid: made})
	c.blocks = append(c.blocks, k)
	return nil
}

func (k *block) solid() (solid.Solid, error) {
	upright := true
	for i := range 4 {
		a, b := k[i], k[i+4]
		upright = upright && a.X == b.X && a.Y == b.Y && a.Z == k[0].Z && b.Z == k[4].Z
	}
	if upright {
		var ring []solid.Vec2
		for _, i := range [4]int{0, 1, 3, 2} {
			ring = append(ring, solid.Vec2{X: k[i].X, Y: k[i].Y})
		}
		return solid.NewPrism(ring, nil, k[0].Z, k[4].Z)
	}
	var t [][3]int32
	for _, q := range [6][4]int32{{0, 2, 3, 1}, {4, 5, 7, 6}, {0, 1, 5, 4}, {2, 6, 7, 3}, {0, 4, 6, 2}, {1, 3, 7, 5}} {
		t = append(t, [3]int32{q[0], q[1], q[2]}, [3]int32{q[0], q[2], q[3]})
	}
	m, _, err := mesh.New(k[:], t, mesh.Options{}) // a mirrored one is turned
	return m, err
}

func corners(r *lang.Ring) [][2]float64 {
	var out [][2]float64
	for _, c := range r.Corners {
		out = append(out, [2]float64{number(c.X), number(c.Y)})
	}
	return out
}

// moved is a ring at the site.
func moved(at lang.At, f *frame.Similarity, plan [][2]float64) *lang.Ring {
	r := &lang.Ring{At: at}
	for _, c := range plan {
		p := f.Apply(frame.Point{c[0], c[1], f.From[2]})
		r.Corners = append(r.Corners, &lang.Corner{At: at, X: literalNumber(tidy(p[0]), at), Y: literalNumber(tidy(p[1]), at)})
	}
	return r
}

// height is a height at the site.
func height(at lang.At, f *frame.Similarity, e lang.Expr) lang.Expr {
	return literalNumber(tidy(f.Apply(frame.Point{f.From[0], f.From[1], number(e)})[2]), at)
}

// tidy takes the last digits off, a tenth of a nanometre: walls that meet in the drawing
// meet at the site.
func tidy(x float64) float64 {
	if math.Abs(x) >= 1e5 {
		return math.Round(x*1e8)/1e8 + 0
	}
	return math.Round(x*1e10)/1e10 + 0
}
