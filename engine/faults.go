package engine

import (
	"errors"
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/timeform"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// importProblem words what kept files from being read: a column that a clause
// names and they have not, or their faults.
func (c *clauses) importProblem(err error, at problem.Place, file string) error {
	var none *reader.ColumnError
	if !errors.As(err, &none) {
		return importProblem(err, at, file)
	}
	if c.times != nil {
		for _, t := range c.times.Columns {
			if t.Column.Text == none.Column {
				at = c.st.at(t.Column)
			}
		}
	}
	p := problem.New("no-column", at, "there is no column '%s' in %s", none.Column, file).Because(err)
	if near := lang.Nearest(none.Column, none.Have); near != "" {
		return p.WithHint("did you mean '%s'?", near)
	}
	return p.WithHint("it has %s", listed(none.Have, 12))
}

// importProblem words the faults of files: what is wrong at which line and
// column, the line itself with the place marked, and the way out.
func importProblem(err error, at problem.Place, file string) error {
	var memory *reader.MemoryError
	if errors.As(err, &memory) {
		return tooLarge(at, file, memory.Need, memory.Limit).Because(err)
	}
	if errors.Is(err, reader.ErrChanged) {
		return changedMeanwhile(at, file).Because(err)
	}
	var faults *reader.Faults
	if !errors.As(err, &faults) || len(faults.List) == 0 {
		return err
	}
	for i := range faults.List {
		f := &faults.List[i]
		f.Text = strings.TrimSpace(f.Text)
		if f.File == "" {
			f.File = file
		}
	}
	first := faults.List[0]
	count := len(faults.List) + faults.More
	if first.Line == 0 && first.Record == 0 && count == 1 {
		p := problem.New("import", at, "'%s' was not imported: %s", first.File, faultText(first)).Because(err)
		p.Hint = faultHint(first)
		return p
	}
	p := problem.New("import", at, "'%s' was not imported: %s", file, plural(count, "fault")).Because(err)
	var detail strings.Builder
	for i, f := range faults.List {
		if i == listedFaults && count > listedFaults+1 {
			fmt.Fprintf(&detail, "%s: and %d more\n", file, count-listedFaults)
			break
		}
		detail.WriteString(faultLine(f))
		if p.Hint == "" {
			p.Hint = faultHint(f)
		}
	}
	p.Detail = strings.TrimRight(detail.String(), "\n")
	if (count >= 3 || first.Expected == 1) && allFieldCounts(faults.List) {
		p.Hint = fmt.Sprintf("if the heading stands in another line, HEADING AT LINE says in which: DESCRIBE FILE %s guesses it; else REFUSED TO 'refused.csv' sets such lines aside",
			lang.QuoteText(first.File))
	}
	return p
}

// tooLarge is the refusal of a file that makes a larger table than memory may hold.
func tooLarge(at problem.Place, file string, need, limit int64) *problem.Problem {
	return problem.New("memory", at, "%s as a table takes %s, more than the %s of --memory", file, relation.SizeText(need), relation.SizeText(limit)).
		WithHint("give more with --memory, or import a part of the file")
}

// changedMeanwhile is the refusal of a file that was not one thing while it was read.
func changedMeanwhile(at problem.Place, file string) *problem.Problem {
	return problem.New("file-changed", at, "'%s' was not imported: it was changed while it was read", file).
		WithHint("import it when nobody writes to it any more, or import a copy")
}

// allFieldCounts reports whether lines have other numbers of fields than the
// heading and nothing else is wrong.
func allFieldCounts(list []reader.Fault) bool {
	for _, f := range list {
		if f.Kind != reader.FieldCount {
			return false
		}
	}
	return true
}

// faultHint is the way out of a fault, empty where its text says it.
func faultHint(f reader.Fault) string {
	switch f.Kind {
	case reader.NotANumber, reader.NotATimestamp, reader.NotABoolean, reader.NotFinite, reader.OutOfRange, reader.NotThisTime:
		if f.Text == "" || f.Source == "" && f.Cell == "" { // a binary file, or points: nothing can be set aside
			return ""
		}
		missing := fmt.Sprintf("MISSING %s reads such a value as missing, REFUSED TO 'refused.csv' sets such lines aside", quoted(f.Text))
		switch {
		case isCode(f):
			return "where the column holds codes and not numbers, put a letter before each of them in the file (K5A, K1), or make it the ID of a campaign; REFUSED TO 'refused.csv' sets such lines aside"
		case f.Kind == reader.NotATimestamp || f.Kind == reader.NotThisTime:
			var g timeform.Guess
			g.Add([]byte(f.Text))
			if pattern, _ := g.Pattern(); pattern != "" && pattern != f.Detail {
				return fmt.Sprintf("TIME (%s '%s') reads such times", lang.QuoteName(f.FieldName), pattern)
			}
		}
		return missing
	case reader.FieldCount, reader.BareQuote, reader.NulByte:
		return "mend the file, or REFUSED TO 'refused.csv' sets such lines aside"
	case reader.NoSuchTime:
		return "mend the file, or REFUSED TO 'refused.csv' sets such lines aside"
	case reader.SkippedTime:
		return "a logger that keeps one offset all year is read with that: ZONE '+01:00'"
	case reader.RepeatedTime:
		return "the rows of one logger must run through both hours in their order; a logger that keeps one offset all year is read with that: ZONE '+01:00'; REFUSED TO 'refused.csv' sets such lines aside"
	case reader.HeadingRepeated:
		return "give them different names in the heading of the file"
	case reader.HeadingEmpty:
		return "give it a name in the heading of the file; if that stands in another line, HEADING AT LINE says in which"
	case reader.NoPreamble:
		if f.Detail != "" {
			return fmt.Sprintf("it has %s: did you mean that?", quoted(f.Detail))
		}
		if f.Got <= 1 {
			return "the heading is the first line; HEADING AT LINE says in which it stands"
		}
		return fmt.Sprintf("the heading is line %d; DESCRIBE FILE shows what stands before it", f.Got)
	case reader.PreambleRepeated:
		return "take more of the line, so that it stands there once"
	case reader.ColumnTaken:
		return "give PREAMBLE's column another name"
	case reader.ColumnMissing, reader.ColumnAdded:
		return "files that are read as one have the same columns, in any order; leave such a file out of the pattern, or mend its heading"
	case reader.UnitsDiffer:
		return "bring the files to one unit"
	case reader.NotInEncoding:
		if f.Detail == string(reader.Latin1) {
			return "try ENCODING 'windows-1252'"
		}
	}
	return formatHint(f)
}

// isCode tells a code such as 5A among numbers from a number with a slip in it.
func isCode(f reader.Fault) bool {
	if f.Kind != reader.NotANumber || f.Want != column.Integer || len(f.Text) > 8 {
		return false
	}
	digits, letters := 0, 0
	for _, r := range f.Text {
		switch {
		case r >= '0' && r <= '9':
			digits++
		case unicode.IsLetter(r):
			letters++
		default:
			return false
		}
	}
	return digits > 0 && letters > 0
}

// faultLine is a fault with its line of the file and the mark under the place.
func faultLine(f reader.Fault) string {
	head := fmt.Sprintf("%s:%s%s", f.File, faultPlaceShort(f), faultText(f))
	if f.Source == "" || f.Column == 0 {
		return head + "\n"
	}
	line, at := window(f.Source, f.Column-1)
	line = printable(line)
	start := byteOffset(line, at)
	end := start + len(printable(f.Text))
	if end > len(line) || f.Kind == reader.FieldCount {
		end = len(line)
	}
	marked := lang.Caret("", line, lang.Span{Start: start, End: end}, "")
	_, below, _ := strings.Cut(marked, "\n")
	return head + "\n" + strings.TrimRight(below, "\n") + "\n"
}

// window cuts a long line of a file to what stands around its character number n (from
// 0), and says which character that is then.
func window(line string, n int) (part string, at int) {
	const before, most = 60, 200
	if utf8.RuneCountInString(line) <= most {
		return line, n
	}
	at = n
	if n > before {
		line, at = "…"+line[byteOffset(line, n-before):], before+1
	}
	if end := byteOffset(line, most); end < len(line) {
		line = line[:end] + "…"
	}
	return line, at
}

// printable writes a line of a file with as many characters and nothing that a
// terminal would obey or trip over.
func printable(s string) string {
	return strings.Map(func(r rune) rune {
		if unicode.IsControl(r) && r != '\t' {
			return utf8.RuneError
		}
		return r
	}, string([]rune(s)))
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
	switch {
	case f.Cell != "":
		return f.Cell + ": "
	case f.Record > 0:
		return fmt.Sprintf("row %d: ", f.Record)
	}
	if f.Line == 0 {
		return " "
	}
	if f.Column == 0 {
		return fmt.Sprintf("%d: ", f.Line)
	}
	return fmt.Sprintf("%d:%d: ", f.Line, f.Column)
}

func faultPlace(f reader.Fault) string {
	switch {
	case f.Cell != "":
		return f.Cell + ": "
	case f.Record > 0:
		return fmt.Sprintf("row %d: ", f.Record)
	}
	if f.Column == 0 {
		return fmt.Sprintf("line %d: ", f.Line)
	}
	return fmt.Sprintf("line %d column %d: ", f.Line, f.Column)
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
		return "bytes that are no UTF-8 text" + in + " (ENCODING 'latin1' or 'windows-1252' may read them)"
	case reader.UTF16:
		return "the file is UTF-16 (ENCODING 'utf-16' reads it)"
	case reader.EmptyFile:
		return "the file is empty"
	case reader.NoHeading:
		return "no heading stands here (HEADING AT LINE says in which line it does, DESCRIBE FILE guesses it)"
	case reader.HeadingRepeated:
		return fmt.Sprintf("two columns are called %s", quoted(f.Text))
	case reader.HeadingEmpty:
		return fmt.Sprintf("column %d has no name in the heading", f.Field)
	case reader.NulByte:
		return "a byte 0" + in + ", as loggers leave that lose power while they write"
	case reader.NotThisTime:
		return fmt.Sprintf("%s%s is not written as %s", quoted(f.Text), in, quoted(f.Detail))
	case reader.NoSuchTime:
		return fmt.Sprintf("%s%s is no date or time of day", quoted(f.Text), in)
	case reader.SkippedTime:
		return fmt.Sprintf("%s%s never was: the clocks of %s skip it", quoted(f.Text), in, f.Detail)
	case reader.RepeatedTime:
		return fmt.Sprintf("%s%s came twice on the clocks of %s, and the order of the rows does not tell which one it is", quoted(f.Text), in, f.Detail)
	}
	return filesFaultText(f, in)
}

