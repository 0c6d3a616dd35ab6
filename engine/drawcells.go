package engine

import (
	"context"
	"math"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/catalog/column"
	"nearcell/engine/draw"
	"nearcell/engine/exec"
	"nearcell/engine/plan"
	"nearcell/engine/present"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/engine/view"
	"nearcell/lang"
	"nearcell/voronoi"
)

// mostCells is how many cells a page or a still has: some 70 MB.
const mostCells = 100_000

// Columns of the query of a picture of cells, before that of their polyhedra.
const (
	spaceID = iota
	spaceX
	spaceY
	spaceZ
	spaceValue
	spaceVolume
)

// spacePicture is DRAW CELLS.
func (s *Session) spacePicture(ctx context.Context, st *statement, t *lang.Draw) (picture, error) {
	limits, err := s.pictureLimits(st, t)
	if err != nil {
		return nil, err
	}
	from, err := s.seenFrom(st, t)
	if err != nil {
		return nil, err
	}
	node, shapes, err := s.bindSpace(st, t)
	if err != nil || s.checkOnly {
		return nil, err
	}
	bound := boundIn(node)
	rows, err := exec.Collect(ctx, s.execEnv(st), node)
	switch {
	case err != nil:
		return nil, err
	case rows.N == 0:
		return nil, problem.New("no-sites", st.at(t.Relation), "%s has no cells: there is nothing to draw", bound.Title())
	case rows.N > mostCells:
		return nil, problem.New("too-many-cells", st.at(t.Relation), "%s has %d cells, and a picture has %d at most", bound.Title(), rows.N, mostCells).
			WithHint("draw a part: CELLS OF (SELECT … WHERE …), or WITHIN a smaller solid; SAVE … TO 'cells.vtu' takes them all")
	}
	value := rows.Schema[spaceValue]
	x := &draw.Space{Title: "Cells of " + bound.Name, Value: value.Name, Unit: value.Unit.String(), Volume: rows.Schema[spaceVolume].Unit.String(),
		Limits: limits, From: from, Text: func(v float64) string { return present.Number(v, s.tableOptions().Digits) }}
	if bound.Name == "(query)" {
		x.Title = "Cells"
	}
	if bound.Clauses.Unit != nil {
		x.Length = bound.Clauses.Unit.String()
	}
	s.fillSpace(st, x, rows, shapes)
	if len(x.Bodies) == 0 {
		return nil, problem.New("no-sites", st.at(t.Relation), "no site of %s has a cell in the solid: there is nothing to draw", bound.Title())
	}
	return x, nil
}

// seenFrom reads SEEN FROM; zero where it is not given.
func (s *Session) seenFrom(st *statement, t *lang.Draw) (from draw.Spot, err error) {
	for k, e := range t.Seen {
		if from[k], err = s.pictureNumber(st, e, "a part of the direction"); err != nil {
			return from, err
		}
		if math.IsInf(from[k], 0) || math.Abs(from[k]) > 1e150 {
			return from, problem.New("not-finite", st.at(e), "a part of the direction is not finite")
		}
	}
	if length := math.Hypot(math.Hypot(from[0], from[1]), from[2]); len(t.Seen) > 0 && length < 1e-150 {
		return from, problem.New("direction", st.at(t.Seen[0]), "a direction of length zero says not where to look from").
			WithHint("SEEN FROM (-1, -2, 1.5) looks from the front left, from above")
	}
	return from, nil
}

