package engine

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"slices"
	"strings"
	"unicode/utf8"

	"nearcell/engine/note"
	"nearcell/engine/present"
	"nearcell/engine/problem"
	"nearcell/engine/report"
	"nearcell/lang"
)

// reporting is a session's report while it is made, and what it has come to rest on.
type reporting struct {
	*report.Report
	scripts []report.Script
	inputs  []report.Input
	seen    map[string]bool // inputs, by all that is told of them
	left    int             // statements after the one at hand
}

func newReporting() *reporting { return &reporting{Report: report.New(), seen: map[string]bool{}} }

// WriteReport writes the report to the session's output, where results are written as
// one (--as html); otherwise it does nothing. It is called once, at the end, also of a
// script that failed: the report says so.
func (s *Session) WriteReport() error {
	if s.report == nil {
		return nil
	}
	p := report.Provenance{Program: s.o.Program, Scripts: s.report.scripts, Inputs: s.report.inputs}
	for name := range s.fixed {
		v := s.params[name]
		p.Values = append(p.Values, report.Value{Name: name, Text: v.Type.String() + " " + v.String()})
	}
	slices.SortFunc(p.Values, func(a, b report.Value) int { return strings.Compare(a.Name, b.Name) })
	return s.report.Write(s.o.Out, p)
}

// addScript keeps the text of a script for the end of the report, once.
func (r *reporting) addScript(source *problem.Source) {
	if r == nil {
		return
	}
	sum := sha256.Sum256([]byte(source.Text))
	script := report.Script{Name: source.Name, SHA256: hex.EncodeToString(sum[:]), Text: source.Text}
	if !slices.Contains(r.scripts, script) {
		r.scripts = append(r.scripts, script)
	}
}

// addInputs keeps what a statement rests on; an object that was made anew in between
// comes twice, since both were read.
func (s *Session) addInputs(tree lang.Statement) {
	if s.report == nil {
		return
	}
	for _, in := range s.inputs(tree) {
		made := report.Input{Name: in.Name, Kind: strings.ToLower(in.Kind), Text: in.Text, Rows: in.Rows}
		for _, f := range in.Files {
			made.Files = append(made.Files, report.File{Path: f.Path, SHA256: f.SHA256, Bytes: f.Bytes, Rows: f.Rows})
		}
		if key := fmt.Sprintf("%+v", made); !s.report.seen[key] {
			s.report.seen[key] = true
			s.report.inputs = append(s.report.inputs, made)
		}
	}
}

// place says where a statement stands: "hall.ncell, line 12".
func (st *statement) place() string {
	if st.tree == nil {
		return st.source.Name
	}
	return fmt.Sprintf("%s, line %d", st.source.Name, 1+strings.Count(st.source.Text[:st.tree.Span().Start], "\n"))
}

// text is the statement as it is written.
func (st *statement) text() string {
	if st.tree == nil {
		return ""
	}
	return st.source.Text[st.tree.Span().Start:st.tree.Span().End]
}

// writer is where the rows of one result go.
func (s *Session) writer(st *statement) (present.Writer, error) {
	if s.report != nil {
		return s.report.Table(st.place(), st.text(), s.tableOptions()), nil
	}
	return present.New(s.o.Format, &lateSeparator{w: s.o.Out, pending: s.results > 0}, s.tableOptions())
}

// plain tells whether texts are printed as they are, not as rows for programs.
func (s *Session) plain() bool { return s.o.Format == present.AsTable || s.report != nil }

// showText prints a text, as it is.
func (s *Session) showText(text string) error {
	if s.report != nil {
		s.report.Plain(text)
		return nil
	}
	out := &lateSeparator{w: s.o.Out, pending: s.results > 0}
	_, err := out.Write([]byte(text))
	s.results++
	return err
}

// remark is TITLE or TEXT: words for the report. In a table's company they are printed
// between the tables; formats for programs stay rows and nothing else.
func (s *Session) remark(st *statement, t *lang.Remark) error {
	text := t.Text.Value
	if t.Title && strings.TrimSpace(text) == "" {
		return problem.New("clause", st.at(t.Text), "a title needs a text").WithHint("TITLE 'Hall 4, summer mapping'")
	}
	switch {
	case s.checkOnly:
		return nil
	case s.report != nil && t.Title:
		s.report.Title(text)
		return nil
	case s.report != nil:
		s.report.Text(text)
		return nil
	case s.o.Format != present.AsTable:
		return nil
	}
	p := &page{width: s.helpWidth()}
	paragraphs := report.Paragraphs(text)
	if t.Title {
		title := strings.Join(paragraphs, " ")
		return s.showText(title + "\n" + strings.Repeat("═", utf8.RuneCountInString(title)) + "\n")
	}
	for _, one := range paragraphs {
		p.say(one)
	}
	return s.showText(p.text())
}

// remarks puts the notes of a statement into the report.
func (r *reporting) remarks(notes *note.Notes) {
	if r == nil {
		return
	}
	for _, l := range notes.Lines() {
		level := report.Note
		if l.Level == note.Warning {
			level = report.Warning
		}
		r.Remark(level, l.Text)
	}
}

// decided puts a verdict into the report.
func (r *reporting) decided(v *verdict) {
	if r == nil {
		return
	}
	r.Decided(report.Verdict{Result: v.result, Label: v.label, Reason: v.reason, Place: fmt.Sprintf("%s, line %d", v.script, v.line)})
}

// follow begins a script of n statements, perhaps inside another one; what it returns
// ends it.
func (r *reporting) follow(n int) func() {
	if r == nil {
		return func() {}
	}
	outer := r.left
	r.left += n
	return func() { r.left = outer }
}

// next begins the next statement.
func (r *reporting) next() {
	if r != nil {
		r.left--
	}
}

// failed puts an error into the report. Unless the session goes on, nothing after it
// is run.
func (r *reporting) failed(text string, goesOn bool) {
	if r == nil {
		return
	}
	notRun := r.left
	if goesOn {
		notRun = 0
	}
	r.Failed(text, notRun)
}
