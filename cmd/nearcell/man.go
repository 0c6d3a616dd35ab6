package main

import (
	"bufio"
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"nearcell/engine"
	"nearcell/engine/function"
	"nearcell/engine/relation"
)

// manual writes the manual page, made of the commands and flags that there are
// and of the registries of the language.
func manual(w io.Writer, root *cobra.Command) error {
	p := &page{w: bufio.NewWriter(w)}
	p.line(`.\" made by nearcell man`)
	p.line(`.TH NEARCELL 1 "" "nearcell %s" "nearcell"`, troff(version))
	p.heading("NAME")
	p.text("nearcell - " + root.Short)
	p.heading("SYNOPSIS")
	p.synopsis(root)
	p.heading("DESCRIPTION")
	p.text(root.Long)
	p.heading("COMMANDS")
	p.item("nearcell", "the prompt; without a terminal, runs what the standard input says")
	for _, c := range root.Commands() {
		if c.IsAvailableCommand() {
			p.item("nearcell "+callOf(c), c.Short)
		}
	}
	p.heading("OPTIONS")
	root.PersistentFlags().VisitAll(func(f *pflag.Flag) {
		_, usage := pflag.UnquoteUsage(f)
		p.item(flagText(f), usage)
	})
	p.language()
	p.heading("EXIT STATUS")
	p.item("0", "all went well")
	p.item("1", "a statement failed")
	p.item("2", "wrong usage")
	p.item("3", "all statements ran, and a requirement failed")
	p.item("130", "interrupted")
	p.heading("FILES")
	p.item(".nearcell", "the catalog, unless --catalog names another folder; the history of the prompt lies in it")
	p.heading("ENVIRONMENT")
	p.item("NO_COLOR", "no colour, if set to anything")
	return p.w.Flush()
}

// page is a manual page that is being written.
type page struct{ w *bufio.Writer }

func (p *page) line(format string, args ...any) { fmt.Fprintf(p.w, format+"\n", args...) }

func (p *page) heading(text string) { p.line(".SH %s", troff(text)) }

// text writes paragraphs; indented lines stay as they are.
func (p *page) text(text string) {
	literal := false
	for _, l := range strings.Split(strings.TrimSpace(text), "\n") {
		indented := strings.HasPrefix(l, "  ")
		switch {
		case indented && !literal:
			p.line(".RS")
			p.line(".nf")
		case !indented && literal:
			p.line(".fi")
			p.line(".RE")
		}
		literal = indented
		if strings.TrimSpace(l) == "" {
			p.line(".PP")
			continue
		}
		p.line("%s", troff(l))
	}
	if literal {
		p.line(".fi")
		p.line(".RE")
	}
}

func (p *page) item(head, text string) {
	p.line(".TP")
	p.line(`.B %s`, troff(head))
	p.line("%s", troff(text))
}

func (p *page) synopsis(root *cobra.Command) {
	p.line(".B nearcell")
	p.line("[options]")
	for _, c := range root.Commands() {
		if c.IsAvailableCommand() {
			p.line(".br")
			p.line(".B nearcell %s", troff(callOf(c)))
			p.line("[options]")
		}
	}
}

// language lists the statements, relations and functions.
func (p *page) language() {
	p.heading("LANGUAGE")
	p.text("A script is statements, each ended by a semicolon. A statement begins with " +
		strings.Join(engine.Statements(), ", ") + ". HELP; at the prompt tells of each.")
	p.heading("RELATIONS")
	for _, d := range relation.All() {
		text := "one row for each " + d.RowIs + ": " + d.Meaning + "."
		if len(d.Clauses) > 0 {
			text += " Clauses: " + strings.Join(d.Clauses, ", ") + "."
		}
		p.item(d.Noun+" OF …", text)
	}
	p.heading("FUNCTIONS")
	for _, f := range function.All() {
		p.item(f.Signature, f.Meaning)
	}
	p.heading("AGGREGATES")
	for _, f := range function.Aggregates() {
		p.item(f.Signature, f.Meaning)
	}
	p.heading("WINDOW FUNCTIONS")
	for _, f := range function.Windows() {
		p.item(f.Signature, f.Meaning)
	}
}

// callOf is how a command is called; the library's own has its shells below it.
func callOf(c *cobra.Command) string {
	if c.HasSubCommands() {
		return c.Use + " SHELL"
	}
	return c.Use
}

func flagText(f *pflag.Flag) string {
	text := "--" + f.Name
	if f.Shorthand != "" {
		text = "-" + f.Shorthand + ", " + text
	}
	if name, _ := pflag.UnquoteUsage(f); name != "" {
		text += " " + name
	}
	return text
}

// special are the characters that the language of manual pages writes otherwise.
var special = strings.NewReplacer(`\`, `\e`, "-", `\-`, "…", "...", "∞", `\(if`, "·", `\(pc`, "°", `\(de`,
	"²", `\(S2`, "³", `\(S3`, "×", `\(mu`, "≤", `\(<=`, "≥", `\(>=`, "Σ", `\(*S`, "Δ", `\(*D`, "–", `\(en`, "—", `\(em`)

// troff writes a text so that nothing in it is taken for a request.
func troff(text string) string {
	text = special.Replace(text)
	if strings.HasPrefix(text, ".") || strings.HasPrefix(text, "'") {
		text = `\&` + text
	}
	return text
}
