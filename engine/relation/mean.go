package relation

import (
	"math"

	"nearcell/catalog/column"
	"nearcell/voronoi"
)

// means gives, for DUPLICATES MEAN, the input with the numbers of the first row
// of each place replaced by the means over its rows: what is a logarithm or goes round
// has a mean of its own kind (Clauses.Means). NULLs are left out of a
// mean; where all are NULL it is NULL. Sums run in the order of identifiers and
// are compensated (Neumaier 1974).
func means(b *Bound, input *column.Table, parts []*Part) *column.Table {
	any := false
	for _, p := range parts {
		any = any || p.Share != nil
	}
	out := &column.Table{Schema: input.Schema, Cols: append([]column.Vector(nil), input.Cols...), N: input.N}
	for c := range out.Cols {
		if !b.averaged(c) {
			continue
		}
		v := asReal(&input.Cols[c])
		if any {
			for _, p := range parts {
				meanOfPlaces(p, b.mean(c), &input.Cols[c], &v)
			}
		}
		out.Cols[c] = v
	}
	return out
}

// asReal is a copy of a numeric column as REAL.
func asReal(v *column.Vector) column.Vector {
	out := column.New(column.Real, v.Unit, v.N)
	for i := range v.N {
		switch {
		case v.IsNull(i):
			out.SetNull(i)
		case v.Type == column.Integer:
			out.F[i] = float64(v.I[i])
		default:
			out.F[i] = v.F[i]
		}
	}
	return out
}

// MeanKind is how values of a column make a mean.
type MeanKind int8

const (
	PlainMean     MeanKind = iota
	LevelMean              // dB: by energy, as LEVEL_AVG (ISO 1996-1)
	AcidMean               // pH: that of the mean concentration
	DirectionMean          // degrees: by vectors, as DIRECTION_AVG (Mardia & Jupp 2000)
)

// mean is how the values of a column of the input make a mean.
func (b *Bound) mean(i int) MeanKind {
	if i < len(b.Clauses.Means) {
		return b.Clauses.Means[i]
	}
	return PlainMean
}

// placeMean gathers the values of one place.
type placeMean struct {
	n         int
	sum, sine voronoi.Sum
	low, high float64
}

// add takes a value; base is one of the place, so that powers stay near 1.
func (m *placeMean) add(kind MeanKind, x, base float64) {
	if m.n == 0 {
		m.low, m.high = x, x
	}
	m.n++
	m.low, m.high = math.Min(m.low, x), math.Max(m.high, x)
	switch kind {
	case LevelMean:
		m.sum.Add(math.Pow(10, (x-base)/10))
	case AcidMean:
		m.sum.Add(math.Pow(10, base-x))
	case DirectionMean:
		sin, cos := math.Sincos(math.Mod(x, 360) * (math.Pi / 180))
		m.sum.Add(cos)
		m.sine.Add(sin)
	default:
		m.sum.Add(x)
	}
}

// value is the mean; there is none of no value and of directions that cancel out.
func (m *placeMean) value(kind MeanKind, base float64) (float64, bool) {
	if m.n == 0 {
		return 0, false
	}
	mean := m.sum.Value() / float64(m.n)
	switch kind {
	case LevelMean:
		return max(m.low, min(m.high, base+float64(10*math.Log10(mean)))), true
	case AcidMean:
		return max(m.low, min(m.high, base-math.Log10(mean))), true
	case DirectionMean:
		if m.low == m.high {
			return m.low, true
		}
		sine := m.sine.Value() / float64(m.n)
		if math.Hypot(mean, sine) < 1e-12 {
			return 0, false
		}
		angle := math.Atan2(sine, mean) * (180 / math.Pi)
		if angle < 0 {
			angle += 360
		}
		if angle >= 360 {
			angle = 0
		}
		return angle + 0, true
	}
	return mean, true
}

// largestOf is the value that powers are told from: the one whose power is the greatest.
func largestOf(kind MeanKind, x, base float64) float64 {
	if kind == AcidMean {
		return math.Min(x, base)
	}
	return math.Max(x, base)
}

func meanOfPlaces(p *Part, kind MeanKind, from, to *column.Vector) {
	if p.Share == nil {
		return
	}
	sums := make([]placeMean, len(p.Sites))
	base := make([]float64, len(p.Sites))
	first := make([]int32, len(p.Sites))
	for k := len(p.Rows) - 1; k >= 0; k-- {
		first[p.Site[k]] = p.Rows[k]
	}
	value := func(row int32) float64 {
		if from.Type == column.Integer {
			return float64(from.I[row])
		}
		return from.F[row]
	}
	started := make([]bool, len(p.Sites))
	for k, row := range p.Rows {
		if s := p.Site[k]; !from.IsNull(int(row)) {
			if x := value(row); started[s] {
				base[s] = largestOf(kind, x, base[s])
			} else {
				base[s], started[s] = x, true
			}
		}
	}
	for k, row := range p.Rows {
		if s := p.Site[k]; !from.IsNull(int(row)) {
			sums[s].add(kind, value(row), base[s])
		}
	}
	for k, row := range p.Rows {
		s := p.Site[k]
		if p.Share[k] == 1 || first[s] != row {
			continue
		}
		x, ok := sums[s].value(kind, base[s])
		if !ok {
			to.SetNull(int(row))
			continue
		}
		setReal(to, int(row), x)
	}
}

// setReal makes value i present.
func setReal(v *column.Vector, i int, x float64) {
	if v.Valid != nil {
		column.SetBit(v.Valid, i)
	}
	v.F[i] = x
}
