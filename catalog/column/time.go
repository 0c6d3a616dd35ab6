package column

import (
	"errors"
	"strconv"
	"strings"
)

// ErrTimestamp is what ParseTimestamp gives for a text of another shape.
var ErrTimestamp = errors.New("not an ISO 8601 time stamp")

// ErrDate is what ParseTimestamp gives for a text of the right shape that is no
// date or time of day, such as 2031-02-30.
var ErrDate = errors.New("no such date or time of day")

// ErrInterval is what ParseInterval gives for a text of another shape.
var ErrInterval = errors.New("not an interval as hours:minutes:seconds")

const (
	microsecond = 1
	second      = 1_000_000 * microsecond
	minute      = 60 * second
	hour        = 60 * minute
	day         = 24 * hour

	// The first and the last microsecond that a time stamp is read as: the
	// years 1 to 9999 in UTC.
	minTimestamp = -719162 * day
	maxTimestamp = 2932897*day - 1
)

// ParseTimestamp reads an ISO 8601 time stamp in its extended form: a date
// 2031-04-07, alone or followed by T or a blank and a time of day 08:15,
// 08:15:00 or 08:15:00.25 (up to microseconds; further digits must be zeros, a
// comma may stand for the point), and that by Z, UTC or an offset +02:00, +0200
// or +02, before which one blank may stand. Without an offset the time is taken
// as UTC and naive is true. Years run from 1 to 9999; there are no leap seconds
// and no 24:00.
//
// Of the two errors ErrTimestamp says that the text has another shape, ErrDate
// that it has the shape and is no time.
func ParseTimestamp(s string) (us int64, naive bool, err error) {
	p := scanner{s: s}
	y, m, d := p.digits(4), 0, 0
	p.byte('-')
	m = p.digits(2)
	p.byte('-')
	d = p.digits(2)
	if p.bad {
		return 0, false, ErrTimestamp
	}
	naive = true
	wrong := y < 1 || m < 1 || m > 12 || d < 1 || d > daysIn(y, m)
	if !p.done() {
		if !p.take('T') && !p.take('t') {
			p.byte(' ')
		}
		clock, ok := p.clock()
		us, wrong = clock, wrong || !ok
		if !p.done() {
			naive = false
			offset, ok := p.offset()
			us, wrong = us-offset, wrong || !ok
		}
	}
	if p.bad || !p.done() {
		return 0, false, ErrTimestamp
	}
	if wrong {
		return 0, false, ErrDate
	}
	us += daysSince1970(y, m, d) * day
	if us < minTimestamp || us > maxTimestamp { // an offset led out of the years
		return 0, false, ErrDate
	}
	return us, naive, nil
}

// clock reads hh:mm[:ss[.ffffff]]; ok says that there is such a time of day.
func (p *scanner) clock() (us int64, ok bool) {
	h := p.digits(2)
	p.byte(':')
	m := p.digits(2)
	s, frac := 0, int64(0)
	if p.take(':') {
		s = p.digits(2)
		if p.take('.') || p.take(',') {
			frac = p.fraction()
		}
	}
	return int64(h)*hour + int64(m)*minute + int64(s)*second + frac, h < 24 && m < 60 && s < 60
}

// fraction reads the digits after the point as microseconds.
func (p *scanner) fraction() int64 {
	f, n := int64(0), 0
	for ; p.i < len(p.s) && isDigit(p.s[p.i]); p.i++ {
		c := p.s[p.i]
		if n < 6 {
			f = 10*f + int64(c-'0')
		} else if c != '0' {
			p.bad = true // finer than it can be kept
		}
		n++
	}
	if n == 0 {
		p.bad = true
	}
	for ; n < 6; n++ {
		f *= 10
	}
	return f
}

// offset reads Z, UTC, ±hh, ±hh:mm or ±hhmm.
func (p *scanner) offset() (us int64, ok bool) {
	p.take(' ')
	switch {
	case p.take('Z') || p.take('z'):
		return 0, true
	case strings.HasPrefix(p.s[p.i:], "UTC"):
		p.i += 3
		return 0, true
	}
	sign := int64(1)
	if p.take('-') {
		sign = -1
	} else {
		p.byte('+')
	}
	h, m := p.digits(2), 0
	if p.take(':') || !p.bad && !p.done() {
		m = p.digits(2)
	}
	return sign * (int64(h)*hour + int64(m)*minute), h < 24 && m < 60
}

// scanner walks over a text; the first thing that does not fit sets bad.
type scanner struct {
	s   string
	i   int
	bad bool
}

func (p *scanner) done() bool { return p.i >= len(p.s) }

func (p *scanner) take(c byte) bool {
	if p.i < len(p.s) && p.s[p.i] == c {
		p.i++
		return true
	}
	return false
}

func (p *scanner) byte(c byte) {
	if !p.take(c) {
		p.bad = true
	}
}

func (p *scanner) digits(n int) int {
	x := 0
	for range n {
		if p.i >= len(p.s) || !isDigit(p.s[p.i]) {
			p.bad = true
			return 0
		}
		x = 10*x + int(p.s[p.i]-'0')
		p.i++
	}
	return x
}

