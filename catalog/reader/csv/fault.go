package csv

import (
	"bytes"
	"unicode/utf8"

	"nearcell/catalog/reader"
)

// collector gathers the faults of a file.
type collector struct {
	reader.Faults
	max     int
	current string // the file
}

// full reports whether the list is full; then the fault at hand is only counted.
// Asking before a fault is made keeps a long line of many faults cheap.
func (c *collector) full() bool {
	if len(c.List) < c.max {
		return false
	}
	c.More++
	return true
}

func (c *collector) add(f reader.Fault) {
	f.File = c.current
	c.List = append(c.List, f)
}

// err is the faults as an error, nil if there are none.
func (c *collector) err() error {
	if len(c.List) == 0 {
		return nil
	}
	return &c.Faults
}

// fault is one at the start of a field; i counts fields from 0.
func fault(s *scanner, f *field, i int, kind reader.FaultKind) reader.Fault {
	at := f.start
	if !f.quoted {
		for at < f.start+len(f.text) && isBlank(s.data[at]) {
			at++
		}
	}
	x := place(s, at, f.line, f.lineStart, kind)
	x.Field, x.Text = i+1, string(f.text)
	return x
}

// place is a fault at byte at of a line.
func place(s *scanner, at, line, lineStart int, kind reader.FaultKind) reader.Fault {
	return reader.Fault{
		Line: line, Column: utf8.RuneCount(s.data[lineStart:at]) + 1, Kind: kind,
		Source: string(s.data[lineStart:lineEnd(s.data, lineStart)]),
	}
}

// recordFault is what is wrong with the record as such, before any value is
// looked at: its quotation marks, its bytes, the number of its fields. least and
// most are how many fields it may have; clean says that the file is known to be
// all UTF-8 without NUL bytes.
func (s *scanner) recordFault(clean bool, least, most int) (reader.Fault, bool) {
	r := &s.rec
	if m := r.fault; m.kind != reader.NoFault {
		x := place(s, m.at, m.line, m.lineStart, m.kind)
		x.Field = m.field
		return x, true
	}
	if !clean {
		for i := range r.fields {
			if f := &r.fields[i]; !isText(f.text) {
				return s.notText(f, i), true
			}
		}
	}
	got := len(r.fields) + r.beyond
	if most = min(most, mostFields); got > most && least == 0 {
		x := fault(s, &r.fields[most-1], most-1, reader.TooLarge)
		x.Text, x.Expected = "heading", most
		return x, true
	}
	if got >= least && got <= most {
		return reader.Fault{}, false
	}
	var x reader.Fault
	if got > most {
		last := min(most, mostFields-1)
		x = fault(s, &r.fields[last], last, reader.FieldCount)
	} else {
		last := &r.fields[got-1] // a quoted one may end on a later line: s.line is behind it
		line, start := last.line, last.lineStart
		for i := start; i < r.end; i++ {
			if n := breakLen(s.data[i:r.end]); n > 0 {
				line, start, i = line+1, i+n, i+n-1
			}
		}
		x = place(s, r.end, line, start, reader.FieldCount)
	}
	x.Got, x.Expected = got, most
	if got < least {
		x.Expected = least
	}
	return x, true
}

// isText reports whether bytes are UTF-8 without NUL bytes.
func isText(b []byte) bool { return utf8.Valid(b) && bytes.IndexByte(b, 0) < 0 }

// notText is the fault at the first byte of a field that is no UTF-8, or 0.
func (s *scanner) notText(f *field, i int) reader.Fault {
	kind := reader.NotUTF8
	line, start, at := f.line, f.lineStart, f.start
	for at < s.rec.end {
		if n := breakLen(s.data[at:s.rec.end]); n > 0 {
			at += n
			line, start = line+1, at
			continue
		}
		r, size := utf8.DecodeRune(s.data[at:s.rec.end])
		if r == 0 {
			kind = reader.NulByte
		}
		if r == 0 || r == utf8.RuneError && size == 1 {
			break
		}
		at += size
	}
	x := place(s, at, line, start, kind)
	x.Field, x.Text = i+1, string(f.text)
	return x
}
