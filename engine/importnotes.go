package engine

import (
	"fmt"
	"strings"

	"nearcell/catalog/reader"
	"nearcell/lang"
)

// importNotes words what a reader met that is no fault but ought to be known.
// What is true of many files is said once.
func importNotes(r *reader.Result, origin string) []string {
	var notes []string
	f := &r.Facts
	many := len(r.Files) > 1
	add := func(format string, args ...any) {
		notes = append(notes, origin+": "+fmt.Sprintf(format, args...))
	}
	for _, text := range formatNotes(f) {
		add("%s", text)
	}
	for _, c := range f.StayedText {
		add("column '%s' is TEXT, since %s", c.Column, stayedText(&c, many))
	}
	if len(f.NaiveTimes) > 0 {
		add("time stamps without a zone are taken as UTC in %s", listed(f.NaiveTimes, 6))
	}
	if len(f.AllMissing) > 0 {
		add("no value at all in %s", listed(f.AllMissing, 6))
	}
	for _, text := range repeatedHours(f.Repeated, many) {
		add("%s", text)
	}
	if text := unitsRow(r, many); text != "" {
		add("%s", text)
	}
	each := func(has func(*reader.FileFacts) bool, text string) {
		var names []string
		for i := range r.Files {
			if has(&r.Files[i]) {
				names = append(names, r.Files[i].Name)
			}
		}
		switch {
		case len(names) == 0:
		case many:
			add("in %s (%s) %s", plural(len(names), "file"), listed(names, 2), text)
		default:
			add("%s", text)
		}
	}
	each(func(f *reader.FileFacts) bool { return f.Undivided },
		"all of it was read as one column: perhaps the heading stands in another line, or DELIMITER is needed; DESCRIBE FILE guesses both")
	each(func(f *reader.FileFacts) bool { return f.NumericHeading },
		"every heading is a number: perhaps there is no heading, and the first row was taken for one")
	each(func(f *reader.FileFacts) bool { return f.TrailingDelimiter },
		"the heading ends with a delimiter; the column without a name was dropped")
	each(func(f *reader.FileFacts) bool { return f.TrailingFields },
		"rows end with a delimiter that the heading has not, and nothing behind it; that was dropped")
	for _, c := range f.UnitConflicts {
		add("the heading gives '%s' the unit %s, UNITS says %s", c.Column, c.Heading, c.Said)
	}
	return notes
}

// stayedText is why a column was not read as numbers or times.
func stayedText(c *reader.StayedText, many bool) string {
	place := fmt.Sprintf("%s in line %d", quoted(c.FirstText), c.FirstLine)
	if many {
		place += " of " + c.File
	}
	switch c.Reason {
	case reader.LeadingZeros:
		return "codes such as " + place + " would lose their zeros as numbers"
	case reader.TooLong:
		return place + " has more digits than a number keeps"
	case reader.Thousands:
		if strings.Count(c.FirstText, ",")+strings.Count(c.FirstText, ".") == 1 && !strings.ContainsAny(c.FirstText, " '\u00a0\u202f\u2009\u2019") {
			return place + " may be a number with a mark between thousands or with another decimal mark, and neither is guessed: write the file without marks between thousands"
		}
		return place + " is a number with marks between thousands, which are not read: write the file without them"
	case reader.OtherMark:
		if strings.Contains(c.FirstText, ",") {
			return place + " is a number with a decimal comma: DECIMAL MARK ',' reads it"
		}
		return place + " is a number with a decimal point: DECIMAL MARK '.' reads it"
	case reader.LooksLikeTime:
		text := fmt.Sprintf("%s is a time written otherwise than 2031-04-07 08:15:00: TIME (%s %s) reads it, with ZONE 'Europe/Zurich' behind the pattern where it is local time",
			place, lang.QuoteName(c.Column), lang.QuoteText(c.Pattern))
		if c.Other != "" {
			text += fmt.Sprintf(" (or %s: no day in the file tells)", lang.QuoteText(c.Other))
		}
		return text
	}
	return noNumbers(c.NotNumeric) + "; the first is " + place
}

func noNumbers(n int) string {
	if n == 1 {
		return "1 value is no number"
	}
	return fmt.Sprintf("%d values are no numbers", n)
}

// repeatedHours tells how local times were decided that come twice, a line for
// each column.
func repeatedHours(list []reader.RepeatedHour, many bool) []string {
	var texts []string
	for i, h := range list {
		if i > 0 && hasColumn(list[:i], h.Column) {
			continue
		}
		rows, files, by := 0, 0, ""
		for _, other := range list {
			if other.Column == h.Column {
				rows += other.Rows
				files++
				if other.By != "" {
					by = " of each '" + other.By + "'"
				}
			}
		}
		place := fmt.Sprintf("line %d", h.FirstLine)
		if many {
			place += " of " + h.File
		}
		in := ""
		if many {
			in = " in " + plural(files, "file")
		}
		texts = append(texts, fmt.Sprintf("in %s%s the local times that the end of summer time repeats were told apart by the order of the rows%s: %s, the first in %s",
			h.Column, in, by, plural(rows, "row"), place))
	}
	return texts
}

func hasColumn(list []reader.RepeatedHour, name string) bool {
	for _, h := range list {
		if h.Column == name {
			return true
		}
	}
	return false
}

// unitsRow tells of the line of units under the heading.
func unitsRow(r *reader.Result, many bool) string {
	files, line := 0, 0
	for i := range r.Files {
		if l := r.Files[i].UnitsLine; l > 0 {
			files++
			if line == 0 {
				line = l
			}
		}
	}
	if files == 0 {
		return ""
	}
	var used, passed []string
	for _, u := range r.Facts.UnitsRow {
		if u.Unit != nil {
			used = append(used, u.Column+" "+u.Unit.String())
		} else {
			passed = append(passed, quoted(u.Text))
		}
	}
	text := fmt.Sprintf("line %d is read as the units of the columns: %s", line, listed(used, 8))
	if many {
		text += fmt.Sprintf(" (so in %s)", plural(files, "file"))
	}
	if len(passed) > 0 {
		text += "; passed over: " + listed(passed, 4)
	}
	return text
}
