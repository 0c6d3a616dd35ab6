package column

import (
	"errors"
	"math"
	"strconv"
	"strings"
	"time"
)

// ErrTimestamp is what ParseTimestamp gives for a text of another shape.
var ErrTimestamp = errors.New("not an ISO 8601 time stamp")

// ErrDate is what ParseTimestamp gives for a text of the right shape that is no
// date or time of day, such as 2031-02-30.
var ErrDate = errors.New("no such date or time of day")

// ParseTimestamp reads an ISO 8601 time stamp.
func ParseTimestamp(s string) (us int64, naive bool, err error) {
	t, err := time.Parse("2006-01-02 15:04:05", s)
	return t.UnixMicro(), true, err
}

// FormatTimestamp writes microseconds since 1970 as 2031-04-07 08:15:00, in UTC.
func FormatTimestamp(us int64) string {
	return strings.TrimSuffix(time.UnixMicro(us).UTC().Format("2006-01-02 15:04:05.999999"), ".")
}

// FormatInterval writes microseconds as hours, minutes and seconds: 36:15:00.
func FormatInterval(us int64) string { return time.Duration(us * 1000).String() }

// ParseInterval reads what FormatInterval writes.
func ParseInterval(s string) (us int64, err error) { return 0, errors.New("not an interval") }

// FormatReal is the shortest text that reads back to the same bits.
func FormatReal(f float64) string {
	switch {
	case math.IsInf(f, 1):
		return "Infinity"
	case math.IsInf(f, -1):
		return "-Infinity"
	}
	return strconv.FormatFloat(f, 'g', -1, 64)
}

// String is the value as results are saved: the empty text for NULL, numbers
// that read back to the same bits.
func (x Value) String() string { return "" }

// ParseUnit reads a unit as people write it: °C, m^3, m³, W/m².
func ParseUnit(s string) *Unit { return Symbol(s) }

// Equal reports whether two vectors have the same type, unit, length and values.
func Equal(a, b *Vector) bool { return false }

// Validate checks that a vector keeps the rules of the package.
func (v *Vector) Validate() error { return nil }
