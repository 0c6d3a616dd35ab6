package csv

import (
	"bytes"
	"unicode/utf8"

	"nearcell/catalog/reader"
)

// scanner cuts a file into records and fields. It does not judge how many
// fields a record has, only its quotation marks.
type scanner struct {
	data      []byte
	delim     []byte    // the delimiter in UTF-8
	special   [256]bool // bytes at which an unquoted field must be looked at
	pos       int       // the next byte
	line      int       // the number of the line at pos, from 1
	lineStart int       // where that line begins
	rec       record
}

// record is one record of the file; it is good until the next one is read.
type record struct {
	line       int // of its first line
	lineStart  int
	start, end int // its bytes without the line break at the end
	fields     []field
	beyond     int  // fields behind mostFields, which are only counted
	fault      mark // where its quotation marks go wrong, if they do
}

// mostFields is how many fields of a record are kept: a file must not make the program
// take a multiple of its size.
const mostFields = 1 << 18

// field is one field of a record.
type field struct {
	text      []byte // what it holds, without quotation marks
	quoted    bool
	start     int // its first byte, or its opening quotation mark
	line      int // the line on which it begins
	lineStart int
}

// mark is a fault at a place.
type mark struct {
	kind      reader.FaultKind
	at        int
	field     int
	line      int
	lineStart int
}

func newScanner(data []byte, delim rune, pos, line int) *scanner {
	s := &scanner{data: data, delim: utf8.AppendRune(nil, delim), pos: pos, line: line, lineStart: pos}
	for _, c := range []byte{s.delim[0], '\n', '\r', '"'} {
		s.special[c] = true
	}
	return s
}

// next reads a record; false at the end of the file.
func (s *scanner) next() bool {
	if s.pos >= len(s.data) {
		return false
	}
	s.rec = record{line: s.line, lineStart: s.lineStart, start: s.pos, fields: s.rec.fields[:0]}
	for more := true; more; {
		if s.pos < len(s.data) && s.data[s.pos] == '"' {
			more = s.quoted()
		} else {
			more = s.plain()
		}
	}
	return true
}

// blank reports whether the record is a line with nothing on it.
func (r *record) blank() bool {
	return len(r.fields) == 1 && r.fault.kind == reader.NoFault && !r.fields[0].quoted && len(trim(r.fields[0].text)) == 0
}

// plain reads an unquoted field; it reports whether another one follows.
func (s *scanner) plain() bool {
	start := s.pos
	for i := start; ; i++ {
		for i < len(s.data) && !s.special[s.data[i]] {
			i++
		}
		switch {
		case i >= len(s.data):
		case s.data[i] == '"':
			s.fail(reader.BareQuote, i, s.line, s.lineStart)
			return false
		case !s.atEnd(i) && !bytes.HasPrefix(s.data[i:], s.delim):
			continue // only the first byte of a longer delimiter
		}
		s.add(field{text: s.data[start:i], start: start, line: s.line, lineStart: s.lineStart})
		return s.after(i)
	}
}

// quoted reads a field that begins with a quotation mark.
func (s *scanner) quoted() bool {
	f := field{quoted: true, start: s.pos, line: s.line, lineStart: s.lineStart}
	doubled := false
	for i := s.pos + 1; ; i += 2 {
		n := bytes.IndexByte(s.data[i:], '"')
		if n < 0 {
			s.fail(reader.UnclosedQuote, f.start, f.line, f.lineStart)
			return false
		}
		i += n
		if i+1 < len(s.data) && s.data[i+1] == '"' {
			doubled = true
			continue
		}
		f.text = s.data[f.start+1 : i]
		s.countLines(f.start+1, i)
		if !s.atEnd(i+1) && !bytes.HasPrefix(s.data[i+1:], s.delim) {
			s.fail(reader.BareQuote, i, s.line, s.lineStart)
			return false
		}
		if doubled {
			f.text = bytes.ReplaceAll(f.text, []byte(`""`), []byte(`"`))
		}
		s.add(f)
		return s.after(i + 1)
	}
}

func (s *scanner) add(f field) {
	if len(s.rec.fields) == mostFields {
		s.rec.beyond++
		return
	}
	s.rec.fields = append(s.rec.fields, f)
}

// atEnd reports whether the record ends at byte i.
func (s *scanner) atEnd(i int) bool {
	return i >= len(s.data) || s.data[i] == '\n' || s.data[i] == '\r'
}

// after moves on from the end of a field: over a delimiter, and then another
// field follows, or over the line break.
func (s *scanner) after(i int) bool {
	if s.atEnd(i) {
		s.endRecord(i)
		return false
	}
	s.pos = i + len(s.delim)
	return true
}

// endRecord ends the record at byte i and moves to the next line.
func (s *scanner) endRecord(i int) {
	s.rec.end = i
	s.pos = i + breakLen(s.data[i:])
	if s.pos > i {
		s.line++
		s.lineStart = s.pos
	}
}

// fail notes a fault and gives the rest of its line up: where a quoted field
// never ends, the line it begins on.
func (s *scanner) fail(kind reader.FaultKind, at, line, lineStart int) {
	s.rec.fault = mark{kind: kind, at: at, field: len(s.rec.fields) + 1, line: line, lineStart: lineStart}
	s.endRecord(lineEnd(s.data, at))
}

// countLines notes the line breaks in a quoted field.
func (s *scanner) countLines(from, to int) {
	for i := from; i < to; {
		n := breakLen(s.data[i:to])
		if n == 0 {
			i++
			continue
		}
		i += n
		s.line++
		s.lineStart = i
	}
}

// breakLen is the length of the line break at the start of b, 0 if there is none.
func breakLen(b []byte) int {
	switch {
	case len(b) == 0:
		return 0
	case b[0] == '\n':
		return 1
	case b[0] == '\r' && len(b) > 1 && b[1] == '\n':
		return 2
	case b[0] == '\r':
		return 1
	}
	return 0
}

// lineEnd is the end of the line that byte i stands on.
func lineEnd(data []byte, i int) int {
	if n := bytes.IndexAny(data[i:], "\r\n"); n >= 0 {
		return i + n
	}
	return len(data)
}

// trim cuts blanks off both ends.
func trim(b []byte) []byte {
	for len(b) > 0 && isBlank(b[0]) {
		b = b[1:]
	}
	for len(b) > 0 && isBlank(b[len(b)-1]) {
		b = b[:len(b)-1]
	}
	return b
}

func isBlank(c byte) bool { return c == ' ' || c == '\t' || c == '\r' || c == '\n' }
