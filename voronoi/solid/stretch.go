package solid

import (
	"fmt"
	"math"
)

// Stretchable is a solid that can give itself with its coordinates multiplied.
type Stretchable interface {
	// Stretched is the solid with x, y and z multiplied by the three factors of k, which
	// are finite and greater than 0. The products are rounded, each on its own: places
	// with equal coordinates keep them equal.
	Stretched(k Vec) (Solid, error)
}

// StretchError is a solid that cannot be stretched, or a factor that is not a number
// greater than 0.
type StretchError struct {
	Kind   string // of the solid
	Factor Vec
}

func (e *StretchError) Error() string {
	return fmt.Sprintf("solid: a %s stretched by (%g, %g, %g)", e.Kind, e.Factor.X, e.Factor.Y, e.Factor.Z)
}

// Stretch is s with x, y and z multiplied by the three factors of k. The error is a
// *[StretchError] or an *[Error].
func Stretch(s Solid, k Vec) (Solid, error) {
	for _, f := range [3]float64{k.X, k.Y, k.Z} {
		if !(f > 0) || math.IsInf(f, 0) {
			return nil, &StretchError{s.Facts().Kind, k}
		}
	}
	if k == (Vec{X: 1, Y: 1, Z: 1}) {
		return s, nil
	}
	t, ok := s.(Stretchable)
	if !ok {
		return nil, &StretchError{s.Facts().Kind, k}
	}
	return t.Stretched(k)
}

func stretch(v, k Vec) Vec { return Vec{X: v.X * k.X, Y: v.Y * k.Y, Z: v.Z * k.Z} }

// Stretched is the box with its coordinates multiplied.
func (b *Box) Stretched(k Vec) (Solid, error) {
	lo, hi := b.Bounds()
	box, err := NewBox(stretch(lo, k), stretch(hi, k))
	if err != nil {
		return nil, err
	}
	return box, nil
}

// Stretched is the prism with its coordinates multiplied.
func (p *Prism) Stretched(k Vec) (Solid, error) {
	ring := func(given []Vec2) []Vec2 {
		out := make([]Vec2, len(given))
		for i, v := range given {
			out[i] = Vec2{X: v.X * k.X, Y: v.Y * k.Y}
		}
		return out
	}
	holes := make([][]Vec2, len(p.holes))
	for i, h := range p.holes {
		holes[i] = ring(h)
	}
	prism, err := NewPrism(ring(p.outer), holes, p.z0*k.Z, p.z1*k.Z)
	if err != nil {
		return nil, err
	}
	return prism, nil
}

var (
	_ Stretchable = (*Box)(nil)
	_ Stretchable = (*Prism)(nil)
)
