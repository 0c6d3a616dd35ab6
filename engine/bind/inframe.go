package bind

import (
	"math"
	"strings"

	"nearcell/catalog/frame"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// InFrame is a solid that is written in the coordinates of a drawing, in those of the
// site: boxes and prisms become prisms there. name is the frame's, for messages.
func InFrame(env *Env, s lang.Solid, f *frame.Similarity, name string) (lang.Solid, error) {
	return newBinder(env).inFrame(s, f, name)
}

func (b *binder) inFrame(s lang.Solid, f *frame.Similarity, name string) (lang.Solid, error) {
	if !f.Upright {
		return nil, b.notYet(s, "a solid IN FRAME "+name+", which is turned in space,").
			WithHint("a frame from px, py, x, y alone keeps upright what is upright")
	}
	switch s := s.(type) {
	case *lang.SolidOp:
		left, err := b.inFrame(s.Left, f, name)
		if err != nil {
			return nil, err
		}
		right, err := b.inFrame(s.Right, f, name)
		if err != nil {
			return nil, err
		}
		c := *s
		c.Left, c.Right = left, right
		return &c, nil
	case *lang.BoxSolid:
		own, err := b.canonical(s)
		if err != nil {
			return nil, err
		}
		from, to := own.(*lang.BoxSolid).From, own.(*lang.BoxSolid).To
		x0, y0, x1, y1 := number(from.X), number(from.Y), number(to.X), number(to.Y)
		return &lang.PrismSolid{At: s.At, Outer: moved(s.At, f, [][2]float64{{x0, y0}, {x1, y0}, {x1, y1}, {x0, y1}}),
			From: height(s.At, f, from.Z), To: height(s.At, f, to.Z)}, nil
	case *lang.PrismSolid:
		own, err := b.canonical(s)
		if err != nil {
			return nil, err
		}
		p := own.(*lang.PrismSolid)
		out := &lang.PrismSolid{At: s.At, Outer: moved(s.At, f, corners(p.Outer)), From: height(s.At, f, p.From), To: height(s.At, f, p.To)}
		for _, h := range p.Holes {
			out.Holes = append(out.Holes, moved(s.At, f, corners(h)))
		}
		return out, nil
	case *lang.SolidName, *lang.EnvelopeSolid:
		return nil, problem.New("control-points", b.at(s), "IN FRAME %s speaks of a solid that is written out, and %s has coordinates of its own", name, b.text(s)).
			WithHint("make each part IN FRAME %s under a name of its own, then combine the names without IN FRAME", name)
	}
	what, _, _ := strings.Cut(b.text(s), " ")
	return nil, b.notYet(s, what+" IN FRAME")
}

func corners(r *lang.Ring) [][2]float64 {
	var out [][2]float64
	for _, c := range r.Corners {
		out = append(out, [2]float64{number(c.X), number(c.Y)})
	}
	return out
}

// moved is a ring at the site.
func moved(at lang.At, f *frame.Similarity, plan [][2]float64) *lang.Ring {
	r := &lang.Ring{At: at}
	for _, c := range plan {
		p := f.Apply(frame.Point{c[0], c[1], f.From[2]})
		r.Corners = append(r.Corners, &lang.Corner{At: at, X: literalNumber(tidy(p[0]), at), Y: literalNumber(tidy(p[1]), at)})
	}
	return r
}

// height is a height at the site.
func height(at lang.At, f *frame.Similarity, e lang.Expr) lang.Expr {
	return literalNumber(tidy(f.Apply(frame.Point{f.From[0], f.From[1], number(e)})[2]), at)
}

// tidy takes the last digits off, a tenth of a nanometre: walls that meet in the drawing
// meet at the site.
func tidy(x float64) float64 {
	if math.Abs(x) >= 1e5 {
		return math.Round(x*1e8)/1e8 + 0
	}
	return math.Round(x*1e10)/1e10 + 0
}
