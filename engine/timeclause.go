package engine

import (
	"errors"
	"fmt"
	"strings"

	"nearcell/catalog/reader"
	"nearcell/catalog/reader/timeform"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// readTimes takes TIME (column 'pattern' [ZONE 'zone'], …).
func (c *clauses) readTimes(r *lang.TimeReading) error {
	for i, t := range r.Columns {
		for _, other := range r.Columns[:i] {
			if t.Column.Matches(other.Column.Text) || other.Column.Matches(t.Column.Text) {
				return problem.New("clause", c.st.at(t.Column), "TIME names the column '%s' twice", t.Column.Text)
			}
		}
		form, err := timeform.Parse(t.Form.Value)
		if err != nil {
			return patternProblem(err, c.st.at(t.Form), t.Form.Value)
		}
		column := reader.TimeColumn{Column: t.Column.Text, Form: form}
		zone := ""
		if t.Zone != nil {
			zone = t.Zone.Value
		} else if form.SaysUTC() {
			zone = "UTC"
		}
		if t.Zone != nil || form.SaysUTC() {
			if column.Zone, err = timeform.LoadZone(zone); err != nil {
				return zoneProblem(err, c.st.at(t.Zone), zone)
			}
		}
		if form.SaysUTC() && !isUTC(zone) {
			return problem.New("clause", c.st.at(t.Zone), "the Z in the pattern says UTC, and ZONE says %s", zone).
				WithHint("leave ZONE out, or write the Z of a local time as \"Z\" in double quotation marks")
		}
		c.file.Times = append(c.file.Times, column)
	}
	c.times = r
	return nil
}

// isUTC reports whether a zone is UTC by one of its names.
func isUTC(zone string) bool {
	switch strings.ToUpper(zone) {
	case "UTC", "Z", "+00:00", "+00", "+0000", "ETC/UTC":
		return true
	}
	return false
}

// zoneNotes tell which columns were local time: what is printed of them is UTC.
func (c *clauses) zoneNotes(origin string) []string {
	var notes []string
	for _, t := range c.file.Times {
		if t.Zone != nil && !isUTC(t.Zone.String()) {
			notes = append(notes, fmt.Sprintf("%s: %s is local time of %s in the file and kept in UTC", origin, t.Column, t.Zone))
		}
	}
	return notes
}

// patternProblem words what is wrong with a pattern.
func patternProblem(err error, at problem.Place, pattern string) error {
	var e *timeform.PatternError
	if !errors.As(err, &e) {
		return err
	}
	make := func(format string, args ...any) *problem.Problem {
		return problem.New("clause", at, "'%s' is no pattern of times: "+format, append([]any{pattern}, args...)...).Because(err)
	}
	const known = "YYYY MM DD hh mm ss, fff for a fraction, AM for AM and PM; other letters stand in double quotation marks"
	switch e.Fault {
	case timeform.IsDigit:
		var g timeform.Guess
		g.Add([]byte(strings.TrimSpace(pattern)))
		p := make("it has the digit %s", e.Text)
		if form, _ := g.Pattern(); form != "" {
			return p.WithHint("a time written like that has the pattern '%s'", form)
		}
		return p.WithHint("%s", known)
	case timeform.UnknownLetter:
		p := make("'%s' means nothing in it", e.Text)
		switch strings.ToLower(e.Text[:1]) {
		case "h":
			return p.WithHint("hours are written hh, with AM behind them where there are twelve")
		case "y", "d":
			return p.WithHint("years and days are written YYYY and DD")
		}
		return p.WithHint("%s", known)
	case timeform.WrongLength:
		return make("'%s' has the wrong length", e.Text).WithHint("%s", known)
	case timeform.Repeated:
		return make("a part of it stands twice").WithHint("MM is the month, mm the minute")
	case timeform.NoDate:
		return make("it has no whole date").WithHint("year, month and day are needed; MM is the month, mm the minute")
	case timeform.NoHour:
		return make("it has minutes without hours, or the like").WithHint("MM is the month, mm the minute")
	case timeform.RunsTogether:
		return make("where '%s' begins cannot be told", e.Text).WithHint("D, M, h, m and s are one digit or two; write DD, MM, hh, mm, ss where they are always two")
	}
	return make("a quotation mark is not closed")
}

// zoneProblem names the nearest zones.
func zoneProblem(err error, at problem.Place, zone string) error {
	p := problem.New("clause", at, "there is no time zone '%s'", zone).Because(err)
	if len(zone) <= 5 && !strings.Contains(zone, "/") && zone == strings.ToUpper(zone) { // CEST, MEZ: of many places, or of none
		return p.WithHint("%s", zoneForms)
	}
	names := timeform.ZoneNames()
	if near := lang.Nearest(zone, names); near != "" {
		return p.WithHint("did you mean '%s'?", near)
	}
	var last []string
	for _, n := range names {
		last = append(last, n[strings.LastIndexByte(n, '/')+1:])
	}
	wanted := strings.ReplaceAll(zone[strings.LastIndexByte(zone, '/')+1:], " ", "_")
	if near := lang.Nearest(wanted, last); near != "" {
		for i, n := range last {
			if n == near {
				return p.WithHint("did you mean '%s'?", names[i])
			}
		}
	}
	return p.WithHint("%s", zoneForms)
}

const zoneForms = "a zone is written as 'Europe/Zurich' or, where the clock never changes, as an offset: '+01:00'"

// readPreamble takes PREAMBLE (column AFTER 'text', …).
func (c *clauses) readPreamble(r *lang.PreambleReading) error {
	for i, f := range r.Fields {
		if strings.TrimSpace(f.After.Value) == "" {
			return problem.New("clause", c.st.at(f.After), "AFTER takes a text that stands in the lines before the heading, such as 'Serial:'")
		}
		for _, other := range r.Fields[:i] {
			if strings.EqualFold(f.Column.Text, other.Column.Text) {
				return problem.New("clause", c.st.at(f.Column), "PREAMBLE names the column '%s' twice", f.Column.Text)
			}
		}
		c.file.Preamble = append(c.file.Preamble, reader.PreambleField{Column: f.Column.Text, After: f.After.Value})
	}
	return nil
}

// readEncoding takes ENCODING 'name'.
func (c *clauses) readEncoding(r *lang.EncodingReading) error {
	encoding, ok := reader.ParseEncoding(r.Text.Value)
	if !ok {
		var names []string
		for _, e := range reader.Encodings {
			names = append(names, string(e))
		}
		return problem.New("clause", c.st.at(r.Text), "there is no encoding '%s'", r.Text.Value).
			WithHint("it is one of %s", listed(names, 10))
	}
	c.file.Encoding = encoding
	return nil
}
