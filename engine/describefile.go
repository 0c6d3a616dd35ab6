package engine

import (
	"bytes"
	"context"
	"fmt"
	"io"
	"slices"
	"strings"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/csv"
	"nearcell/catalog/reader/packed"
	"nearcell/catalog/reader/timeform"
	"nearcell/catalog/reader/xlsx"
	"nearcell/engine/note"
	"nearcell/engine/present"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// describedRows is how many rows DESCRIBE FILE shows.
const describedRows = 8

// describeFile is DESCRIBE FILE: how the file seems to be written, its first rows,
// and a statement that reads it. The statement has been tried on the file.
func (s *Session) describeFile(ctx context.Context, st *statement, t *lang.Describe) error {
	source, err := openSource(st, t.File)
	if err != nil {
		return err
	}
	form, err := formatOf(st.at(t.File), t.File.Value)
	if err != nil {
		return err
	}
	if source, err = unpacked(st, t.File, source); err != nil {
		return err
	}
	g := &fileGuess{file: t.File.Value, source: source, form: form}
	if err = g.sniff(ctx); err == nil {
		err = g.read(ctx)
	}
	if err != nil {
		return importProblem(err, st.at(t.File), t.File.Value)
	}
	g.shape()
	text, err := s.tried(ctx, st, g)
	if err != nil {
		return err
	}
	for i, f := range g.findings() {
		st.notes.Add(note.Note, note.Import+i, "%s", f)
	}
	return s.showGuess(st, g.result.Table, text)
}

// tried is the first of the statements that the guess allows that runs.
func (s *Session) tried(ctx context.Context, st *statement, g *fileGuess) (string, error) {
	g.name = s.freeName(g.file)
	var said bytes.Buffer
	for {
		text := g.statement()
		scratch := New(catalog.Memory(), Options{Out: io.Discard, Err: &said, Quiet: true})
		scratch.checkOnly = true
		said.Reset()
		err := scratch.Run(ctx, "this", text, st.folder)
		switch {
		case err == nil:
			return text, nil
		case ctx.Err() != nil:
			return "", ctx.Err()
		case g.campaign:
			g.campaign = false
			g.doubts = append(g.doubts, "its rows make no campaign: "+firstLine(said.String()))
		default:
			return "", problem.New("import", problem.Place{}, "no statement was found that reads '%s'", g.file).
				WithDetail("tried: " + strings.TrimSpace(text) + "\n" + strings.TrimSpace(said.String())).Because(err)
		}
	}
}

func firstLine(s string) string {
	for _, line := range strings.Split(s, "\n") {
		if _, message, ok := strings.Cut(line, ": "); ok {
			return message
		}
	}
	return s
}

// freeName makes a name out of that of the file, one that the catalog has not yet.
func (s *Session) freeName(file string) string {
	file, _ = packed.Ending(file)
	base := file[strings.LastIndexAny(file, `/\`)+1:]
	if i := strings.LastIndexByte(base, '.'); i > 0 {
		base = base[:i]
	}
	name := plainName(base)
	for n := 2; ; n++ {
		if _, err := s.catalog.Get(lang.Name{Text: name}.Key()); err != nil {
			return name
		}
		name = fmt.Sprintf("%s_%d", plainName(base), n)
	}
}

// plainName is a text as a name that needs no quotation marks.
func plainName(s string) string {
	name := strings.Map(func(r rune) rune {
		switch {
		case r >= 'a' && r <= 'z', r >= '0' && r <= '9':
			return r
		case r >= 'A' && r <= 'Z':
			return r + 'a' - 'A'
		}
		return '_'
	}, s)
	name = strings.Trim(name, "_")
	for strings.Contains(name, "__") {
		name = strings.ReplaceAll(name, "__", "_")
	}
	if name == "" || name[0] >= '0' && name[0] <= '9' {
		name = "file_" + name
	}
	return strings.TrimRight(name, "_")
}

// showGuess prints the first rows and the statement.
func (s *Session) showGuess(st *statement, t *column.Table, text string) error {
	if s.checkOnly {
		return nil
	}
	err := s.show(st, func(w present.Writer) error {
		if err := w.Begin(t.Schema); err != nil {
			return err
		}
		b := t.Batch(0, min(t.N, describedRows))
		return w.Batch(&b)
	})
	if err != nil {
		return err
	}
	if s.report != nil {
		return s.showText(text)
	}
	if s.o.Format != present.AsTable { // for programs: one more result
		table := newRows(column.Field{Name: "statement", Type: column.Text})
		table.add(column.String(text))
		return s.showTable(st, table.table())
	}
	_, err = fmt.Fprintf(s.o.Out, "\n%s\n", text)
	return err
}

// fileGuess is what is thought of a file.
type fileGuess struct {
	file   string
	source *reader.Source
	form   *format
	layout csv.Layout
	o      reader.Options
	result *reader.Result

	refused  int
	faults   []reader.Fault // the first of those refused
	others   []string       // a second way to read a time
	name     string
	campaign bool
	id       string
	position [3]string
	length   string
	units    []reader.ColumnUnit
	doubts   []string
}

// read reads the file again and again, each time with what the last time taught,
// until nothing new comes up.
func (g *fileGuess) read(ctx context.Context) error {
	g.o = reader.Options{Delimiter: g.layout.Delimiter, DecimalMark: g.layout.DecimalMark, Encoding: g.layout.Encoding, Heading: g.layout.Heading}
	const rounds = 16
	for round := 0; ; round++ {
		o := g.o
		g.refused, g.faults = 0, nil
		if slices.Contains(g.form.clauses, "REFUSED") {
			o.Refused = g.refuse
		}
		result, err := g.form.read.Read(ctx, g.source, o)
		if err != nil {
			return err
		}
		g.result = result
		if round == rounds || !g.learn() {
			return nil
		}
	}
}

// refuse takes a line at fault.
func (g *fileGuess) refuse(_ int, _ []byte, f reader.Fault) error {
	g.refused++
	if len(g.faults) < 1000 {
		g.faults = append(g.faults, f)
	}
	return nil
}

// sniff guesses the layout of what is no table by itself.
func (g *fileGuess) sniff(ctx context.Context) error {
	switch g.form {
	case delimited:
		g.layout = csv.Sniff(g.source.Data)
	case asBook:
		text, rowOf, err := xlsx.Text(ctx, g.source, reader.Options{})
		if err != nil {
			return err
		}
		g.layout = csv.Sniff(text)
		g.layout.Heading = rowOf(g.layout.Heading)
		for i, text := range g.layout.Preamble { // as the cells say it
			g.layout.Preamble[i] = strings.Trim(strings.ReplaceAll(strings.TrimRight(text, ","), `""`, `"`), `"`)
		}
		g.layout.Delimiter, g.layout.Unclear, g.layout.DecimalMark = ',', false, '.'
	default:
		g.layout = csv.Layout{Delimiter: ',', DecimalMark: '.', First: true}
	}
	return nil
}

// learn takes clauses from what a reading met; false where nothing is new.
func (g *fileGuess) learn() bool {
	learned := false
	miss := func(text string) {
		if len(g.o.Missing) < 12 && !g.misses(text) {
			g.o.Missing = append(g.o.Missing, text)
			learned = true
		}
	}
	for _, f := range g.faults {
		text := strings.TrimSpace(f.Text)
		switch f.Kind {
		case reader.NotANumber, reader.NotFinite, reader.NotATimestamp, reader.NotThisTime, reader.NotABoolean, reader.OtherKind:
			if csv.MissingWord(text) || !strings.ContainsAny(text, "0123456789") && len(text) <= 16 && text != "" {
				miss(text)
			}
		}
	}
	for _, c := range g.result.Facts.StayedText {
		switch {
		case c.Reason == reader.MixedValues && csv.MissingWord(c.FirstText):
			miss(c.FirstText)
		case c.Reason == reader.LooksLikeTime:
			form, err := timeform.Parse(c.Pattern)
			if err != nil {
				continue
			}
			g.o.Times = append(g.o.Times, reader.TimeColumn{Column: c.Column, Form: form})
			if c.Other != "" {
				g.others = append(g.others, fmt.Sprintf("the days of %s do not tell whether its pattern is '%s' or '%s'", c.Column, c.Pattern, c.Other))
			}
			learned = true
		}
	}
	return g.learnBounds(miss) || learned
}

// learnBounds finds columns of measured values of which some are bounds, such as <0.1,
// and words for missing ones among them.
func (g *fileGuess) learnBounds(miss func(string)) bool {
	if !slices.Contains(g.form.clauses, "CENSORED") {
		return false
	}
	mark := byte('.')
	if g.o.DecimalMark != 0 {
		mark = byte(g.o.DecimalMark)
	}
	learned := false
next:
	for i, f := range g.result.Table.Schema {
		taken := slices.ContainsFunc(g.result.Table.Schema, func(o column.Field) bool {
			return strings.EqualFold(o.Name, f.Name+"_low") || strings.EqualFold(o.Name, f.Name+"_high")
		})
		if f.Type != column.Text || taken || slices.Contains(g.o.Censored, f.Name) {
			continue
		}
		bound, words := "", []string(nil)
		v := &g.result.Table.Cols[i]
		for row := range v.N {
			if v.IsNull(row) {
				continue
			}
			text := strings.TrimSpace(v.Text(row))
			b, ok := reader.ParseCensored(text, mark)
			switch {
			case ok && b.Low != b.High && bound == "":
				bound = text
			case !ok && csv.MissingWord(text):
				words = append(words, text)
			case !ok:
				continue next
			}
		}
		if bound == "" {
			continue
		}
		for _, w := range words {
			miss(w)
		}
		g.o.Censored = append(g.o.Censored, f.Name)
		g.others = append(g.others, fmt.Sprintf("%s in %s says between what bounds the value lies: CENSORED reads them as %s and %s",
			quoted(bound), f.Name, lang.QuoteName(f.Name+"_low"), lang.QuoteName(f.Name+"_high")))
		learned = true
	}
	return learned
}

func (g *fileGuess) misses(text string) bool {
	for _, m := range g.o.Missing {
		if m == text {
			return true
		}
	}
	return false
}

// findings are what DESCRIBE FILE has to say about the file.
func (g *fileGuess) findings() []string {
	t, l := g.result.Table, &g.layout
	delimiters := map[rune]string{',': "commas", ';': "semicolons", '\t': "tabs", '|': "bars"}
	divided := ", divided by " + delimiters[l.Delimiter]
	if g.form != delimited {
		divided = ""
	}
	list := []string{fmt.Sprintf("%s, %s and %s%s", g.file, plural(t.N, "row"), plural(len(t.Cols), "column"), divided)}
	add := func(format string, args ...any) { list = append(list, fmt.Sprintf(format, args...)) }
	if l.Encoding != "" {
		add("its bytes are no UTF-8; they are read as %s: look at letters such as ü and °", l.Encoding)
	}
	if len(l.Preamble) > 0 {
		verb := "stand"
		if len(l.Preamble) == 1 {
			verb = "stands"
		}
		add("the heading is line %d; before it %s %s: %s", l.Heading, verb, plural(len(l.Preamble), "line"), listed(quotedAll(l.Preamble), 6))
	}
	if l.Comma != "" {
		add("numbers have a decimal comma, as %s in line %d", quoted(l.Comma), l.CommaAt)
	}
	if len(g.o.Missing) > 0 {
		add("read as missing, in every column: %s", listed(quotedAll(g.o.Missing), 12))
	}
	for _, c := range g.o.Times {
		add("%s is written as '%s' and taken as UTC: if it is local time, write ZONE 'Europe/Zurich', or what it is, behind the pattern", c.Column, c.Form)
	}
	list = append(list, g.others...)
	for _, text := range importNotes(g.result, g.file) {
		text = strings.TrimPrefix(text, g.file+": ")
		if !strings.HasPrefix(text, "time stamps without a zone") || len(g.o.Times) == 0 {
			list = append(list, text)
		}
	}
	if len(g.units) > 0 {
		var texts []string
		for _, u := range g.units {
			texts = append(texts, u.Column)
		}
		add("units stand in the headings of %s", listed(texts, 8))
	}
	if g.refused > 0 && len(g.faults) > 0 {
		f := g.faults[0]
		add("%s at fault would be set aside; the first: %s%s", plural(g.refused, "line"), faultPlace(f), faultText(f))
	}
	return append(list, g.doubts...)
}

func quotedAll(texts []string) []string {
	out := make([]string, len(texts))
	for i, s := range texts {
		out[i] = quoted(s)
	}
	return out
}
