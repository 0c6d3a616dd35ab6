package timeform

import (
	"fmt"
	"strings"
	"time"
	"unicode"
	"unicode/utf8"
)

// Form is a pattern that has been understood. It does not change.
type Form struct {
	text  string
	items []item
	half  bool // with AM and PM
}

// String is the pattern as it was written.
func (f *Form) String() string { return f.text }

// SaysUTC reports whether the pattern ends with a Z, which is how ISO 8601 says
// that a time is UTC.
func (f *Form) SaysUTC() bool {
	last := len(f.items) - 1
	return last > 0 && f.items[last].part == literal && f.items[last].text == "Z" && f.items[last-1].digits()
}

// part is what an item of a pattern stands for.
type part uint8

const (
	literal part = iota
	blank
	year
	shortYear
	month
	monthName
	day
	hour
	minute
	second
	fraction
	halfDay
	parts // how many there are
)

// item is one piece of a pattern.
type item struct {
	part        part
	least, most int    // digits
	text        string // of a literal
}

func (i item) digits() bool { return i.most > 0 }

// PatternFault is what is wrong with a pattern.
type PatternFault uint8

const (
	UnknownLetter PatternFault = iota + 1 // a letter that means nothing
	WrongLength                           // a known letter, too often or too seldom
	Repeated                              // a part that stands twice
	NoDate                                // year, month or day is missing
	NoHour                                // minutes without hours, seconds without minutes, …
	RunsTogether                          // a number without a fixed length before another one
	NotClosed                             // a quotation mark that is not closed
	IsDigit                               // a digit: a time instead of its pattern
)

var patternFaults = [...]string{"", "unknown letter", "wrong length", "repeated", "no whole date", "no hour", "runs together", "not closed", "digit"}

// PatternError is the error of a pattern that is none.
type PatternError struct {
	Fault PatternFault
	At    int    // byte of the pattern
	Text  string // what stands there
}

func (e *PatternError) Error() string {
	return fmt.Sprintf("timeform: %s %q at byte %d", patternFaults[e.Fault], e.Text, e.At)
}

// Parse understands a pattern.
func Parse(pattern string) (*Form, error) {
	f := &Form{text: pattern}
	for i := 0; i < len(pattern); {
		it, n, fault := nextItem(pattern[i:])
		if fault != 0 {
			return nil, &PatternError{Fault: fault, At: i, Text: pattern[i : i+n]}
		}
		if last := len(f.items) - 1; last >= 0 && f.items[last].digits() && f.items[last].least != f.items[last].most && it.digits() {
			return nil, &PatternError{Fault: RunsTogether, At: i, Text: pattern[i : i+n]}
		}
		f.items = append(f.items, it)
		i += n
	}
	return f, f.check()
}

// nextItem takes an item of n bytes off the front of a pattern.
func nextItem(s string) (it item, n int, fault PatternFault) {
	r, size := utf8.DecodeRuneInString(s)
	switch {
	case s[0] == '"':
		end := strings.IndexByte(s[1:], '"')
		if end < 0 {
			return it, len(s), NotClosed
		}
		if end == 0 {
			return it, 2, WrongLength
		}
		return item{text: s[1 : 1+end]}, end + 2, 0
	case r == ' ' || r == '\t':
		return item{part: blank}, len(s) - len(strings.TrimLeft(s, " \t")), 0
	case strings.HasPrefix(s, "AM"), strings.HasPrefix(s, "PM"):
		return item{part: halfDay}, 2, 0
	case r == 'T' || r == 'Z':
		return item{text: s[:1]}, 1, 0
	case unicode.IsDigit(r):
		return it, size, IsDigit
	case r == utf8.RuneError || !unicode.IsLetter(r):
		return item{text: s[:size]}, size, 0
	}
	n = size
	for strings.HasPrefix(s[n:], s[:size]) {
		n += size
	}
	it, fault = letters(r, n)
	return it, n, fault
}

// letters is the item that n equal letters stand for.
func letters(r rune, n int) (item, PatternFault) {
	short := map[rune]part{'D': day, 'h': hour, 'm': minute, 's': second}
	switch p, ok := short[r]; {
	case r == 'Y' && n == 4:
		return item{part: year, least: 4, most: 4}, 0
	case r == 'Y' && n == 2:
		return item{part: shortYear, least: 2, most: 2}, 0
	case r == 'M' && n == 3:
		return item{part: monthName}, 0
	case r == 'M' && n < 3:
		return item{part: month, least: n, most: 2}, 0
	case ok && n < 3:
		return item{part: p, least: n, most: 2}, 0
	case r == 'f':
		return item{part: fraction, least: 1, most: 99}, 0
	case ok, r == 'Y', r == 'M':
		return item{}, WrongLength
	}
	return item{}, UnknownLetter
}

