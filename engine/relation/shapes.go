package relation

import (
	"context"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/voronoi"
)

// ShapeColumn is the column of CELLS by which a row is followed through a query to the
// polyhedra of its cell: its value is the row's place in Shapes. It is there only where
// Bound.Shapes is, and no user can name it.
const ShapeColumn = "polyhedra of the cell \x00"

// Shapes are the cells of the rows that CELLS has given, as polyhedra.
type Shapes struct {
	cells  [][]voronoi.Piece
	places []ShapePlace
}

// ShapePlace is the place of a cell's site: in one zone (-1: there are none) the number
// that voronoi.PieceFace.Other has for it.
type ShapePlace struct{ Zone, Site int32 }

// At are the convex pieces of the cell with this value of ShapeColumn.
func (s *Shapes) At(i int64) []voronoi.Piece { return s.cells[i] }

// Place is the place of the site of the cell with this value of ShapeColumn. Without FOR
// EACH, rows with one place share a cell.
func (s *Shapes) Place(i int64) ShapePlace { return s.places[i] }

func (s *Shapes) add(pieces []voronoi.Piece, at ShapePlace) int64 {
	s.cells, s.places = append(s.cells, pieces), append(s.places, at)
	return int64(len(s.cells)) - 1
}

// shapeColumn is the column, where shapes are asked for.
func (b *Bound) shapeColumn() []Column {
	if b.Shapes == nil {
		return nil
	}
	return []Column{{Field: column.Field{Name: ShapeColumn, Type: column.Integer}, Site: -1, Costly: true}}
}

// shaped reports whether a request needs the polyhedra.
func (c *cellRows) shaped() bool {
	return c.b.Shapes != nil && needed(c.r.Need, c.own+len(c.b.Def.Computed))
}

// shape gets the polyhedra of the sites that are shown.
func (c *cellRows) shape(ctx context.Context, h *diagram.Handle, list []int32) error {
	pieces, err := h.PiecesOf(ctx, list, c.progress())
	if err != nil {
		return err
	}
	c.pieces = make([][]voronoi.Piece, h.Len())
	for i, p := range pieces {
		site := i
		if list != nil {
			site = int(list[i])
		}
		c.pieces[site] = p
	}
	return nil
}

// fillShapes writes the column for the rows ks of a part.
func (c *cellRows) fillShapes(v *column.Vector, at int, p *Part, ks []int32) {
	for j, k := range ks {
		v.I[at+j] = c.b.Shapes.add(c.pieces[p.Site[k]], ShapePlace{p.Zone, p.Site[k]})
	}
}
