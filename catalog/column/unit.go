package column

import (
	"slices"
	"sort"
	"strconv"
	"strings"
)

// Unit is a label for people: a product of named factors with integer powers,
// such as m³ or °C·h. Units are compared by their factors and never converted.
// A nil *Unit means that no unit is known. Units are immutable.
type Unit struct {
	factors []factor // sorted by symbol, no power 0, no symbol twice
}

type factor struct {
	symbol string
	power  int
}

// Symbol is the unit with one factor, nil for the empty symbol.
func Symbol(s string) *Unit {
	if s == "" {
		return nil
	}
	return &Unit{factors: []factor{{s, 1}}}
}

// Pow is the unit to an integer power; nil stays nil, and so does power 0.
func (u *Unit) Pow(n int) *Unit {
	if u == nil || n == 0 {
		return nil
	}
	p := &Unit{factors: make([]factor, len(u.factors))}
	for i, f := range u.factors {
		p.factors[i] = factor{f.symbol, f.power * n}
	}
	return p
}

// Mul is the product of two units, nil where all factors cancel. A side
// without a unit counts as a bare number.
func Mul(a, b *Unit) *Unit {
	if a == nil {
		return b
	}
	if b == nil {
		return a
	}
	powers := map[string]int{}
	for _, f := range a.factors {
		powers[f.symbol] += f.power
	}
	for _, f := range b.factors {
		powers[f.symbol] += f.power
	}
	u := &Unit{}
	for s, p := range powers {
		if p != 0 {
			u.factors = append(u.factors, factor{s, p})
		}
	}
	if len(u.factors) == 0 {
		return nil
	}
	sort.Slice(u.factors, func(i, j int) bool { return u.factors[i].symbol < u.factors[j].symbol })
	return u
}

// Div is the quotient of two units.
func Div(a, b *Unit) *Unit { return Mul(a, b.Pow(-1)) }

// SameUnit reports whether two units have the same factors.
func SameUnit(a, b *Unit) bool { return a.String() == b.String() }

// String writes the unit for tables: m², °C·h, m³/h is m³·h⁻¹.
func (u *Unit) String() string { return u.write("·", superscript) }

// ASCII writes the powers with a caret, as headings of CSV files want it: m^3.
func (u *Unit) ASCII() string {
	return u.write("*", func(n int) string { return "^" + strconv.Itoa(n) })
}

func (u *Unit) write(times string, power func(int) string) string {
	if u == nil {
		return ""
	}
	order := slices.Clone(u.factors)
	slices.SortStableFunc(order, func(a, b factor) int { return a.place() - b.place() })
	var b strings.Builder
	for _, f := range order {
		if b.Len() > 0 {
			b.WriteString(times)
		}
		b.WriteString(f.symbol)
		if f.power != 1 {
			b.WriteString(power(f.power))
		}
	}
	return b.String()
}

// place says where a factor is written: those above the line first, a time
// last among its like, as one says cubic metre hours.
func (f factor) place() int {
	place := 0
	if f.power < 0 {
		place = 2
	}
	switch f.symbol {
	case "s", "min", "h", "d":
		place++
	}
	return place
}

func superscript(n int) string {
	const digits = "⁰¹²³⁴⁵⁶⁷⁸⁹"
	runes := []rune(digits)
	var b strings.Builder
	for _, c := range strconv.Itoa(n) {
		if c == '-' {
			b.WriteRune('⁻')
		} else {
			b.WriteRune(runes[c-'0'])
		}
	}
	return b.String()
}