// check looks whether the parts make a time.
func (f *Form) check() error {
	var has [parts]bool
	for _, it := range f.items {
		p := it.part
		switch p {
		case literal, blank:
			continue
		case shortYear:
			p = year
		case monthName:
			p = month
		}
		if has[p] {
			return &PatternError{Fault: Repeated, Text: f.text}
		}
		has[p] = true
	}
	f.half = has[halfDay]
	switch {
	case !has[year] || !has[month] || !has[day]:
		return &PatternError{Fault: NoDate, Text: f.text}
	case !has[hour] && (has[minute] || has[second] || has[halfDay]), !has[minute] && has[second], !has[second] && has[fraction]:
		return &PatternError{Fault: NoHour, Text: f.text}
	}
	return nil
}

// Outcome is what became of a text.
type Outcome uint8

const (
	OK      Outcome = iota
	NoMatch         // the text has another shape
	NoSuch          // it has the shape, and there is no such date or time of day
	Skipped         // the clock change skips this local time
	Repeats         // the clock change repeats this local time: two instants
)

// Read reads a text, without blanks around it, as microseconds since 1970 on the
// clock of the place, as if it were UTC. The outcome is OK, NoMatch or NoSuch.
func (f *Form) Read(b []byte) (local int64, _ Outcome) {
	var v [parts]int
	v[day], v[month] = 1, 1
	pm, micros, fine := false, int64(0), true
	for _, it := range f.items {
		n := 0
		switch it.part {
		case literal:
			if len(b) < len(it.text) || string(b[:len(it.text)]) != it.text {
				return 0, NoMatch
			}
			n = len(it.text)
		case blank:
			for n < len(b) && (b[n] == ' ' || b[n] == '\t') {
				n++
			}
		case monthName:
			v[month], n = monthOf(b)
		case halfDay:
			pm, n = half(b)
		default:
			for n < len(b) && n < it.most && b[n] >= '0' && b[n] <= '9' {
				n++
			}
			if n < it.least {
				return 0, NoMatch
			}
			if it.part == fraction {
				micros, fine = microseconds(b[:n])
			} else {
				v[it.part] = number(b[:n])
			}
		}
		if n == 0 && it.text == "" {
			return 0, NoMatch
		}
		if it.part == shortYear {
			v[year] = 2000 + v[shortYear]
			if v[shortYear] >= 70 {
				v[year] -= 100
			}
		}
		b = b[n:]
	}
	if len(b) > 0 {
		return 0, NoMatch
	}
	if f.half {
		if v[hour] < 1 || v[hour] > 12 {
			return 0, NoSuch
		}
		v[hour] %= 12
		if pm {
			v[hour] += 12
		}
	}
	if !fine || !exists(&v) {
		return 0, NoSuch
	}
	t := time.Date(v[year], time.Month(v[month]), v[day], v[hour], v[minute], v[second], 0, time.UTC)
	return t.UnixMicro() + micros, OK
}

// exists reports whether there is such a date and time of day.
func exists(v *[parts]int) bool {
	if v[year] < 1 || v[month] < 1 || v[month] > 12 || v[day] < 1 || v[hour] > 23 || v[minute] > 59 || v[second] > 59 {
		return false
	}
	t := time.Date(v[year], time.Month(v[month]), v[day], 0, 0, 0, 0, time.UTC)
	return t.Day() == v[day]
}

func number(b []byte) int {
	n := 0
	for _, c := range b {
		n = 10*n + int(c-'0')
	}
	return n
}

// microseconds reads the digits of a fraction; fine is false where there are
// finer ones.
func microseconds(b []byte) (us int64, fine bool) {
	for i := range 6 {
		us *= 10
		if i < len(b) {
			us += int64(b[i] - '0')
		}
	}
	for i := 6; i < len(b); i++ {
		if b[i] != '0' {
			return 0, false
		}
	}
	return us, true
}

const monthNames = "janfebmaraprmayjunjulaugsepoctnovdec"

// monthOf reads Jan to Dec; n is 0 where it is none of them.
func monthOf(b []byte) (number, n int) {
	if len(b) < 3 {
		return 0, 0
	}
	name := strings.ToLower(string(b[:3]))
	for i := 0; i < len(monthNames); i += 3 {
		if monthNames[i:i+3] == name {
			return i/3 + 1, 3
		}
	}
	return 0, 0
}

// half reads AM or PM; n is 0 where it is neither.
func half(b []byte) (pm bool, n int) {
	if len(b) < 2 || b[1]|0x20 != 'm' {
		return false, 0
	}
	switch b[0] | 0x20 {
	case 'a':
		return false, 2
	case 'p':
		return true, 2
	}
	return false, 0
}