// bindSpace binds the query that gives the cells with their polyhedra.
func (s *Session) bindSpace(st *statement, t *lang.Draw) (plan.Node, *relation.Shapes, error) {
	for _, c := range t.Relation.Clauses {
		switch c := c.(type) {
		case *lang.ForEachClause:
			return nil, nil, problem.New("no-clause", st.at(c), "a picture of CELLS shows one partition, and takes no FOR EACH").
				WithHint("choose one: CELLS OF (SELECT … WHERE t = TIMESTAMP '…'); DRAW SECTION … FOR EACH has a panel for each")
		case *lang.UnclippedClause:
			return nil, nil, problem.New("no-clause", st.at(c), "a picture of CELLS takes no UNCLIPPED: cells without an end cannot be drawn").
				WithHint("WITHIN a solid ends them; ENVELOPE OF campaign MARGIN 1 is one")
		case *lang.MeasuredInClause:
			return nil, nil, problem.New("no-clause", st.at(c), "a picture of CELLS takes no MEASURED IN").
				WithHint("draw the whole cells; SELECT part, SUM(volume) FROM CELLS OF … has the parts")
		}
	}
	names := []lang.Name{{Text: "id"}, {Text: "x"}, {Text: "y"}, {Text: "z"}, t.Shaded, {Text: "volume"}}
	q := selecting(t, &lang.RelationSource{At: t.Relation.At, Relation: t.Relation}, names...)
	node, shapes, err := s.prepareCells(st, q)
	if err != nil {
		return nil, nil, err
	}
	if err := numeric(st, t.Shaded, node.Schema()[spaceValue]); err != nil {
		return nil, nil, err
	}
	bound := boundIn(node)
	switch {
	case bound == nil:
		return nil, nil, problem.New("failed", st.at(t), "the plan of a picture of cells has no partition")
	case !bound.Closed():
		return nil, nil, problem.New("no-solid", st.at(t.Relation), "a picture of cells needs a solid: the cells of %s have no end", bound.Name).
			WithHint("WITHIN solid, in DRAW or in CREATE CAMPAIGN")
	}
	return node, shapes, nil
}

// fillSpace makes the bodies: one for each place, with the rows that share it. Rows
// without a cell are left out, which the partition has told of.
func (s *Session) fillSpace(st *statement, x *draw.Space, rows *column.Table, shapes *relation.Shapes) {
	index := map[relation.ShapePlace]int32{}
	var made []int64 // of each body, the value of the shape column
	shape, value := &rows.Cols[len(rows.Cols)-1], &rows.Cols[spaceValue]
	for i := range rows.N {
		pieces := shapes.At(shape.I[i])
		if len(pieces) == 0 {
			continue
		}
		place := shapes.Place(shape.I[i])
		k, known := index[place]
		if !known {
			k = int32(len(x.Bodies))
			index[place] = k
			made = append(made, shape.I[i])
			x.Bodies = append(x.Bodies, draw.Body{At: draw.Spot{number(&rows.Cols[spaceX], i), number(&rows.Cols[spaceY], i), number(&rows.Cols[spaceZ], i)}})
		}
		row := draw.BodyRow{ID: rows.Cols[spaceID].Value(i).String(), Volume: number(&rows.Cols[spaceVolume], i), Missing: value.IsNull(i)}
		if !row.Missing {
			row.Value = number(value, i)
		}
		x.Bodies[k].Rows = append(x.Bodies[k].Rows, row)
	}
	for k := range x.Bodies {
		zone := shapes.Place(made[k]).Zone
		x.Bodies[k].Hulls = hullsOf(shapes.At(made[k]), func(site int32) int32 {
			if other, known := index[relation.ShapePlace{Zone: zone, Site: site}]; known {
				return other
			}
			return draw.Wall
		})
	}
	if without := rows.N - countRows(x); without > 0 {
		s.noted(st, &x.Notes, "%s without a cell in the solid: not drawn", plural(int64(without), "site"))
	}
}

func countRows(x *draw.Space) int {
	n := 0
	for i := range x.Bodies {
		n += len(x.Bodies[i].Rows)
	}
	return n
}

// hullsOf takes the pieces of a cell over.
func hullsOf(pieces []voronoi.Piece, body func(site int32) int32) []draw.Hull {
	hulls := make([]draw.Hull, len(pieces))
	for i := range pieces {
		p, h := &pieces[i], &hulls[i]
		h.Corners = spotsOf(p.Corners)
		for _, f := range p.Faces {
			face := draw.HullFace{Loop: f.Loop, Other: draw.Wall}
			switch f.Kind {
			case voronoi.ContactFace:
				face.Other = body(f.Other)
			case voronoi.SeamFace:
				face.Other = draw.Seam
				for _, w := range f.Walls {
					face.Walls = append(face.Walls, spotsOf(w))
				}
			}
			h.Faces = append(h.Faces, face)
		}
	}
	return hulls
}

func spotsOf(list []r3.Vec) []draw.Spot {
	out := make([]draw.Spot, len(list))
	for i, c := range list {
		out[i] = draw.Spot{c.X, c.Y, c.Z}
	}
	return out
}

// spacePage is the page of a picture of cells.
func (s *Session) spacePage(p picture, still *draw.Scene) ([]byte, error) {
	return view.Page(p.(*draw.Space), still, s.o.Program)
}
