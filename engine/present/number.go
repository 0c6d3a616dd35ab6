package present

import (
	"math"
	"strconv"
	"strings"

	"nearcell/catalog/column"
)

// DefaultDigits is the number of significant digits of a table unless SET
// DIGITS says another.
const DefaultDigits = 6

// MaxDigits is enough for every float64 to read back to the same bits.
const MaxDigits = 17

// Number writes a REAL for people: rounded to significant digits, without
// trailing zeros, ∞ for Infinity. The digits before the decimal point are never
// replaced by zeros; very large and very small numbers get an exponent.
func Number(f float64, digits int) string {
	switch {
	case math.IsInf(f, 1):
		return "∞"
	case math.IsInf(f, -1):
		return "-∞"
	case f == 0:
		return "0" // also for -0
	}
	exponent := decimalExponent(f, digits)
	if exponent >= 15 || exponent < -5 {
		return trimExponent(strconv.FormatFloat(f, 'e', digits-1, 64))
	}
	decimals := digits - 1 - exponent
	if decimals < 0 {
		decimals = 0
	}
	s := strconv.FormatFloat(f, 'f', decimals, 64)
	if decimals > 0 {
		s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
	}
	return s
}

// decimalExponent is the power of ten of the first digit after rounding.
func decimalExponent(f float64, digits int) int {
	s := strconv.FormatFloat(f, 'e', digits-1, 64)
	exponent, err := strconv.Atoi(s[strings.IndexByte(s, 'e')+1:])
	if err != nil {
		return 0
	}
	return exponent
}

func trimExponent(s string) string {
	mantissa, exponent, _ := strings.Cut(s, "e")
	if strings.Contains(mantissa, ".") {
		mantissa = strings.TrimRight(strings.TrimRight(mantissa, "0"), ".")
	}
	return mantissa + "e" + strings.TrimPrefix(exponent, "+")
}

// Cell writes one value of a table for people; NULL is the empty text.
func Cell(v *column.Vector, row, digits int) string {
	if v.IsNull(row) {
		return ""
	}
	switch v.Type {
	case column.Integer:
		return strconv.FormatInt(v.I[row], 10)
	case column.Real:
		return Number(v.F[row], digits)
	case column.Boolean:
		return booleanWord(v, row)
	case column.Timestamp:
		return column.FormatTimestamp(v.I[row])
	case column.Interval:
		return column.FormatInterval(v.I[row])
	case column.Point:
		p := v.F[3*row : 3*row+3]
		return "(" + Number(p[0], digits) + ", " + Number(p[1], digits) + ", " + Number(p[2], digits) + ")"
	}
	return oneLine(v.Text(row))
}

func booleanWord(v *column.Vector, row int) string {
	if column.Bit(v.Bits, row) {
		return "TRUE"
	}
	return "FALSE"
}

// oneLine keeps a text from breaking the table or driving the terminal.
func oneLine(s string) string {
	clean := true
	for _, r := range s {
		if r < ' ' || r == 0x7f || r >= 0x80 && r < 0xa0 {
			clean = false
			break
		}
	}
	if clean {
		return s
	}
	return strings.Map(func(r rune) rune {
		switch {
		case r == '\n':
			return '⏎'
		case r < ' ' || r == 0x7f || r >= 0x80 && r < 0xa0:
			return ' '
		}
		return r
	}, s)
}
