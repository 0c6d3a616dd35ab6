package bind

import (
	"errors"
	"fmt"

	"nearcell/engine/problem"
	"nearcell/lang"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// faultySolid words what is wrong with the description of a solid.
func (b *binder) faultySolid(err error, s lang.Solid) error {
	var triangles *mesh.Error
	if errors.As(err, &triangles) {
		return b.faultyMesh(err, s, "")
	}
	var e *solid.Error
	if !errors.As(err, &e) {
		return problem.At(err, b.at(s))
	}
	p := problem.New("solid", b.at(s), "this solid cannot be: %v", err)
	switch e.Fault {
	case solid.NoExtent, solid.FewCorners, solid.NoArea, solid.NothingLeft:
		p.Code, p.Message = "no-volume", withoutVolume(e)
	case solid.NotFinite:
		p.Message = "a coordinate of this solid is too large"
	case solid.Spike:
		p.Message = fmt.Sprintf("%s of this prism runs out to corner %d and back on itself", ringName(e.Ring), e.Corner+1)
	case solid.Crossing:
		p.Message = fmt.Sprintf("side %d of %s and side %d of %s cross at %s", e.Side+1, ringName(e.Ring), e.OtherSide+1, ringName(e.OtherRing), planPlace(e))
		p.WithHint("are the corners in the order in which one walks around?")
	case solid.Overlap:
		p.Message = fmt.Sprintf("%s of this prism overlaps itself near %s", ringName(e.Ring), planPlace(e))
	case solid.HoleOutside:
		p.Message = fmt.Sprintf("%s of this prism lies outside its outline near %s", ringName(e.Ring), planPlace(e))
	case solid.HolesOverlap:
		p.Message = fmt.Sprintf("%s and %s of this prism overlap near %s", ringName(e.Ring), ringName(e.OtherRing), planPlace(e))
	}
	return p
}

// withoutVolume says why nothing is left of a solid.
func withoutVolume(e *solid.Error) string {
	switch e.Fault {
	case solid.FewCorners:
		return fmt.Sprintf("%s of this prism has %s; a ring needs three", ringName(e.Ring), count(e.Count, "distinct corner"))
	case solid.NoArea:
		return ringName(e.Ring) + " of this prism encloses no area"
	case solid.NothingLeft:
		return "the holes of this prism leave nothing of its plan"
	}
	if e.Axis >= 0 {
		return fmt.Sprintf("this solid has no volume: it has no extent along %c", "xyz"[e.Axis])
	}
	return "this solid has no volume"
}

func ringName(ring int) string {
	if ring > 0 {
		return fmt.Sprintf("hole %d", ring)
	}
	return "the outline"
}

func planPlace(e *solid.Error) string {
	return fmt.Sprintf("(%.6g, %.6g)", e.At.X, e.At.Y)
}
