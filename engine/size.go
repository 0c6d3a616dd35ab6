package engine

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// sizes are the units of bytes.
var sizes = []struct {
	suffix string
	factor float64
}{
	{"KiB", 1 << 10}, {"MiB", 1 << 20}, {"GiB", 1 << 30}, {"TiB", 1 << 40},
	{"KB", 1e3}, {"MB", 1e6}, {"GB", 1e9}, {"TB", 1e12}, {"B", 1},
}

// ParseSize reads a number of bytes such as 8GiB, 500MB or 0.
func ParseSize(text string) (int64, bool) {
	number, factor := text, 1.0
	for _, s := range sizes {
		if rest, ok := strings.CutSuffix(text, s.suffix); ok {
			number, factor = rest, s.factor
			break
		}
	}
	x, err := strconv.ParseFloat(strings.TrimSpace(number), 64)
	if err != nil || !(x >= 0) || x*factor > math.MaxInt64/2 {
		return 0, false
	}
	return int64(x * factor), true
}

// sizeText is a number of bytes for reading, in the largest unit that leaves it exact or
// else to three digits.
func sizeText(n int64) string {
	if n == 0 {
		return "0"
	}
	unit, factor := "B", int64(1)
	for _, s := range sizes[:4] {
		if n >= int64(s.factor) {
			unit, factor = s.suffix, int64(s.factor)
		}
	}
	if n%factor == 0 {
		return fmt.Sprintf("%d%s", n/factor, unit)
	}
	return strconv.FormatFloat(float64(n)/float64(factor), 'g', 3, 64) + unit
}
