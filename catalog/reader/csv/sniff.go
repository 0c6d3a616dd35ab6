package csv

import (
	"bytes"
	"regexp"
	"unicode/utf8"

	"nearcell/catalog/reader"
)

// Layout is how a file seems to be written.
type Layout struct {
	Encoding    reader.Encoding // "": UTF-8
	Delimiter   rune
	Unclear     bool // Read would find another delimiter by itself
	DecimalMark rune
	Heading     int      // its line
	First       bool     // the heading is the first line that is not blank
	Preamble    []string // the lines before it that are not blank
	CommaAt     int      // a line with a decimal comma, and the number
	Comma       string
}

// sniffRecords is how many records a guess looks at.
const sniffRecords = 400

// Sniff guesses the layout of a file. Whoever uses it reads the file with what it
// says and looks at what comes of it.
func Sniff(data []byte) Layout {
	var l Layout
	switch {
	case looksUTF16(data):
		l.Encoding = reader.UTF16Text
	case !utf8.Valid(data):
		l.Encoding = reader.Latin1
		if _, bad := reader.Decode(data, reader.Latin1); bad != nil {
			l.Encoding = reader.Windows1252
		}
	}
	if text, bad := reader.Decode(data, l.Encoding); bad == nil {
		data = text
	}
	data = bytes.TrimPrefix(data, []byte("\xEF\xBB\xBF"))
	var chosen *sheet
	for _, d := range []rune{',', ';', '\t', '|'} {
		s := cutRecords(data, d)
		if s == nil {
			continue
		}
		if chosen == nil || s.share > chosen.share+0.05 || s.share > chosen.share-0.05 && s.fields > chosen.fields {
			chosen = s
		}
	}
	l.DecimalMark = '.'
	if chosen == nil { // one column, or nothing that repeats
		pos, line, _ := findHeading(data, 0)
		l.Heading, l.First = line, true
		l.Delimiter = detect(data, pos, line, '.')
		return l
	}
	l.Delimiter, l.Heading = chosen.delim, chosen.records[chosen.heading].line
	if l.Delimiter != ',' {
		if first := chosen.comma(); first.line > 0 {
			l.DecimalMark, l.CommaAt, l.Comma = ',', first.line, first.text
		}
	}
	l.First = true
	for pos, line := 0, 1; line < l.Heading; line++ {
		end := lineEnd(data, pos)
		if text := trim(data[pos:end]); len(text) > 0 {
			l.First = false
			l.Preamble = append(l.Preamble, string(text))
		}
		pos = end + breakLen(data[end:])
	}
	pos, line, _ := findHeading(data, l.Heading)
	l.Unclear = detect(data, pos, line, l.DecimalMark) != l.Delimiter
	return l
}

// sheet is the first records of a file, cut by one delimiter.
type sheet struct {
	delim   rune
	records []row
	fields  int     // of most records in the second half
	share   float64 // of those that have as many
	data    []bool  // the columns that hold numbers or times there
	heading int
}

// row is a record that is not blank.
type row struct {
	line   int
	fields [][]byte
}

// cutRecords cuts the first records; nil where the delimiter does not divide them or
// no record can be their heading.
func cutRecords(data []byte, d rune) *sheet {
	s := &sheet{delim: d}
	sc := newScanner(data, d, 0, 1)
	counts := map[int]int{}
	for len(s.records) < sniffRecords && sc.next() {
		if sc.rec.blank() {
			continue
		}
		r := row{line: sc.rec.line}
		for i := range sc.rec.fields {
			r.fields = append(r.fields, trim(sc.rec.fields[i].text))
		}
		s.records = append(s.records, r)
	}
	half := s.records[len(s.records)/2:]
	for _, r := range half {
		counts[len(r.fields)]++
		if n := len(r.fields); counts[n] > counts[s.fields] || counts[n] == counts[s.fields] && n > s.fields {
			s.fields = n
		}
	}
	if s.fields < 2 {
		return nil
	}
	s.share = float64(counts[s.fields]) / float64(len(half))
	s.findData(half)
	for s.heading = range s.records {
		if s.isHeading(s.heading) {
			return s
		}
	}
	return nil
}

// findData finds the columns of numbers and times.
func (s *sheet) findData(half []row) {
	s.data = make([]bool, s.fields)
	for i := range s.data {
		fit, all := 0, 0
		for _, r := range half {
			if i < len(r.fields) && len(r.fields[i]) > 0 {
				all++
				if s.isData(r.fields[i]) {
					fit++
				}
			}
		}
		s.data[i] = 2*fit > all
	}
}

var dateShape = regexp.MustCompile(`^\d{1,4}([-./]\d{1,2}[-./]|[- ][A-Za-z]{3}[- ])\d{1,4}([ T,].*)?$|^\d{8}[ T]?\d{6}$`)

// isData reports whether a field holds a number or a time.
func (s *sheet) isData(b []byte) bool {
	if len(b) == 0 {
		return false
	}
	class := lookAt(b, '.').class
	return class == isInt || class == isLongInt || class == isReal || class == isTime ||
		s.delim != ',' && lookAtNumber(b, ',').class == isReal || dateShape.Match(b)
}

// isHeading reports whether record i has a text over every column of data, and a
// record of data under it, perhaps with a line of units between.
func (s *sheet) isHeading(i int) bool {
	names := s.records[i].fields
	for len(names) > 0 && len(names[len(names)-1]) == 0 {
		names = names[:len(names)-1]
	}
	if len(names) < 2 || len(names) > s.fields {
		return false
	}
	any := false
	seen := map[string]bool{}
	for k, name := range names {
		if len(name) == 0 || seen[string(name)] || s.isData(name) {
			return false
		}
		seen[string(name)] = true
		any = any || s.data[k]
	}
	// a column beyond the last name must be empty: the line is too short otherwise
	for k := len(names); k < s.fields; k++ {
		if s.data[k] {
			return false
		}
	}
	if !any || i+1 >= len(s.records) {
		return len(names) == s.fields || len(s.records[i].fields) == s.fields
	}
	return s.hasData(i+1) || i+2 < len(s.records) && s.hasUnits(i+1) && s.hasData(i+2)
}

func (s *sheet) hasData(i int) bool {
	for k, b := range s.records[i].fields {
		if k < len(s.data) && s.data[k] && s.isData(b) {
			return true
		}
	}
	return false
}

// hasUnits reports whether record i is a line of units and not itself a heading:
// h or m may be either, °C and m/s are units.
func (s *sheet) hasUnits(i int) bool {
	known, sure := false, false
	seen := map[string]bool{}
	for k, b := range s.records[i].fields {
		if k < len(s.data) && s.data[k] && len(b) > 0 && isKnownUnit(string(bytes.Trim(b, "[]()"))) {
			known = true
			sure = sure || bytes.ContainsAny(b, "°%/[(³²µ")
		}
		sure = sure || len(b) == 0 && k < s.fields-1 || string(b) == "-" || seen[string(b)]
		seen[string(b)] = true
	}
	return known && sure
}

// comma is the first number with a decimal comma, if more numbers have one than a
// decimal point.
func (s *sheet) comma() sample {
	var first sample
	commas, points := 0, 0
	for _, r := range s.records[s.heading+1:] {
		for _, b := range r.fields {
			switch {
			case len(b) == 0:
			case bytes.IndexByte(b, ',') >= 0 && lookAtNumber(b, ',').class == isReal:
				commas++
				first.keep(r.line, b, "")
			case bytes.IndexByte(b, '.') >= 0 && lookAtNumber(b, '.').class == isReal:
				points++
			}
		}
	}
	if points >= commas {
		return sample{}
	}
	return first
}
