package csv

import (
	"bytes"
	"slices"
	"strconv"
	"strings"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// heading is the first record of a file, understood.
type heading struct {
	names []string
	units []*column.Unit
	extra int // empty headings behind the last name: delimiters at the line's end
	at    []field
}

// findHeading is the place of the heading's line: the one asked for, or the
// first that is not blank. ok is false where there is no such line; line then
// is the last one looked at.
func findHeading(data []byte, want int) (pos, line int, ok bool) {
	line = 1
	for pos < len(data) {
		end := lineEnd(data, pos)
		blank := len(trim(data[pos:end])) == 0
		if want == line || want == 0 && !blank {
			return pos, line, !blank
		}
		n := breakLen(data[end:])
		if n == 0 {
			break
		}
		pos = end + n
		line++
	}
	return pos, line, false
}

// detectSample is how many records delimiters are tried on.
const detectSample = 100

// detect finds the delimiter: among those that divide the heading, the one that
// divides most of the records behind it into as many fields; then the one that
// gives more fields; then the first in the order , ; tab |.
func detect(data []byte, pos, line int, decimalMark rune) rune {
	best, bestAgree, bestFields := ',', -1.0, 1
	if decimalMark == ',' {
		best = ';'
	}
	for _, d := range []rune{',', ';', '\t', '|'} {
		if d == decimalMark {
			continue
		}
		s := newScanner(data, d, pos, line)
		s.next()
		fields := len(s.rec.fields)
		if fields < 2 {
			continue
		}
		records, agree := 0, 0
		for records < detectSample && s.next() {
			if s.rec.blank() {
				continue
			}
			records++
			if len(s.rec.fields) == fields && s.rec.fault.kind == reader.NoFault {
				agree++
			}
		}
		share := float64(agree) / float64(max(records, 1))
		if share > bestAgree || share == bestAgree && fields > bestFields {
			best, bestAgree, bestFields = d, share, fields
		}
	}
	return best
}

// readHeading understands the heading's record.
func readHeading(s *scanner, faults *collector) *heading {
	h := &heading{at: slices.Clone(s.rec.fields)}
	full := make([]string, 0, len(h.at))
	for _, f := range h.at {
		text := strings.Join(strings.Fields(string(f.text)), " ")
		name, unit := splitUnit(text)
		full = append(full, text)
		h.names = append(h.names, name)
		h.units = append(h.units, unit)
	}
	keepBrackets(h.names, full)
	for n := len(full); n > 1 && full[n-1] == ""; n = len(h.names) {
		h.names = h.names[:n-1]
		h.extra++
	}
	first := map[string]int{}
	for i, name := range h.names {
		f := &h.at[i]
		j, repeated := first[name]
		switch {
		case name != "" && !repeated:
			first[name] = i
		case faults.full():
		case name == "":
			faults.add(fault(s, f, i, reader.HeadingEmpty))
		default:
			x := fault(s, f, i, reader.HeadingRepeated)
			x.Got, x.FieldName = j+1, name
			faults.add(x)
		}
	}
	return h
}

// splitUnit takes the unit off a heading such as temp [°C]. A number in
// brackets is no unit but part of the name.
func splitUnit(text string) (string, *column.Unit) {
	open := strings.LastIndexByte(text, '[')
	if open < 0 || !strings.HasSuffix(text, "]") {
		return text, nil
	}
	inside := strings.TrimSpace(text[open+1 : len(text)-1])
	if _, err := strconv.ParseFloat(inside, 64); err == nil {
		return text, nil
	}
	return strings.TrimSpace(text[:open]), column.ParseUnit(inside)
}

// keepBrackets gives names that would stand twice without their units, such as
// temp [°C] and temp [°F], the units back.
func keepBrackets(names, full []string) {
	count := map[string]int{}
	for _, n := range names {
		count[n]++
	}
	for i, n := range names {
		if count[n] > 1 {
			names[i] = full[i]
		}
	}
}

// numeric reports whether every heading is a number.
func (h *heading) numeric(mark byte) bool {
	for _, f := range h.at[:len(h.names)] {
		b := bytes.TrimSpace(f.text)
		if len(b) == 0 || lookAtNumber(b, mark).class == isWord {
			return false
		}
	}
	return true
}
