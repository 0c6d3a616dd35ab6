package bind

import (
	"crypto/sha256"
	"fmt"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/lang"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// bodyKey is a key of a solid that stands on its own.
func (b *binder) bodyKey(own lang.Solid) (key [32]byte) {
	h := sha256.New()
	h.Write([]byte(lang.Print(own)))
	eachContent(own, func(s lang.Solid) {
		k := b.contents[s].Body.Key()
		h.Write(k[:])
		for _, p := range b.contents[s].boxes {
			h.Write([]byte(p.Name))
			h.Write([]byte{0})
		}
	})
	h.Sum(key[:0])
	return key
}

// eachContent visits the parts of an expression that come from files, from left to right.
func eachContent(s lang.Solid, do func(lang.Solid)) {
	switch s := s.(type) {
	case *lang.SolidOp:
		eachContent(s.Left, do)
		eachContent(s.Right, do)
	case *lang.MeshSolid, *lang.BoxesSolid, *lang.TerrainSolid:
		do(s)
	}
}

// The table that the catalog keeps of a solid made of files: a row for each triangle, box
// or point, with the number of the part of the expression that it belongs to.
var contentFields = []column.Field{
	{Name: "part", Type: column.Integer, Meaning: "number of the part of the solid, from 1"},
	{Name: "kind", Type: column.Text, Meaning: "triangle, box or point"},
	{Name: "name", Type: column.Text, Meaning: "of a box"},
}

const contentNumbers = 9

// keep makes the table of the contents of a solid; nil if it has none.
func (b *binder) keep(own lang.Solid) (*column.Table, []catalog.SourceFile) {
	schema := append(column.Schema{}, contentFields...)
	for i := range contentNumbers {
		schema = append(schema, column.Field{Name: fmt.Sprintf("%c%d", "xyz"[i%3], i/3+1), Type: column.Real, Meaning: "coordinate of a corner"})
	}
	builders := make([]*column.Builder, len(schema))
	for i, f := range schema {
		builders[i] = column.NewBuilder(f.Type, nil)
	}
	part := int64(0)
	row := func(kind, name string, v ...solid.Vec) {
		builders[0].AppendInt(part)
		builders[1].AppendText(kind)
		builders[2].AppendText(name)
		for i := range contentNumbers {
			x := 0.0
			if i/3 < len(v) {
				x = [3]float64{v[i/3].X, v[i/3].Y, v[i/3].Z}[i%3]
			}
			builders[3+i].AppendFloat(x)
		}
	}
	var sources []catalog.SourceFile
	eachContent(own, func(s lang.Solid) {
		c := b.contents[s]
		part++
		if c.Source.Path != "" {
			sources = append(sources, c.Source)
		}
		switch {
		case c.blocks != nil:
			for i, p := range c.boxes {
				k := &c.blocks[i]
				row("block", p.Name, k[0], k[1], k[2])
				row("block", p.Name, k[3], k[4], k[5])
				row("block", p.Name, k[6], k[7])
			}
		case c.boxes != nil:
			for _, p := range c.boxes {
				lo, hi := p.Solid.Bounds()
				row("box", p.Name, lo, hi)
			}
		case c.points != nil:
			row("height", "", solid.Vec{Z: c.height})
			for _, p := range c.points {
				row("point", "", p)
			}
		default:
			v, t := c.Body.(mesh.Surfaced).Surface()
			kind := "triangle"
			if c.single {
				kind = "triangle of 32 bits"
			}
			for _, k := range t {
				row(kind, "", v[k[0]], v[k[1]], v[k[2]])
			}
		}
	})
	if part == 0 {
		return nil, nil
	}
	t := &column.Table{N: builders[0].Len(), Schema: schema}
	for _, c := range builders {
		t.Cols = append(t.Cols, c.Finish())
	}
	return t, sources
}

// stored gives the contents that the catalog keeps of a solid, one after the other.
type stored struct {
	object *catalog.Object
	part   int
	row    int
}

func (s *stored) next(cache *SolidCache) (*Content, error) {
	t := s.object.Table
	s.part++
	from := s.row
	if t == nil || len(t.Cols) != len(contentFields)+contentNumbers {
		return nil, problem.New("failed", problem.Place{}, "the catalog has lost what the solid '%s' is made of", s.object.Name)
	}
	for s.row < t.N && t.Cols[0].I[s.row] == int64(s.part) {
		s.row++
	}
	to := s.row
	key := storedKey{s.object.ContentKey(), s.part}
	return cached(cache, func() *map[storedKey]*Content { return &cache.kept }, key, func() (*Content, error) {
		return restore(s.object, from, to)
	})
}

// restore makes a content out of rows.
func restore(o *catalog.Object, from, to int) (*Content, error) {
	t := o.Table
	at := func(r, k int) solid.Vec {
		c := len(contentFields) + 3*k
		return solid.Vec{X: t.Cols[c].F[r], Y: t.Cols[c+1].F[r], Z: t.Cols[c+2].F[r]}
	}
	c := &Content{}
	if from == to {
		return nil, problem.New("failed", problem.Place{}, "the catalog has lost what the solid '%s' is made of", o.Name)
	}
	var err error
	switch kind := t.Cols[1].Text(from); kind {
	case "box":
		for r := from; r < to; r++ {
			box, err := solid.NewBox(at(r, 0), at(r, 1))
			if err != nil {
				return nil, err
			}
			c.boxes = append(c.boxes, solid.Part{Name: t.Cols[2].Text(r), Solid: box})
		}
		c.Body, err = mesh.NewBoxes(c.boxes)
	case "block":
		for r := from; r+2 < to; r += 3 {
			k := block{at(r, 0), at(r, 1), at(r, 2), at(r+1, 0), at(r+1, 1), at(r+1, 2), at(r+2, 0), at(r+2, 1)}
			if err := c.addBlock(t.Cols[2].Text(r), k); err != nil {
				return nil, err
			}
		}
		c.Body, err = mesh.NewBoxes(c.boxes)
	case "height":
		c.height = at(from, 0).Z
		for r := from + 1; r < to; r++ {
			c.points = append(c.points, at(r, 0))
		}
		c.Body, _, err = mesh.Terrain(c.points, c.height)
	default:
		c.single = kind != "triangle"
		v := make([]solid.Vec, 0, 3*(to-from))
		tri := make([][3]int32, 0, to-from)
		for r := from; r < to; r++ {
			k := int32(len(v))
			v = append(v, at(r, 0), at(r, 1), at(r, 2))
			tri = append(tri, [3]int32{k, k + 1, k + 2})
		}
		c.Body, err = mesh.Restore(v, tri, precision(c.single))
	}
	if err != nil {
		return nil, problem.New("failed", problem.Place{}, "what the catalog keeps of the solid '%s' makes no solid", o.Name).Because(err)
	}
	return c, nil
}
