package predicate

import (
	"math"
	"math/big"
)

// bigs returns the coordinates as integers in units of one common power of two. It
// is the last resort for coordinates whose products leave the range of float64.
func bigs(coords ...float64) []*big.Int {
	low := math.MaxInt
	exps := make([]int, len(coords))
	out := make([]*big.Int, len(coords))
	for i, x := range coords {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			panic("predicate: a coordinate is not a finite number")
		}
		f, e := math.Frexp(x)
		out[i] = big.NewInt(int64(f * (1 << 53)))
		exps[i] = e
		if x != 0 {
			low = min(low, e)
		}
	}
	for i, v := range out {
		if v.Sign() != 0 {
			v.Lsh(v, uint(exps[i]-low))
		}
	}
	return out
}

func bigMul(a, b *big.Int) *big.Int { return new(big.Int).Mul(a, b) }
func bigSub(a, b *big.Int) *big.Int { return new(big.Int).Sub(a, b) }
func bigAdd(a, b *big.Int) *big.Int { return new(big.Int).Add(a, b) }

// bigDet2 returns a*d - b*c.
func bigDet2(a, b, c, d *big.Int) *big.Int { return bigSub(bigMul(a, d), bigMul(b, c)) }

// bigDet3 returns the determinant with rows a, b, c.
func bigDet3(a, b, c [3]*big.Int) *big.Int {
	h := bigMul(a[0], bigDet2(b[1], b[2], c[1], c[2]))
	h = bigSub(h, bigMul(a[1], bigDet2(b[0], b[2], c[0], c[2])))
	return bigAdd(h, bigMul(a[2], bigDet2(b[0], b[1], c[0], c[1])))
}

// bigRows returns the differences p[i] - p[last] for points given coordinate by
// coordinate.
func bigRows(p []*big.Int) [][3]*big.Int {
	n := len(p)/3 - 1
	rows := make([][3]*big.Int, n)
	for i := range rows {
		for k := range 3 {
			rows[i][k] = bigSub(p[3*i+k], p[3*n+k])
		}
	}
	return rows
}
