package engine

import (
	"context"
	"fmt"
	"math"
	"strconv"
	"strings"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/catalog/column"
	"nearcell/engine/draw"
	"nearcell/engine/exec"
	"nearcell/lang"
)

// tilesAcross is how many tiles of an estimate the longer side of a map has.
const tilesAcross = 80

// placeNumber is the column that brings estimates back to their tiles.
const placeNumber = "picture_place"

// estimateSection shades the panels by what ESTIMATES gives at the middles of tiles.
func (s *Session) estimateSection(ctx context.Context, m *sectionMap, groups []group) error {
	tiles := m.tiles()
	m.out.Estimate = strings.ToUpper(m.method.Name.Text)
	if len(tiles) == 0 { // the plane meets none of the parts that count
		return nil
	}
	relationOf := *m.plain
	relationOf.Noun.Text = "ESTIMATES"
	points, err := lang.ParseQuery(m.places(tiles))
	if err != nil {
		return err
	}
	relationOf.Clauses = append([]lang.Clause{&lang.AtPointsClause{At: m.t.At, Operand: points}, m.method}, m.plain.Clauses...)
	names := append([]lang.Name{{Text: placeNumber}, m.t.Shaded}, m.each...)
	node, err := s.prepare(m.st, selecting(m.t, &lang.RelationSource{At: m.t.Relation.At, Relation: &relationOf}, names...))
	if err != nil {
		return err
	}
	rows, err := exec.Collect(ctx, s.execEnv(m.st), node)
	if err != nil {
		return err
	}
	for i := range m.out.Panels {
		p := &m.out.Panels[i]
		p.Cells, p.Parts = nil, nil
		p.Tiles = append([]draw.Tile(nil), tiles...)
		for k := range p.Tiles {
			p.Tiles[k].Missing = true
		}
		m.fillTiles(p, rows, groups[i].heading)
		for _, t := range p.Tiles {
			p.Parts = append(p.Parts, draw.Part{Value: t.Value, Missing: t.Missing, Area: t.Area, In: t.In})
		}
	}
	m.out.Notes = append(m.out.Notes, fmt.Sprintf("Estimated at the middles of %d tiles.", len(tiles)))
	return nil
}

// fillTiles takes over the estimates of one value of FOR EACH.
func (m *sectionMap) fillTiles(p *draw.Panel, rows *column.Table, heading string) {
	for i := range rows.N {
		var parts []string
		for k, n := range m.each {
			parts = append(parts, n.Text+" = "+rows.Cols[2+k].Value(i).String())
		}
		if strings.Join(parts, ", ") != heading || rows.Cols[1].IsNull(i) {
			continue
		}
		t := &p.Tiles[rows.Cols[0].I[i]]
		t.Value, t.Missing = number(&rows.Cols[1], i), false
	}
}

// tiles divide the walls of the first panel, which are those of all, into squares.
func (m *sectionMap) tiles() []draw.Tile {
	walls, part := m.out.Panels[0].Walls, []int(nil)
	if m.parts != nil {
		walls = nil
		for k, list := range m.out.Panels[0].Within {
			for _, w := range list {
				walls, part = append(walls, w), append(part, k)
			}
		}
	}
	lo, hi := draw.Bounds(walls)
	edge := math.Max(hi.X-lo.X, hi.Y-lo.Y) / tilesAcross
	var list []draw.Tile
	for j := 0; lo.Y+float64(float64(j)*edge) < hi.Y; j++ {
		for i := 0; lo.X+float64(float64(i)*edge) < hi.X; i++ {
			from := draw.Point{X: lo.X + float64(float64(i)*edge), Y: lo.Y + float64(float64(j)*edge)}
			to := draw.Point{X: lo.X + float64(float64(i+1)*edge), Y: lo.Y + float64(float64(j+1)*edge)}
			list = append(list, tilesIn(walls, part, from, to, 1e-9*edge*edge)...)
		}
	}
	return list
}

// tilesIn is what a square has of polygons: one tile, or one for each part that counts.
func tilesIn(walls []draw.Polygon, part []int, from, to draw.Point, least float64) []draw.Tile {
	var list []draw.Tile
	for k, w := range walls {
		piece := w.Within(from, to)
		if len(piece) == 0 || piece.Area() <= least {
			continue
		}
		in := 0
		if part != nil {
			in = part[k]
		}
		if n := len(list); n == 0 || list[n-1].In != in {
			list = append(list, draw.Tile{In: in})
		}
		t := &list[len(list)-1]
		t.Pieces = append(t.Pieces, piece)
		t.Area += piece.Area()
	}
	return list
}

// places is the query of the tiles' middles, in space.
func (m *sectionMap) places(tiles []draw.Tile) string {
	var b strings.Builder
	b.WriteString("SELECT * FROM (VALUES ")
	for k, t := range tiles {
		middle := t.Pieces[0].Middle()
		q := r3.Add(m.plane.from, r3.Add(r3.Scale(middle.X, m.plane.u), r3.Scale(middle.Y, m.plane.v)))
		switch m.plane.axis { // to the last bit, so that a plane in a wall stays there
		case 0:
			q.X = m.plane.coordinate
		case 1:
			q.Y = m.plane.coordinate
		case 2:
			q.Z = m.plane.coordinate
		}
		if k > 0 {
			b.WriteString(", ")
		}
		fmt.Fprintf(&b, "(%d, %s, %s, %s)", k, real(q.X), real(q.Y), real(q.Z))
	}
	b.WriteString(") AS p (" + placeNumber + ", x, y, z)")
	return b.String()
}

// real writes a number of the language that is no INTEGER.
func real(v float64) string {
	text := strconv.FormatFloat(v, 'f', -1, 64)
	if !strings.Contains(text, ".") {
		text += ".0"
	}
	return text
}
