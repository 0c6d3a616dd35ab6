package column

import (
	"strconv"
	"strings"
	"unicode/utf8"
)

// ParseUnit reads a unit as people write it: °C, m^3, m³, W/m^2, µg·m⁻³,
// kg*m^2/s. It reads back whatever String and ASCII write.
//
// Factors are joined by · or * or divided by / (which reaches only as far as
// the next factor); a power is a caret and an integer or raised digits. For
// lengths m3 is m³. Blanks around these marks do not count; a factor has none
// inside, no bracket and no digit in front. "", "-" and "1" are
// no unit. A text of any other form, such as "% of full scale (dry)", is a unit
// with that text as its only factor: units are labels, and a label may say what
// it likes.
//
// Characters that look the same are made the same: the Greek µ and the micro
// sign, the degree sign and the raised o before C and F, ℃ and °C, the Kelvin
// sign and K.
func ParseUnit(s string) *Unit {
	s = sameLooks.Replace(strings.TrimSpace(s))
	if s == "" || s == "-" || s == "1" {
		return nil
	}
	u, ok := parseProduct(s)
	if !ok {
		return Symbol(s)
	}
	return u
}

var sameLooks = strings.NewReplacer(
	"μ", "µ", // Greek mu to micro sign
	"ºC", "°C", "ºF", "°F", // masculine ordinal indicator to degree sign
	"℃", "°C", "℉", "°F",
	"\u212A", "K",
	"−", "-", // minus sign
	"⋅", "·", "∙", "·", // other raised dots
)

func parseProduct(s string) (*Unit, bool) {
	var u *Unit
	sign := 1
	for first := true; ; first = false {
		end := strings.IndexAny(s, "·*/")
		part := s
		if end >= 0 {
			part = s[:end]
		}
		part = strings.TrimSpace(part)
		if part == "1" && first && end >= 0 && s[end] == '/' {
			// 1/h: nothing above the line
		} else {
			symbol, power, ok := parseFactor(part)
			if !ok {
				return nil, false
			}
			u = Mul(u, Symbol(symbol).Pow(sign*power))
		}
		if end < 0 {
			return u, true
		}
		sign = 1
		if s[end] == '/' {
			sign = -1
		}
		_, width := utf8.DecodeRuneInString(s[end:])
		s = s[end+width:]
	}
}

const maxPower = 99 // beyond it the text is taken as a label

// parseFactor splits m^3, m³ or m3 into symbol and power.
func parseFactor(s string) (symbol string, power int, ok bool) {
	symbol, digits := s, "1"
	if before, after, found := strings.Cut(s, "^"); found {
		symbol, digits = before, strings.TrimSpace(after)
	} else if i := strings.IndexAny(s, "⁻⁰¹²³⁴⁵⁶⁷⁸⁹"); i >= 0 {
		symbol, digits = s[:i], plainDigits(s[i:])
	} else if isLength(s) {
		symbol, digits = s[:len(s)-1], s[len(s)-1:]
	}
	power, err := strconv.Atoi(digits)
	if err != nil || strconv.Itoa(power) != digits || power == 0 || power > maxPower || power < -maxPower {
		return "", 0, false
	}
	symbol = strings.TrimSpace(symbol)
	switch {
	case symbol == "", isDigit(symbol[0]), strings.ContainsAny(symbol, "^⁻⁰¹²³⁴⁵⁶⁷⁸⁹ \t()[]"):
		return "", 0, false
	case isLength(symbol): // m2^2 would read back as another unit
		return "", 0, false
	}
	return symbol, power, true
}

// isLength reports whether s is a length with a plain 2 or 3 behind it.
func isLength(s string) bool {
	n := len(s) - 1
	return n > 0 && (s[n] == '2' || s[n] == '3') && lengths[s[:n]]
}

var lengths = map[string]bool{"m": true, "dm": true, "cm": true, "mm": true, "µm": true, "km": true, "ft": true, "in": true}

// plainDigits turns raised digits into plain ones; anything else stays.
func plainDigits(s string) string {
	return raised.Replace(s)
}

var raised = strings.NewReplacer("⁻", "-", "⁰", "0", "¹", "1", "²", "2", "³", "3", "⁴", "4",
	"⁵", "5", "⁶", "6", "⁷", "7", "⁸", "8", "⁹", "9")
