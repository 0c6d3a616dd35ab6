package engine

import (
	"errors"
	"fmt"
	"strings"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// importProblem words the faults of a file: what is wrong at which line and
// column, the line itself with the place marked, and the way out.
func importProblem(err error, at problem.Place, file string) error {
	var faults *reader.Faults
	if !errors.As(err, &faults) || len(faults.List) == 0 {
		return err
	}
	for i := range faults.List {
		faults.List[i].Text = strings.TrimSpace(faults.List[i].Text)
	}
	first := faults.List[0]
	if first.Line == 0 {
		return problem.New("import", at, "'%s' was not imported: %s", file, faultText(first)).Because(err)
	}
	count := len(faults.List) + faults.More
	p := problem.New("import", at, "'%s' was not imported: %s", file, plural(count, "fault")).Because(err)
	var detail strings.Builder
	values := false
	for i, f := range faults.List {
		if i == listedFaults && count > listedFaults+1 {
			fmt.Fprintf(&detail, "%s: and %d more\n", file, count-listedFaults)
			break
		}
		values = values || valueFault(f.Kind)
		detail.WriteString(faultLine(file, f))
	}
	p.Detail = strings.TrimRight(detail.String(), "\n")
	switch {
	case values && first.Text != "":
		p.Hint = fmt.Sprintf("MISSING %s reads such a value as missing, REFUSED TO 'refused.csv' sets such lines aside",
			quoted(first.Text))
	case first.Kind == reader.FieldCount || first.Kind == reader.BareQuote:
		p.Hint = "mend the file, or REFUSED TO 'refused.csv' sets such lines aside"
	}
	return p
}

// faultLine is a fault with its line of the file and the mark under the place.
func faultLine(file string, f reader.Fault) string {
	head := fmt.Sprintf("%s:%s%s", file, faultPlaceShort(f), faultText(f))
	if f.Source == "" || f.Column == 0 {
		return head + "\n"
	}
	start := byteOffset(f.Source, f.Column-1)
	end := start + len(f.Text)
	if end > len(f.Source) || f.Kind == reader.FieldCount {
		end = len(f.Source)
	}
	marked := lang.Caret("", f.Source, lang.Span{Start: start, End: end}, "")
	_, below, _ := strings.Cut(marked, "\n")
	return head + "\n" + strings.TrimRight(below, "\n") + "\n"
}

// byteOffset is where the character number n (from 0) of a line begins.
func byteOffset(line string, n int) int {
	for i := range line {
		if n == 0 {
			return i
		}
		n--
	}
	return len(line)
}

func faultPlaceShort(f reader.Fault) string {
	if f.Column == 0 {
		return fmt.Sprintf("%d: ", f.Line)
	}
	return fmt.Sprintf("%d:%d: ", f.Line, f.Column)
}

func faultPlace(f reader.Fault) string {
	if f.Column == 0 {
		return fmt.Sprintf("line %d: ", f.Line)
	}
	return fmt.Sprintf("line %d column %d: ", f.Line, f.Column)
}

func valueFault(k reader.FaultKind) bool {
	switch k {
	case reader.NotANumber, reader.NotATimestamp, reader.NotABoolean, reader.NotFinite, reader.OutOfRange:
		return true
	}
	return false
}

// faultText is what is wrong, without its place.
func faultText(f reader.Fault) string {
	in := ""
	if f.FieldName != "" {
		in = " in column '" + f.FieldName + "'"
	}
	switch f.Kind {
	case reader.FieldCount:
		return fmt.Sprintf("%s where the heading has %d", plural(f.Got, "field"), f.Expected)
	case reader.BareQuote:
		return "a quotation mark where none can stand" + in + " (a field with quotation marks is quoted and doubles them)"
	case reader.UnclosedQuote:
		return "a quoted field" + in + " that never ends"
	case reader.NotANumber:
		return fmt.Sprintf("%s%s is no number", quoted(f.Text), in)
	case reader.NotATimestamp:
		return fmt.Sprintf("%s%s is no time stamp such as 2031-04-07 08:15:00", quoted(f.Text), in)
	case reader.NotABoolean:
		return fmt.Sprintf("%s%s is neither true nor false", quoted(f.Text), in)
	case reader.NotFinite:
		return fmt.Sprintf("%s%s is no finite number", quoted(f.Text), in)
	case reader.OutOfRange:
		return fmt.Sprintf("%s%s is beyond the range of numbers", quoted(f.Text), in)
	case reader.NotUTF8:
		return "bytes that are no UTF-8 text" + in + " (save the file as UTF-8)"
	case reader.UTF16:
		return "the file is UTF-16 (save it as UTF-8)"
	case reader.EmptyFile:
		return "the file is empty"
	case reader.NoHeading:
		return "there is no heading where it should be (HEADING AT LINE n says in which line it stands)"
	case reader.HeadingRepeated:
		return fmt.Sprintf("two columns are called %s", quoted(f.Text))
	case reader.HeadingEmpty:
		return fmt.Sprintf("column %d has no name in the heading", f.Field)
	}
	return f.Kind.String()
}

// quoted writes a text as the language does, cut to a readable length.
func quoted(s string) string {
	const most = 40
	if r := []rune(s); len(r) > most {
		s = string(r[:most]) + "…"
	}
	return "'" + strings.ReplaceAll(s, "'", "''") + "'"
}

// importNotes words what a reader met that is no fault but ought to be known.
func importNotes(f *reader.Facts, file string) []string {
	var notes []string
	add := func(format string, args ...any) {
		notes = append(notes, file+": "+fmt.Sprintf(format, args...))
	}
	for _, c := range f.StayedText {
		switch c.Reason {
		case reader.MixedValues:
			add("column '%s' is TEXT, since %s; the first is %s in line %d", c.Column,
				noNumbers(c.NotNumeric), quoted(c.FirstText), c.FirstLine)
		case reader.LeadingZeros:
			add("column '%s' is TEXT, since codes such as %s in line %d would lose their zeros as numbers",
				c.Column, quoted(c.FirstText), c.FirstLine)
		case reader.TooLong:
			add("column '%s' is TEXT, since %s in line %d has more digits than a number keeps",
				c.Column, quoted(c.FirstText), c.FirstLine)
		}
	}
	if len(f.NaiveTimes) > 0 {
		add("time stamps without a zone are taken as UTC in %s", listed(f.NaiveTimes, 6))
	}
	if len(f.AllMissing) > 0 {
		add("no value at all in %s", listed(f.AllMissing, 6))
	}
	if f.NumericHeading {
		add("every heading is a number: perhaps the file has no heading, and its first row was taken for one")
	}
	if f.TrailingDelimiter {
		add("the heading ends with a delimiter; the column without a name was dropped")
	}
	for _, c := range f.UnitConflicts {
		add("the heading gives '%s' the unit %s, UNITS says %s", c.Column, c.Heading, c.Said)
	}
	return notes
}

func noNumbers(n int) string {
	if n == 1 {
		return "1 value is no number"
	}
	return fmt.Sprintf("%d values are no numbers", n)
}

// missingNote tells of the NULLs in the attributes of a table.
func missingNote(t *column.Table) string {
	var parts []string
	for i := range t.Cols {
		if n := t.Cols[i].NullCount(); n > 0 && n < t.N {
			parts = append(parts, fmt.Sprintf("%d in %s", n, t.Schema[i].Name))
		}
	}
	return strings.Join(parts, ", ")
}
