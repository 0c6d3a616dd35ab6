package mesh

import "nearcell/voronoi/solid"

// Boxes is the union of solids that have names.
type Boxes struct {
	*Mesh
	parts []solid.Part
}

// NewBoxes joins solids that have names. Those of one name are one part. The error is an
// *[Error] or a *[SurfaceError].
func NewBoxes(parts []solid.Part) (*Boxes, error) {
	if len(parts) == 0 {
		return nil, &Error{Fault: Empty}
	}
	byName := map[string][]solid.Solid{}
	var names []string
	var all []solid.Solid
	for _, p := range parts {
		if byName[p.Name] == nil {
			names = append(names, p.Name)
		}
		byName[p.Name] = append(byName[p.Name], p.Solid)
		all = append(all, p.Solid)
	}
	b := &Boxes{}
	for _, name := range names {
		body := byName[name][0]
		if same := byName[name]; len(same) > 1 {
			joined, err := Join(make([]Op, len(same)-1), same...)
			if err != nil {
				return nil, err
			}
			body = joined
		}
		b.parts = append(b.parts, solid.Part{Name: name, Solid: body})
	}
	m, err := Join(make([]Op, len(all)-1), all...)
	if err != nil {
		return nil, err
	}
	m.kind = "boxes"
	b.Mesh = m
	return b, nil
}

// Parts are the boxes by name.
func (b *Boxes) Parts() []solid.Part { return b.parts }

// Stretched stretches every part.
func (b *Boxes) Stretched(k Vec) (solid.Solid, error) {
	whole, err := b.Mesh.Stretched(k)
	if err != nil {
		return nil, err
	}
	out := &Boxes{Mesh: whole.(*Mesh)}
	for _, p := range b.parts {
		s, err := solid.Stretch(p.Solid, k)
		if err != nil {
			return nil, err
		}
		out.parts = append(out.parts, solid.Part{Name: p.Name, Solid: s})
	}
	return out, nil
}

var (
	_ solid.Parted      = (*Boxes)(nil)
	_ solid.Stretchable = (*Boxes)(nil)
	_ solid.Stretchable = (*Mesh)(nil)
	_ Surfaced          = (*solid.Box)(nil)
	_ Surfaced          = (*solid.Prism)(nil)
)
