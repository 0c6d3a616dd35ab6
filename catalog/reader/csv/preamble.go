package csv

import (
	"bytes"
	"strings"

	"nearcell/catalog/reader"
)

// readPreamble looks for the texts of Options.Preamble in the lines before the
// heading, which begins at byte end.
func (im *importer) readPreamble(f *file, end int) {
	for _, p := range im.o.Preamble {
		c, bad := f.behind(p.After, end)
		if bad != nil && !im.faults.full() {
			bad.FieldName = p.Column
			im.faults.add(*bad)
		}
		f.preamble = append(f.preamble, c)
	}
}

// behind is what stands behind a text before byte end: the rest of its line, or
// the next field where the text ends one.
func (f *file) behind(after string, end int) (constant, *reader.Fault) {
	var found constant
	times, line := 0, 1
	for pos := 0; pos < end; line++ {
		stop := lineEnd(f.data, pos)
		text := f.data[pos:stop]
		for i := 0; ; {
			n := bytes.Index(text[i:], []byte(after))
			if n < 0 {
				break
			}
			if i += n + len(after); times == 0 {
				found = constant{text: f.rest(text, i), line: line}
			}
			if times++; times == 2 {
				s := newScanner(f.data, f.facts.Delimiter, pos, line)
				x := place(s, pos+i-len(after), line, pos, reader.PreambleRepeated)
				x.Text, x.Got = after, found.line
				return found, &x
			}
		}
		pos = stop + breakLen(f.data[stop:])
	}
	if times == 0 {
		x := &reader.Fault{Kind: reader.NoPreamble, Text: after, Got: f.facts.HeadingLine}
		for _, text := range strings.FieldsFunc(string(f.data[:end]), func(r rune) bool { return r == '\r' || r == '\n' }) {
			if i := strings.Index(strings.ToLower(text), strings.ToLower(after)); i >= 0 && i+len(after) <= len(text) && x.Detail == "" {
				x.Detail = text[i : i+len(after)] // so written
			}
		}
		return found, x
	}
	return found, nil
}

// rest is the value behind byte i of a line of the preamble, which may be written
// as a record too.
func (f *file) rest(line []byte, i int) []byte {
	if value, ok := f.quotedRest(line, i); ok {
		return value
	}
	delim := string(f.facts.Delimiter)
	if f.facts.Delimiter == ' ' {
		delim = "\x00" // no field ends at a blank here
	}
	value := trim(line[i:])
	if bytes.HasPrefix(value, []byte(delim)) {
		s := newScanner(value, f.facts.Delimiter, len(delim), 1)
		for s.next() {
			if s.rec.fault.kind != reader.NoFault {
				break
			}
			return trim(s.rec.fields[0].text)
		}
	}
	for bytes.HasSuffix(value, []byte(delim)) {
		value = trim(bytes.TrimSuffix(value, []byte(delim)))
	}
	if len(value) > 1 && value[0] == '"' && value[len(value)-1] == '"' {
		value = value[1 : len(value)-1]
	}
	return trim(value)
}

// quotedRest is the value behind byte i of a line where that lies in a quoted
// field: the rest of the field, or the next field if nothing is left of it.
func (f *file) quotedRest(line []byte, i int) ([]byte, bool) {
	s := newScanner(line, f.facts.Delimiter, 0, 1)
	if !s.next() || s.rec.fault.kind != reader.NoFault {
		return nil, false
	}
	for k := len(s.rec.fields) - 1; k >= 0; k-- {
		x := &s.rec.fields[k]
		if x.start >= i {
			continue
		}
		if !x.quoted {
			return nil, false
		}
		inside := bytes.TrimSuffix(line[i:s.fieldEnd(k)], []byte(`"`))
		if inside = trim(bytes.ReplaceAll(inside, []byte(`""`), []byte(`"`))); len(inside) > 0 || k+1 == len(s.rec.fields) {
			return inside, true
		}
		return trim(s.rec.fields[k+1].text), true
	}
	return nil, false
}

// fieldEnd is where field k of the record ends, behind its closing mark.
func (s *scanner) fieldEnd(k int) int {
	if k+1 < len(s.rec.fields) {
		return s.rec.fields[k+1].start - len(s.delim)
	}
	return s.rec.end
}