func isDigit(c byte) bool { return '0' <= c && c <= '9' }

func leap(y int) bool { return y%4 == 0 && (y%100 != 0 || y%400 == 0) }

func daysIn(y, m int) int {
	switch m {
	case 2:
		if leap(y) {
			return 29
		}
		return 28
	case 4, 6, 9, 11:
		return 30
	}
	return 31
}

// daysSince1970 counts days in the proleptic Gregorian calendar. The year is
// taken to begin in March, so that the leap day is its last day.
func daysSince1970(y, m, d int) int64 {
	if m <= 2 {
		y--
		m += 12
	}
	era := int64(y / 400) // y is 0 or more here
	yearOfEra := int64(y) - 400*era
	dayOfYear := int64((153*(m-3)+2)/5 + d - 1)
	dayOfEra := 365*yearOfEra + yearOfEra/4 - yearOfEra/100 + dayOfYear
	return 146097*era + dayOfEra - 719468
}

// civil is the date of a day counted from 1970, the inverse of daysSince1970.
func civil(days int64) (y int64, m, d int) {
	days += 719468
	era := floorDiv(days, 146097)
	dayOfEra := days - 146097*era
	yearOfEra := (dayOfEra - dayOfEra/1460 + dayOfEra/36524 - dayOfEra/146096) / 365
	dayOfYear := dayOfEra - (365*yearOfEra + yearOfEra/4 - yearOfEra/100)
	mp := (5*dayOfYear + 2) / 153
	d = int(dayOfYear - (153*mp+2)/5 + 1)
	m = int(mp + 3)
	y = yearOfEra + 400*era
	if m > 12 {
		m -= 12
		y++
	}
	return y, m, d
}

func floorDiv(a, b int64) int64 {
	q := a / b
	if a%b != 0 && (a < 0) != (b < 0) {
		q--
	}
	return q
}

// FormatTimestamp writes microseconds since 1970 as 2031-04-07 08:15:00, in UTC
// and with a fraction only where there is one. ParseTimestamp reads it back.
func FormatTimestamp(us int64) string {
	return string(AppendTimestamp(nil, us))
}

// AppendTimestamp adds to b what FormatTimestamp writes.
func AppendTimestamp(b []byte, us int64) []byte {
	days := floorDiv(us, day)
	y, m, d := civil(days)
	if y < 0 {
		b, y = append(b, '-'), -y
	}
	b = append(appendPadded(b, y, 4), '-')
	b = append(appendPadded(b, int64(m), 2), '-')
	b = append(appendPadded(b, int64(d), 2), ' ')
	return appendClock(b, uint64(us-days*day))
}

// FormatInterval writes microseconds as hours, minutes and seconds: 36:15:00,
// with a sign where negative and a fraction where there is one. There are no
// days in it, so that nobody needs to know how long they are.
func FormatInterval(us int64) string { return string(AppendInterval(nil, us)) }

// AppendInterval adds to b what FormatInterval writes.
func AppendInterval(b []byte, us int64) []byte {
	u := uint64(us)
	if us < 0 {
		b, u = append(b, '-'), -u // right for the smallest int64 too
	}
	return appendClock(b, u)
}

func appendClock(b []byte, us uint64) []byte {
	b = append(appendPadded(b, int64(us/hour), 2), ':')
	b = append(appendPadded(b, int64(us%hour/minute), 2), ':')
	b = appendPadded(b, int64(us%minute/second), 2)
	if frac := us % second; frac != 0 {
		b = appendPadded(append(b, '.'), int64(frac), 6)
		for b[len(b)-1] == '0' {
			b = b[:len(b)-1]
		}
	}
	return b
}

// appendPadded adds a number, 0 or more, with at least width digits.
func appendPadded(b []byte, x int64, width int) []byte {
	for p := int64(10); width > 1; width-- {
		if x < p {
			for range width - 1 {
				b = append(b, '0')
			}
			break
		}
		p *= 10
	}
	return strconv.AppendInt(b, x, 10)
}

// ParseInterval reads what FormatInterval writes: [-]hours:mm:ss[.fraction].
func ParseInterval(s string) (us int64, err error) {
	p := scanner{s: s}
	negative := p.take('-')
	start := p.i
	for p.i < len(s) && isDigit(s[p.i]) {
		p.i++
	}
	h, err := strconv.ParseUint(s[start:p.i], 10, 63)
	if err != nil || h > 1<<63/hour {
		return 0, ErrInterval
	}
	p.byte(':')
	m := p.digits(2)
	p.byte(':')
	sec := p.digits(2)
	frac := int64(0)
	if p.take('.') {
		frac = p.fraction()
	}
	if p.bad || !p.done() || m > 59 || sec > 59 {
		return 0, ErrInterval
	}
	u := h*hour + uint64(m)*minute + uint64(sec)*second + uint64(frac)
	switch {
	case negative && u <= 1<<63:
		return int64(-u), nil
	case u >= 1<<63:
		return 0, ErrInterval
	}
	return int64(u), nil
}
