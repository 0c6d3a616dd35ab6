package reader

import (
	"math"
	"strconv"
	"strings"
)

// Bounds are what is known of a measured value: both are equal where it was
// measured, and differ where the instrument only said that it was below or above
// what it can tell.
type Bounds struct{ Low, High float64 }

// ParseCensored reads a value that may be a bound: 0.25, <0.1, ≤ 0.1, >5. What is
// below a limit lies between 0 and it, since such values are amounts; what is above
// one has no upper bound and lies between it and Infinity. ok is false for what is
// neither, and for a limit of 0 or less, below which there is no amount.
func ParseCensored(text string, mark byte) (b Bounds, ok bool) {
	text = strings.TrimSpace(text)
	side := byte(0)
	for _, sign := range []string{"<=", "≤", "<", ">=", "≥", ">"} {
		if rest, found := strings.CutPrefix(text, sign); found {
			text, side = strings.TrimSpace(rest), '>'
			if strings.HasPrefix(sign, "<") || sign == "≤" {
				side = '<'
			}
			break
		}
	}
	if mark != '.' {
		if strings.Contains(text, ".") {
			return b, false
		}
		text = strings.Replace(text, string(mark), ".", 1)
	}
	for _, c := range text {
		if (c < '0' || c > '9') && !strings.ContainsRune("+-.eE", c) {
			return b, false
		}
	}
	x, err := strconv.ParseFloat(text, 64)
	if err != nil || math.IsInf(x, 0) {
		return b, false
	}
	x += 0 // never -0
	switch side {
	case '<':
		return Bounds{0, x}, x > 0
	case '>':
		return Bounds{x, math.Inf(1)}, true
	}
	return Bounds{x, x}, true
}
