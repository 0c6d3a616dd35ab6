// Package problem holds the one error type that a user reads: what is wrong,
// where it stands in the text, and the nearest way out.
package problem

import (
	"errors"
	"fmt"
	"strings"

	"nearcell/lang"
)

// Source is a text that statements stand in: a script, a view, what was typed.
type Source struct {
	Name string // "hall.ncell", "view over", "input"
	Text string
}

// Place is a range of a source. A Place without a Source has no position.
type Place struct {
	Source *Source
	Span   lang.Span
}

// Problem is an error with its place and a way out. Code is a stable short
// name such as "no-column" under which the error is documented.
type Problem struct {
	Code    string
	Place   Place
	Message string
	Hint    string // a way out, may be empty
	Detail  string // lines that stand below the place, such as the faults of a file
	Cause   error
}

// New makes a problem at a place.
func New(code string, at Place, format string, args ...any) *Problem {
	return &Problem{Code: code, Place: at, Message: fmt.Sprintf(format, args...)}
}

// WithHint adds the way out.
func (p *Problem) WithHint(format string, args ...any) *Problem {
	p.Hint = fmt.Sprintf(format, args...)
	return p
}

// WithDetail adds lines that are printed below the place.
func (p *Problem) WithDetail(lines string) *Problem {
	p.Detail = lines
	return p
}

// Because keeps the error below.
func (p *Problem) Because(err error) *Problem {
	p.Cause = err
	return p
}

// Error is the message with its way out, without the place.
func (p *Problem) Error() string {
	if p.Hint == "" {
		return p.Message
	}
	return p.Message + " (" + p.Hint + ")"
}

// Unwrap is the error below, for errors.Is and errors.As.
func (p *Problem) Unwrap() error { return p.Cause }

// At gives err a place unless it has one already; a plain error becomes a
// problem with the code "failed".
func At(err error, at Place) error {
	if err == nil {
		return nil
	}
	var p *Problem
	if errors.As(err, &p) {
		if p.Place.Source == nil {
			p.Place = at
		}
		return err
	}
	return &Problem{Code: "failed", Place: at, Message: err.Error(), Cause: err}
}

// Render is the text for the terminal: file and line, message, the source line
// and the mark under it.
func Render(err error) string {
	var p *Problem
	if !errors.As(err, &p) {
		return err.Error()
	}
	text := p.Error()
	if p.Place.Source != nil {
		text = lang.Caret(p.Place.Source.Name, p.Place.Source.Text, p.Place.Span, text)
	}
	if p.Detail != "" {
		text = strings.TrimRight(text, "\n") + "\n" + p.Detail
	}
	return text
}

// NotThereYet is the refusal of something that parses and has no engine yet.
func NotThereYet(at Place, what string) *Problem {
	return New("not-yet", at, "%s is not there yet", what)
}
