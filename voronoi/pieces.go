package voronoi

import (
	"context"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// NoPiecesError says that a solid knows no convex parts of itself, or that there is no
// solid, so that cells may have no end.
type NoPiecesError struct{ Kind string } // of the solid; "": none

func (e *NoPiecesError) Error() string {
	if e.Kind == "" {
		return "voronoi: without a solid, cells may have no end"
	}
	return "voronoi: a " + e.Kind + " knows no convex parts of itself"
}

// Piece is a convex polyhedron: a cell, or what of it lies in a convex part of the solid.
type Piece struct {
	Corners []Vec // in the coordinates of the sites
	Faces   []PieceFace
	Volume  float64
}

// PieceFace is a face of a Piece.
type PieceFace struct {
	Kind  FaceKind
	Other int32   // ContactFace: the site on its other side, of several at a place the first; else -1
	Loop  []int32 // its corners, counter-clockwise as seen from outside
	Walls [][]Vec // SeamFace: the convex parts of it that are a wall all the same
}

// FaceKind is what a face of a Piece is.
type FaceKind uint8

const (
	ContactFace FaceKind = iota // part of a contact
	WallFace                    // part of a wall of the solid
	SeamFace                    // where pieces of one cell meet, but for its Walls: not a face of the cell
)

// Pieces gives the cells of the given sites (nil: all) as convex polyhedra: one where the
// solid is convex, else one for each convex part of the solid that the cell reaches into
// with a volume. Entry i of the answer belongs to the site i of those asked for; sites
// outside the solid have none, sites at one place have the same. The volumes of the pieces
// of a cell add up to that of the cell. Corners are rounded, as all constructed points
// are: neighbours' corners agree within 1e-12 of a cell's reach or so, not to the bit. It
// holds some 3 kB for each cell of three dimensions.
//
// It fails with *NoPiecesError without a solid and in a solid that is not solid.Divided,
// such as a mesh; with *NoSuchSiteError, and with ctx's error.
func (d *Diagram) Pieces(ctx context.Context, sites []int32) ([][]Piece, error) {
	parts, err := d.convexParts()
	if err != nil {
		return nil, err
	}
	r, err := d.request(sites)
	if err != nil {
		return nil, err
	}
	g, err := d.choose(ctx, Faces, len(r.cells))
	if err != nil {
		return nil, err
	}
	if g != nil {
		g.list()
	}
	out := make([][]Piece, len(r.sites))
	err = d.forEach(ctx, len(r.cells), 0, len(r.cells), func(b *builder, k int) error {
		b.use(g, nil)
		pieces := b.pieces(r.cells[k], parts)
		for _, row := range r.rows[r.start[k]:r.start[k+1]] {
			out[row] = pieces
		}
		return nil
	})
	return out, err
}

// convexParts are the parts of a solid that is not convex; nil for one that is.
func (d *Diagram) convexParts() (solid.Divided, error) {
	if d.solid == nil {
		return nil, &NoPiecesError{}
	}
	if d.convex {
		return nil, nil
	}
	parts, ok := d.solid.(solid.Divided)
	if !ok {
		return nil, &NoPiecesError{d.solid.Facts().Kind}
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
		f := PieceFace{Kind: SeamFace, Other: -1, Loop: append([]int32(nil), loop...)} // a side of a convex part, until seams has looked
		switch _, wall := polyhedron.WallNumber(label); {
		case label >= 0 && label != partLabel:
			f.Kind, f.Other = ContactFace, b.d.site[label]
		case wall && b.d.convex:
			f.Kind = WallFace
		}
		p.Faces = append(p.Faces, f)
	}
	return p
}
