package frame

import (
	"errors"
	"math"

	"gonum.org/v1/gonum/mat"
)

// Point is a place, x, y, z.
type Point [3]float64

// Similarity brings places of a drawing to the site: x' = Scale · Turn · (x - From) + To.
// In plan, Turn and Scale leave the height alone.
type Similarity struct {
	Plan     bool          `json:"plan"` // heights pass through
	Scale    float64       `json:"scale"`
	Turn     [3][3]float64 `json:"turn"` // rows; orthogonal, with the determinant -1 where mirrored
	Mirrored bool          `json:"mirrored"`
	Upright  bool          `json:"upright"` // up stays up: in plan, or because the points lie at one height
	From     Point         `json:"from"`
	To       Point         `json:"to"`
}

// Apply is where the site has a place of the drawing.
func (s *Similarity) Apply(p Point) Point {
	var d, out Point
	for i := range p {
		d[i] = p[i] - s.From[i]
	}
	for i, row := range s.Turn {
		sum := 0.0
		for k, x := range row {
			sum += float64(x * d[k])
		}
		out[i] = float64(s.Scale*sum) + s.To[i]
	}
	if s.Plan {
		out[2] = p[2]
	}
	return out
}

// Degrees is how far the drawing is turned about the upright axis, counter-clockwise,
// before which it is mirrored at its x axis where it is.
func (s *Similarity) Degrees() float64 {
	return math.Atan2(s.Turn[1][0], s.Turn[0][0]) * 180 / math.Pi
}

var (
	// ErrFew: fewer than three pairs.
	ErrFew = errors.New("frame: fewer than three pairs of points")
	// ErrLine: the points lie on one line, or in one place.
	ErrLine = errors.New("frame: the points lie on one line")
	// ErrPlane: the points lie in one plane that is not level.
	ErrPlane = errors.New("frame: the points lie in one plane that is not level")
	// ErrNotFinite: a coordinate is no number.
	ErrNotFinite = errors.New("frame: a coordinate is not finite")
)

// Sets of points thinner than this share of their length are on a line or in a plane as
// far as a survey can tell.
const thin = 0.01

// Fit is the similarity that brings the first points of pairs to the second with the
// least sum of squares, and the residuals: where each comes out, less where it should.
// plan leaves the heights out of it.
func Fit(from, to []Point, plan bool) (*Similarity, []Point, error) {
	n := len(from)
	if n < 3 {
		return nil, nil, ErrFew
	}
	for i := range from {
		for k := range 3 {
			if x := from[i][k] + to[i][k]; math.IsNaN(x) || math.IsInf(x, 0) {
				return nil, nil, ErrNotFinite
			}
		}
	}
	s := &Similarity{Plan: plan, Upright: plan, From: middle(from), To: middle(to)}
	a, b := centred(from, s.From), centred(to, s.To)
	if plan {
		flatten(a)
		flatten(b)
	}
	if !spansPlane(a) || !spansPlane(b) {
		return nil, nil, ErrLine
	}
	if !plan && (isFlat(a) || isFlat(b)) {
		if !isLevel(a) || !isLevel(b) {
			return nil, nil, ErrPlane
		}
		s.Upright = true
		flatten(a)
		flatten(b)
	}
	s.turn(a, b)
	residuals := make([]Point, n)
	grain := 0.0 // what rounding makes of coordinates as large as these
	for _, p := range to {
		grain = max(grain, 0x1p-46*math.Abs(p[0]), 0x1p-46*math.Abs(p[1]), 0x1p-46*math.Abs(p[2]))
	}
	for i := range from {
		at := s.Apply(from[i])
		for k := range 3 {
			if d := at[k] - to[i][k]; math.Abs(d) > grain {
				residuals[i][k] = d
			}
		}
		if plan {
			residuals[i][2] = 0
		}
	}
	return s, residuals, nil
}

func middle(points []Point) (m Point) {
	for k := range 3 {
		for _, p := range points {
			m[k] += p[k] / float64(len(points))
		}
	}
	return m
}

func centred(points []Point, m Point) []Point {
	out := make([]Point, len(points))
	for i, p := range points {
		out[i] = Point{p[0] - m[0], p[1] - m[1], p[2] - m[2]}
	}
	return out
}

func flatten(points []Point) {
	for i := range points {
		points[i][2] = 0
	}
}

// turn sets rotation, mirror and scale (Umeyama 1991): with the singular values D of the
// covariance U D Vᵀ the best orthogonal matrix is U Vᵀ, whatever its determinant, and the
// scale is tr D over the variance.
func (s *Similarity) turn(a, b []Point) {
	dims := 3
	if s.Upright {
		dims = 2
	}
	cov := mat.NewDense(dims, dims, nil)
	variance := 0.0
	for i := range a {
		for r := range dims {
			for c := range dims {
				cov.Set(r, c, cov.At(r, c)+float64(b[i][r]*a[i][c]))
			}
			variance += float64(a[i][r] * a[i][r])
		}
	}
	var svd mat.SVD
	svd.Factorize(cov, mat.SVDFull)
	var u, v, q mat.Dense
	svd.UTo(&u)
	svd.VTo(&v)
	q.Mul(&u, v.T())
	trace := 0.0
	for _, d := range svd.Values(nil) {
		trace += d
	}
	s.Scale = trace / variance
	s.Mirrored = mat.Det(&q) < 0
	s.Turn = [3][3]float64{2: {0, 0, 1}}
	for r := range dims {
		for c := range dims {
			s.Turn[r][c] = q.At(r, c)
		}
	}
}

// spread is the lengths of points about their middle along their principal axes, the
// longest first, and the axis of the shortest.
func spread(points []Point) (sizes [3]float64, shortest Point) {
	m := mat.NewSymDense(3, nil)
	for _, p := range points {
		for r := range 3 {
			for c := r; c < 3; c++ {
				m.SetSym(r, c, m.At(r, c)+float64(p[r]*p[c]))
			}
		}
	}
	var e mat.EigenSym
	e.Factorize(m, true)
	var v mat.Dense
	e.VectorsTo(&v)
	for i, x := range e.Values(nil) {
		sizes[2-i] = math.Sqrt(max(0, x))
	}
	return sizes, Point{v.At(0, 0), v.At(1, 0), v.At(2, 0)}
}

func spansPlane(points []Point) bool {
	s, _ := spread(points)
	return s[0] > 0 && s[1] > thin*s[0]
}

func isFlat(points []Point) bool {
	s, _ := spread(points)
	return s[2] <= thin*s[0]
}

// isLevel tells whether flat points lie at about one height.
func isLevel(points []Point) bool {
	s, axis := spread(points)
	return s[2] <= thin*s[0] && math.Abs(axis[2]) > 0.999
}