// filesFaultText is faultText for what stands outside the records.
func filesFaultText(f reader.Fault, in string) string {
	switch f.Kind {
	case reader.NoPreamble:
		return fmt.Sprintf("%s does not stand in the lines before the heading", quoted(f.Text))
	case reader.PreambleRepeated:
		return fmt.Sprintf("%s stands twice before the heading, first in line %d", quoted(f.Text), f.Got)
	case reader.ColumnTaken:
		return fmt.Sprintf("PREAMBLE makes a column %s, and the file has one", quoted(f.Text))
	case reader.ColumnMissing:
		return fmt.Sprintf("there is no column %s, which '%s' has", quoted(f.Text), f.Detail)
	case reader.ColumnAdded:
		return fmt.Sprintf("there is a column %s, which '%s' has not", quoted(f.Text), f.Detail)
	case reader.UnitsDiffer:
		return fmt.Sprintf("the unit%s is %s here and %s in the files before", in, textOrNone(f.Text), textOrNone(f.Detail))
	case reader.NotInEncoding:
		return fmt.Sprintf("bytes that are no %s text", f.Detail)
	}
	return formatFaultText(f, in)
}

func textOrNone(unit string) string {
	if unit == "" {
		return "not said"
	}
	return unit
}

// quoted writes a text as the language does, cut to a readable length.
func quoted(s string) string {
	const most = 40
	if r := []rune(s); len(r) > most {
		s = string(r[:most]) + "…"
	}
	return "'" + strings.ReplaceAll(s, "'", "''") + "'"
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
