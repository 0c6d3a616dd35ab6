package lang

import (
	"errors"
	"strings"
	"testing"

	"github.com/cockroachdb/datadriven"
)

// The stories in testdata show what a text is read as, or how its fault is reported.
// "go test ./lang -rewrite" writes what comes out now; read the difference before
// keeping it.
//
//	script     the statements as Print writes them, or the first fault with its caret
//	expr       the same for one expression
//	tree       an expression with every bracket written out
//	split      the pieces of a script
func TestStories(t *testing.T) {
	datadriven.Walk(t, "testdata/stories", func(t *testing.T, path string) {
		datadriven.RunTest(t, path, func(t *testing.T, d *datadriven.TestData) string {
			switch d.Cmd {
			case "script":
				script, err := Parse(d.Input)
				if err != nil {
					return report(t, d.Input, err)
				}
				return Print(script)
			case "expr":
				e, err := ParseExpr(d.Input)
				if err != nil {
					return report(t, d.Input, err)
				}
				return Print(e) + "\n"
			case "tree":
				e, err := ParseExpr(d.Input)
				if err != nil {
					return report(t, d.Input, err)
				}
				return bracketed(e) + "\n"
			case "split":
				return pieces(d.Input)
			}
			d.Fatalf(t, "no such command: %s", d.Cmd)
			return ""
		})
	})
}

func report(t *testing.T, src string, err error) string {
	t.Helper()
	var fault *Error
	if !errors.As(err, &fault) {
		t.Fatalf("not an *Error: %v", err)
	}
	if fault.Span.Start < 0 || fault.Span.End < fault.Span.Start || fault.Span.End > len(src) {
		t.Fatalf("span %v lies outside the text", fault.Span)
	}
	return Caret("hall.ncell", src, fault.Span, fault.Error()) + "\n"
}

func pieces(src string) string {
	var b strings.Builder
	for _, piece := range Split(src) {
		b.WriteString("[" + strings.ReplaceAll(src[piece.Start:piece.End], "\n", "⏎") + "]")
		if !piece.Closed {
			b.WriteString(" open")
		}
		b.WriteString("\n")
	}
	return b.String()
}

// bracketed writes operators in brackets, to show how they bind.
func bracketed(e Expr) string {
	switch e := e.(type) {
	case *Binary:
		return "(" + bracketed(e.Left) + " " + string(e.Op) + " " + bracketed(e.Right) + ")"
	case *Unary:
		return "(" + string(e.Op) + " " + bracketed(e.Operand) + ")"
	case *Is:
		not := ""
		if e.Not {
			not = "NOT "
		}
		return "(" + bracketed(e.Operand) + " IS " + not + string(e.What) + ")"
	case *Between:
		return "(" + bracketed(e.Operand) + " BETWEEN " + bracketed(e.Low) + " AND " + bracketed(e.High) + ")"
	case *AtTimeZone:
		return "(" + bracketed(e.Operand) + " AT TIME ZONE " + bracketed(e.Zone) + ")"
	}
	return Print(e)
}
