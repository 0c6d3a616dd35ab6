package solid

import (
	"errors"
	"math"
	"testing"
)

func TestStretch(t *testing.T) {
	k := Vec{X: 2, Y: 0.5, Z: 5}
	for _, e := range examples {
		p := e.prism(t)
		s, err := Stretch(p, k)
		if err != nil {
			t.Fatalf("%s: %v", e.name, err)
		}
		if want := p.Volume() * k.X * k.Y * k.Z; math.Abs(s.Volume()-want) > 1e-12*want {
			t.Errorf("%s: the stretched volume is %v, want %v", e.name, s.Volume(), want)
		}
		lo, hi := p.Bounds()
		if a, b := s.Bounds(); a != stretch(lo, k) || b != stretch(hi, k) {
			t.Errorf("%s: stretched bounds %v %v", e.name, a, b)
		}
		if s.Facts().Pieces != p.Facts().Pieces || s.Facts().Walls != p.Facts().Walls {
			t.Errorf("%s: stretched into %+v from %+v", e.name, s.Facts(), p.Facts())
		}
		back, err := Stretch(s, Vec{X: 0.5, Y: 2, Z: 1})
		if err != nil || math.Abs(back.Volume()-5*p.Volume()) > 1e-12*p.Volume() {
			t.Errorf("%s: back: %v %v", e.name, back, err)
		}
	}
	box, err := NewBox(Vec{X: 1, Y: 2, Z: 3}, Vec{X: 4, Y: 5, Z: 6})
	if err != nil {
		t.Fatal(err)
	}
	s, err := Stretch(box, k)
	if err != nil || s.Volume() != 27*5 || s.Side(Vec{X: 2, Y: 1.5, Z: 15}, 0) != On {
		t.Errorf("a stretched box: %v %v", s, err)
	}
	if same, _ := Stretch(box, Vec{X: 1, Y: 1, Z: 1}); same != Solid(box) {
		t.Error("a stretch by 1 makes another solid")
	}
	for _, bad := range []Vec{{X: 0, Y: 1, Z: 1}, {X: 1, Y: -1, Z: 1}, {X: 1, Y: 1, Z: math.NaN()}, {X: math.Inf(1), Y: 1, Z: 1}} {
		var e *StretchError
		if _, err := Stretch(box, bad); !errors.As(err, &e) {
			t.Errorf("stretched by %v: %v", bad, err)
		}
	}
}
