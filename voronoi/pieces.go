package voronoi

import (
	"context"
	"errors"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// Polyhedra of cells, for files and pictures. Measures need none of this: see Measure.

var (
	// ErrOpenCells: without a solid some cells run to infinity, and no polyhedron is one.
	ErrOpenCells = errors.New("voronoi: cells that run to infinity are no polyhedra")
	// ErrNoConvexParts: the solid is neither convex nor known as convex parts.
	ErrNoConvexParts = errors.New("voronoi: the solid is not known as convex parts")
)

// Piece is a convex polyhedron: a cell, or what of it lies in a convex part of the solid.
type Piece struct {
	Corners []Vec // in the coordinates of the sites
	Faces   []PieceFace
	Volume  float64
}

// PieceFace is a face of a Piece.
type PieceFace struct {
	Loop  []int32 // its corners, counter-clockwise as seen from outside
	Kind  FaceKind
	Walls [][]Vec // ToSeam: the convex parts of it that are a wall all the same
	With  int32   // ToSite: the site on its other side, of several at a place the first; else -1
}

// FaceKind is what a face of a Piece is.
type FaceKind uint8

const (
	ToSite FaceKind = iota // part of a contact
	ToWall                 // part of a wall of the solid
	ToSeam                 // where pieces of one cell meet, but for its Walls: not a face of the cell
)

// Pieces calls yield once for each of the given sites, in their order (nil: all sites in
// theirs), with the pieces of its cell: one where the solid is convex, else one for each
// convex part of the solid that the cell reaches into with a volume. Their volumes add up to
// that of the cell. The pieces are the callee's to keep; sites outside the solid have
// none, sites at one place have the same. Corners are rounded, as all constructed points are:
// neighbours' corners agree within 1e-12 of a cell's reach or so, not to the bit.
//
// It fails with ErrOpenCells without a solid, with ErrNoConvexParts in a solid that is not
// solid.Divided, such as a mesh. An error of yield ends the calls and is returned.
func (d *Diagram) Pieces(ctx context.Context, sites []int32, yield func(site int32, pieces []Piece) error) error {
	parts, err := d.convexParts()
	if err != nil {
		return err
	}
	if sites == nil {
		sites = make([]int32, len(d.cell))
		for i := range sites {
			sites[i] = int32(i)
		}
	}
	const block = 4096 // cells whose pieces are held at a time
	for len(sites) > 0 {
		n := min(block, len(sites))
		r, err := d.request(sites[:n])
		if err != nil {
			return err
		}
		made := make([][]Piece, n)
		err = d.forEach(ctx, len(r.cells), 0, len(r.cells), func(b *builder, k int) error {
			b.use(nil, nil)
			pieces := b.pieces(r.cells[k], parts)
			for _, row := range r.rows[r.start[k]:r.start[k+1]] {
				made[row] = pieces
			}
			return nil
		})
		if err != nil {
			return err
		}
		for row, pieces := range made {
			if err := yield(sites[row], pieces); err != nil {
				return err
			}
		}
		sites = sites[n:]
	}
	return nil
}

// convexParts are the parts of a solid that is not convex; nil for one that is.
func (d *Diagram) convexParts() (solid.Divided, error) {
	if d.solid == nil {
		return nil, ErrOpenCells
	}
	if d.convex {
		return nil, nil
	}
	parts, ok := d.solid.(solid.Divided)
	if !ok {
		return nil, ErrNoConvexParts
	}
	return parts, nil
}

// pieces are those of one cell.
func (b *builder) pieces(cell int32, parts solid.Divided) []Piece {
	b.buildWhole(cell)
	if b.full.Empty() {
		return nil
	}
	at := b.d.place(cell)
	if parts == nil {
		return []Piece{b.piece(&b.full, at)}
	}
	lo, hi := b.full.Bounds()
	tol := flatShare * b.full.Farthest()
	var list []Piece
	for i := range parts.NumParts() {
		var x box
		if x.lo, x.hi = parts.PartBounds(i); !x.meets(at, lo, hi) {
			continue
		}
		b.cell.CopyFrom(&b.full)
		b.planes = parts.PartPlanes(i, at, b.planes[:0])
		for _, p := range b.planes {
			if b.clipFlat(p, tol); b.cell.Empty() {
				break
			}
		}
		if b.cell.Empty() || !(b.cell.Volume() > 0) {
			continue
		}
		list = append(list, b.piece(&b.cell, at))
	}
	seams(list, 1e-9*length(sub(b.d.hi, b.d.lo)))
	return list
}

// piece copies a polyhedron that is local to its site at the given place.
func (b *builder) piece(c *polyhedron.Cell, at Vec) Piece {
	p := Piece{Corners: make([]Vec, c.NumVertices()), Volume: c.Volume()}
	for i := range p.Corners {
		p.Corners[i] = add(at, c.Vertex(i))
	}
	for i := range c.NumFaces() {
		label, loop := c.Face(i)
		f := PieceFace{Loop: append([]int32(nil), loop...), Kind: ToSeam, With: -1} // a side of a convex part, until seams has looked
		switch _, wall := polyhedron.WallNumber(label); {
		case label >= 0 && label != partLabel:
			f.Kind, f.With = ToSite, b.d.site[label]
		case wall && b.d.convex:
			f.Kind = ToWall
		}
		p.Faces = append(p.Faces, f)
	}
	return p
}
