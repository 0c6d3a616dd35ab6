package voronoi

import (
	"context"
	"errors"
	"maps"
	"math"
	"slices"
	"testing"

	"nearcell/voronoi/solid"
)

// Pieces are closed polyhedra that turn outwards, hold as much as the cell, and show as
// much of each neighbour and of the walls; in box and L, scattered and on a lattice
// whose cells have faces in the re-entrant walls, stretched or not.
func TestPiecesAreTheCell(t *testing.T) {
	for name, body := range map[string]solid.Solid{"box": boxOf(t, Vec{}, v(30, 18, 7.5)), "L": lShape(t)} {
		for kind, sites := range siteSets(body) {
			for _, stretch := range []Vec{{}, v(1, 1, 4)} {
				d := diagram(t, sites, Options{Solid: body, Stretch: stretch})
				t.Run(name+" "+kind, func(t *testing.T) { piecesAreTheCell(t, d, body) })
			}
		}
	}
}

func piecesAreTheCell(t *testing.T, d *Diagram, body solid.Solid) {
	whole := measure(t, d, Volume|WallArea)
	area := map[[2]int32]float64{}
	err := d.Contacts(context.Background(), nil, func(site int32, contacts []Contact) error {
		for _, c := range contacts {
			area[[2]int32{site, c.Other}] = c.Area
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	all, err := d.Pieces(context.Background(), nil)
	if err != nil {
		t.Fatal(err)
	}
	total := 0.0
	for row, pieces := range all {
		site := int32(row)
		volume, walls := 0.0, 0.0
		seen := map[int32]float64{}
		for i := range pieces {
			p := &pieces[i]
			near(t, "volume by the faces", byFaces(t, p), p.Volume, 1e-9)
			volume += p.Volume
			for _, f := range p.Faces {
				a := length(areaVector(p.corners(&f)))
				switch f.Kind {
				case ContactFace:
					seen[f.Other] += a
				case WallFace:
					walls += a
				case SeamFace:
					for _, w := range f.Walls {
						walls += length(areaVector(w))
					}
				}
			}
		}
		near(t, "volume", volume, whole.Volume[row], 1e-9*whole.Volume[row])
		near(t, "walls", walls, whole.WallArea[row], 1e-6*(1+whole.WallArea[row]))
		for _, other := range slices.Sorted(maps.Keys(seen)) {
			// A face in a re-entrant wall shows on one side only: see Contacts.
			if want := area[[2]int32{site, other}]; math.Abs(seen[other]-want) > 1e-6 && want > 0 {
				near(t, "contact", seen[other], want, 1e-6)
			}
		}
		for pair, want := range area {
			if pair[0] == site && seen[pair[1]] < want-1e-6 {
				t.Errorf("site %d shows %g of its contact of %g with %d", site, seen[pair[1]], want, pair[1])
			}
		}
		total += volume
	}
	near(t, "all pieces", total, body.Volume(), 1e-9*body.Volume())
}

// byFaces is the volume by the divergence theorem; every edge must be used once in each
// direction.
func byFaces(t *testing.T, p *Piece) (volume float64) {
	edges := map[[2]int32]int{}
	for _, f := range p.Faces {
		for k, a := range f.Loop {
			edges[[2]int32{a, f.Loop[(k+1)%len(f.Loop)]}]++
		}
		volume += dot(areaVector(p.corners(&f)), sub(p.Corners[f.Loop[0]], p.Corners[0])) / 3
	}
	for e, n := range edges {
		if n != 1 || edges[[2]int32{e[1], e[0]}] != 1 {
			t.Fatalf("the edge %v is used %d times, and %d times backwards", e, n, edges[[2]int32{e[1], e[0]}])
		}
	}
	return volume
}

func TestPiecesAreRefused(t *testing.T) {
	d := diagram(t, random(9, 1), Options{})
	var none *NoPiecesError
	if _, err := d.Pieces(context.Background(), nil); !errors.As(err, &none) || none.Kind != "" {
		t.Errorf("without a solid: %v", err)
	}
}
