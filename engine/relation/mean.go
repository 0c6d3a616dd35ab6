package relation

import (
	"nearcell/catalog/column"
	"nearcell/voronoi"
)

// means gives, for DUPLICATES MEAN, the input with the numbers of the first row
// of each place replaced by the means over its rows. NULLs are left out of a
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
				meanOfPlaces(p, &input.Cols[c], &v)
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

func meanOfPlaces(p *Part, from, to *column.Vector) {
	if p.Share == nil {
		return
	}
	sums := make([]voronoi.Sum, len(p.Sites))
	counts := make([]int, len(p.Sites))
	first := make([]int32, len(p.Sites))
	for k := len(p.Rows) - 1; k >= 0; k-- {
		first[p.Site[k]] = p.Rows[k]
	}
	for k, row := range p.Rows {
		if from.IsNull(int(row)) {
			continue
		}
		x := 0.0
		if from.Type == column.Integer {
			x = float64(from.I[row])
		} else {
			x = from.F[row]
		}
		sums[p.Site[k]].Add(x)
		counts[p.Site[k]]++
	}
	for k, row := range p.Rows {
		s := p.Site[k]
		if p.Share[k] == 1 || first[s] != row {
			continue
		}
		if counts[s] == 0 {
			to.SetNull(int(row))
			continue
		}
		setReal(to, int(row), sums[s].Value()/float64(counts[s]))
	}
}

// setReal makes value i present.
func setReal(v *column.Vector, i int, x float64) {
	if v.Valid != nil {
		column.SetBit(v.Valid, i)
	}
	v.F[i] = x
}
