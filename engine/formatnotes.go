package engine

import (
	"fmt"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// formatFaultText is faultText for what only some formats have.
func formatFaultText(f reader.Fault, in string) string {
	switch f.Kind {
	case reader.NotTheFormat:
		return "it is no " + f.Detail + " file"
	case reader.CutShort:
		text := "the file ends too early, in " + partName(f.Text)
		if f.Expected > 0 {
			text += fmt.Sprintf(" (%d of %d)", f.Got, f.Expected)
		}
		return text
	case reader.Damaged:
		text := partName(f.Text) + in + " is damaged"
		if f.Detail != "" {
			text += ": " + f.Detail
		}
		if f.Expected > 0 {
			text += fmt.Sprintf(" (%d where %d is expected)", f.Got, f.Expected)
		}
		return text
	case reader.TooLarge:
		return fmt.Sprintf("%s would take more than %d", partName(f.Text), f.Expected)
	case reader.NotSupported:
		return fmt.Sprintf("%s of %s is not read", f.Text, f.Detail)
	case reader.NothingToRead:
		if f.FieldName != "" {
			return fmt.Sprintf("it has no column that can be read: '%s' is %s", f.FieldName, kindName(f.Detail))
		}
		return "it has no columns"
	case reader.BeyondInteger:
		return fmt.Sprintf("%s%s is beyond whole numbers of 64 bits", quoted(f.Text), in)
	case reader.NoSheet:
		if f.Detail == "" {
			return "the workbook has no sheets"
		}
		return "there is no sheet " + quoted(f.Text)
	case reader.NoRows:
		return "the sheet " + quoted(f.Text) + " is empty"
	}
	return jsonFaultText(f, in)
}

// jsonFaultText is faultText for objects.
func jsonFaultText(f reader.Fault, in string) string {
	switch f.Kind {
	case reader.NotJSON:
		return fmt.Sprintf("%s stands where %s should", quoted(f.Text), f.Detail)
	case reader.KeyRepeated:
		return fmt.Sprintf("the key %s stands twice in one object", quoted(f.Text))
	case reader.NotObject:
		return fmt.Sprintf("%s stands where an object should", quoted(f.Text))
	case reader.OtherKind:
		return fmt.Sprintf("%s%s is of another kind than most values, which are %s", quoted(f.Text), in, f.Want)
	case reader.NestedList:
		return "a list" + in + ", or something nested too deeply or empty, where a single value should stand"
	case reader.TypesDiffer:
		return fmt.Sprintf("the column '%s' is %s here and %s in the files before", f.FieldName, f.Text, f.Detail)
	}
	return f.Kind.String()
}

// formatHint is the way out of what only some formats have.
func formatHint(f reader.Fault) string {
	switch f.Kind {
	case reader.CutShort, reader.Damaged:
		return "copy or export the file again: this one is not whole"
	case reader.NotSupported:
		switch f.Text {
		case "LAZ":
			return "unpack it into .las with the tool that made it or one for point clouds"
		case "xls", "xlsb":
			return "save it as .xlsx or as .csv"
		case "encryption":
			return "export it without a password"
		}
		return "export it in another version or format"
	case reader.NotTheFormat:
		return "the ending of the name says how a file is read: give it the right one"
	case reader.NoSheet:
		if f.Detail != "" {
			return "it has " + f.Detail
		}
	case reader.NoRows:
		return "SHEET 'name' or SHEET '2' reads another one"
	case reader.OtherKind:
		if f.Want != column.Text {
			return fmt.Sprintf("MISSING %s reads such a value as missing, REFUSED TO 'refused.jsonl' sets such lines aside", quoted(f.Text))
		}
		return "REFUSED TO 'refused.jsonl' sets such lines aside"
	case reader.NotJSON, reader.KeyRepeated, reader.NestedList, reader.NotObject:
		return "mend the file, or REFUSED TO 'refused.jsonl' sets such lines aside"
	case reader.BeyondInteger:
		return "such numbers are no counts: export the column as text"
	case reader.NothingToRead:
		return "export it as a flat table"
	}
	return ""
}

// partName is a part of a file as the user is told of it.
func partName(text string) string {
	switch text {
	case "":
		return "a part of it"
	case "header", "footer", "points", "rows", "archive", "heading":
		return "its " + text
	case "packed data", "records before the points", "records behind the points":
		return "its " + text
	}
	return quoted(text)
}

func kindName(kind string) string {
	switch kind {
	case "list", "map", "array":
		return "a " + kind
	}
	return kind
}

// formatNotes words what formats have to tell beyond delimited text.
func formatNotes(f *reader.Facts) []string {
	var texts []string
	add := func(format string, args ...any) { texts = append(texts, fmt.Sprintf(format, args...)) }
	if f.Format != "" {
		add("%s", f.Format)
	}
	if len(f.Sheets) > 0 {
		add("the sheet %s was read; SHEET reads another one: %s", quoted(f.Sheet), listed(quotedAll(f.Sheets), 6))
	}
	if f.Unread > 0 {
		add("%s beside the points not read", plural(f.Unread, "thing"))
	}
	for _, n := range f.Columns {
		if n.Kind != reader.KeyMissing {
			texts = append(texts, columnNote(n))
		}
	}
	var missing []string
	for _, n := range f.Columns {
		if n.Kind == reader.KeyMissing {
			missing = append(missing, fmt.Sprintf("'%s' in %d", n.Column, n.Count))
		}
	}
	if len(missing) > 0 {
		add("keys that objects have not, read as missing: %s", listed(missing, 6))
	}
	return texts
}

// columnNote words what became of a column.
func columnNote(n reader.ColumnNote) string {
	switch n.Kind {
	case reader.NotRead:
		if n.Column == "" {
			return n.Detail + " of each point that nothing describes were not read"
		}
		return fmt.Sprintf("column '%s' is left out: it is %s", n.Column, kindName(n.Detail))
	case reader.Inexact:
		return fmt.Sprintf("in '%s' %s more digits than a REAL keeps and were rounded, the first %s", n.Column, have(n.Count, "value"), n.Detail)
	case reader.NaNMissing:
		return fmt.Sprintf("in '%s' NaN is read as missing, in %s", n.Column, plural(n.Count, "row"))
	case reader.TimesRounded:
		return fmt.Sprintf("in '%s' %s were rounded from nanoseconds to microseconds", n.Column, plural(n.Count, "time"))
	case reader.ErrorCells:
		return fmt.Sprintf("%s an error and read as missing, the first %s", have(n.Count, "cell"), n.Detail)
	case reader.FormulaCells:
		return fmt.Sprintf("%s a formula without a value and read as missing, the first %s; the program that made the file writes the values when it saves", have(n.Count, "cell"), n.Detail)
	case reader.MergedCells:
		return fmt.Sprintf("%s covered by merged cells and read as missing, the first range %s", plural(n.Count, "cell"), n.Detail)
	case reader.NoDataMissing:
		return fmt.Sprintf("in '%s' %s read as missing, as the file declares", n.Column, plural(n.Count, "value"))
	}
	return n.Detail
}

// have is "1 value has" or "3 values have".
func have(n int, thing string) string {
	if n == 1 {
		return plural(n, thing) + " has"
	}
	return plural(n, thing) + " have"
}
