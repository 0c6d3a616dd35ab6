package csv

import (
	"bytes"
	"strconv"

	"nearcell/catalog/column"
)

// class is what a value looks like.
type class uint8

const (
	isWord      class = iota
	isInt             // an integer of 64 bits
	isLongInt         // a longer one
	isReal            // any other number
	isNotFinite       // NaN or an infinity
	isBool
	isTime // the shape of a time stamp, perhaps of no real date
)

// look is what is known of a value before the type of its column is.
type look struct {
	class class
	zeros bool // an unsigned integer that begins with a superfluous zero
	plain bool // an integer written as a program would write it
}

// lookAt classifies a trimmed value that is not missing.
func lookAt(b []byte, mark byte) look {
	switch c := b[0]; {
	case c >= '0' && c <= '9', c == '-', c == '+', c == mark:
		if l := lookAtNumber(b, mark); l.class != isWord {
			return l
		}
		if notFinite(b) {
			return look{class: isNotFinite}
		}
		if _, _, err := column.ParseTimestamp(string(b)); err != column.ErrTimestamp {
			return look{class: isTime}
		}
	case notFinite(b):
		return look{class: isNotFinite}
	default:
		if _, ok := parseBool(b); ok {
			return look{class: isBool}
		}
	}
	return look{}
}

// lookAtNumber reads [sign] digits [mark digits] [e [sign] digits], where one
// side of the mark may be empty.
func lookAtNumber(b []byte, mark byte) look {
	i := 0
	signed := b[0] == '-' || b[0] == '+'
	if signed {
		i++
	}
	whole := digitsAt(b, i)
	first := i
	i += whole
	if i == len(b) && whole > 0 {
		return lookAtInteger(b, first, whole)
	}
	fraction := 0
	if i < len(b) && b[i] == mark {
		fraction = digitsAt(b, i+1)
		i += 1 + fraction
	}
	if whole+fraction == 0 {
		return look{}
	}
	if i < len(b) && (b[i] == 'e' || b[i] == 'E') {
		i++
		if i < len(b) && (b[i] == '-' || b[i] == '+') {
			i++
		}
		n := digitsAt(b, i)
		if n == 0 {
			return look{}
		}
		i += n
	}
	if i < len(b) {
		return look{}
	}
	return look{class: isReal}
}

// lookAtInteger looks at an integer whose digits are b[first:first+n].
func lookAtInteger(b []byte, first, n int) look {
	zeros := n > 1 && b[first] == '0'
	if b[0] == '-' && len(bytes.Trim(b[first:], "0")) == 0 {
		return look{class: isReal} // -0 is no integer: its sign would be lost
	}
	l := look{class: isInt, zeros: zeros && first == 0, plain: !zeros && b[0] != '+'}
	if n > 18 {
		if _, err := strconv.ParseInt(string(b), 10, 64); err != nil {
			l.class, l.plain = isLongInt, false
		}
	}
	return l
}

// isGrouped tells a number with marks between thousands: 1,234 or 12 345.5 or 1'234.
func isGrouped(b []byte, mark byte) bool {
	if b[0] == '-' || b[0] == '+' {
		b = b[1:]
	}
	n := digitsAt(b, 0)
	if n < 1 || n > 3 {
		return false
	}
	b = b[n:]
	for _, between := range []string{string(otherMark(mark)), " ", "'", "\u00a0", "\u202f", "\u2009", "\u2019"} {
		rest, groups := b, 0
		for {
			behind, ok := bytes.CutPrefix(rest, []byte(between))
			if !ok || digitsAt(behind, 0) != 3 {
				break
			}
			rest, groups = behind[3:], groups+1
		}
		if groups == 0 {
			continue
		}
		if len(rest) > 0 && rest[0] == mark {
			rest = rest[1+digitsAt(rest, 1):]
		}
		return len(rest) == 0
	}
	return false
}

func digitsAt(b []byte, i int) int {
	n := 0
	for i+n < len(b) && b[i+n] >= '0' && b[i+n] <= '9' {
		n++
	}
	return n
}

func notFinite(b []byte) bool {
	if b[0] == '-' || b[0] == '+' {
		b = b[1:]
	}
	return bytes.EqualFold(b, []byte("nan")) || bytes.EqualFold(b, []byte("inf")) || bytes.EqualFold(b, []byte("infinity"))
}

func parseBool(b []byte) (value, ok bool) {
	switch {
	case bytes.EqualFold(b, []byte("true")):
		return true, true
	case bytes.EqualFold(b, []byte("false")):
		return false, true
	}
	return false, false
}

// tens are the powers of ten that float64 holds.
var tens = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22}

// quickReal reads a number without an exponent whose digits, the mark left out, are
// below 2^53: these and the power of ten are exact, so that one division gives the
// nearest float64 (Clinger, 1990). ok is false for all others.
func quickReal(b []byte, mark byte) (f float64, ok bool) {
	i, negative := 0, false
	if b[0] == '-' || b[0] == '+' {
		negative = b[0] == '-'
		i++
	}
	if len(b)-i > 18 || len(b) == i {
		return 0, false
	}
	n, behind, digits := uint64(0), -1, 0
	for ; i < len(b); i++ {
		c := b[i]
		switch d := c - '0'; {
		case d <= 9:
			n = 10*n + uint64(d)
			digits++
		case c == mark && behind < 0:
			behind = digits
		default:
			return 0, false
		}
	}
	if digits == 0 || n >= 1<<53 {
		return 0, false
	}
	f = float64(n)
	if behind >= 0 {
		f /= tens[digits-behind]
	}
	if negative {
		f = -f
	}
	return f, true
}

// parseReal reads what lookAtNumber took for a number. It rounds to the nearest
// float64; ok is false where there is none.
func parseReal(b []byte, mark byte) (f float64, ok bool) {
	if mark != '.' {
		if i := bytes.IndexByte(b, mark); i >= 0 {
			b = bytes.Clone(b)
			b[i] = '.'
		}
	}
	f, err := strconv.ParseFloat(string(b), 64)
	return f, err == nil
}
