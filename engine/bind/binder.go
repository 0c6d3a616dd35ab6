package bind

import (
	"errors"
	"fmt"
	"strings"

	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// binder binds the parts of one text: a statement, or a view that it uses.
type binder struct {
	env    *Env
	source *problem.Source
	ctes   *cte     // the names of WITH that are visible
	views  []string // keys of the views (or solids) being bound, outermost first
	outer  *outside // where the query stands, if it stands in an expression
	quiet  bool     // bound only for its faults

	sources *int // bound so far in the whole statement

	contents map[lang.Solid]*Content // of the parts of solids that come from files
	stored   *stored                 // in a solid of the catalog: its contents; else nil
}

// maxSources is how many sources a statement may unfold into. Views and names of
// WITH are bound for each use: twenty of them, each used twice by the next, make
// a million.
const maxSources = 5000

func newBinder(env *Env) *binder { return &binder{env: env, source: env.Source, sources: new(int)} }

// cte is a name of WITH; its query sees the names before it. It is bound once:
// however often it is used, the plan has it once.
type cte struct {
	def    *lang.CTE
	before *cte
	outer  *outside  // where its WITH stands
	bound  [2]*bound // [1]: quietly, for its faults
}

// at is the place of a node in the text that is being bound.
func (b *binder) at(n lang.Node) problem.Place {
	return problem.Place{Source: b.source, Span: n.Span()}
}

// spanning is the place from one node to the end of another.
func (b *binder) spanning(from, to lang.Node) problem.Place {
	return problem.Place{Source: b.source, Span: lang.Span{Start: from.Span().Start, End: to.Span().End}}
}

// text is a node as the user wrote it, with runs of white space made one blank.
func (b *binder) text(n lang.Node) string {
	s := n.Span()
	if b.source != nil && s.Len() > 0 && s.End <= len(b.source.Text) {
		return squeeze(b.source.Text[s.Start:s.End])
	}
	return lang.Print(n)
}

// squeeze makes runs of white space one blank, but leaves quoted texts alone.
func squeeze(s string) string {
	var out strings.Builder
	var quote rune
	blank := false
	for _, c := range s {
		if quote == 0 && (c == ' ' || c == '\t' || c == '\n' || c == '\r') {
			blank = true
			continue
		}
		if blank && out.Len() > 0 {
			out.WriteByte(' ')
		}
		blank = false
		switch {
		case quote == 0 && (c == '\'' || c == '"'):
			quote = c
		case c == quote:
			quote = 0
		}
		out.WriteRune(c)
	}
	return out.String()
}

// say adds a note.
func (b *binder) say(level note.Level, rank int, format string, args ...any) {
	if b.env.Notes != nil {
		b.env.Notes.Add(level, rank, format, args...)
	}
}

// notYet refuses what parses and has no engine yet.
func (b *binder) notYet(n lang.Node, what string) *problem.Problem {
	return problem.NotThereYet(b.at(n), what)
}

// faulty gives an error of an expression's or a function's maker its place.
func (b *binder) faulty(err error, call problem.Place, args []expr.Expr) error {
	var a *function.ArgumentError
	if errors.As(err, &a) {
		at := call
		if a.Arg >= 0 && a.Arg < len(args) {
			at = args[a.Arg].Place()
		}
		return problem.New(a.Code, at, "%s", a.Message).WithHint("%s", a.Hint)
	}
	return problem.At(err, call)
}

// didYouMean hints at the nearest candidate, if one is near.
func didYouMean(p *problem.Problem, word string, candidates []string) *problem.Problem {
	near := lang.Nearest(word, candidates)
	if near == "" {
		near = lang.Shortened(word, candidates)
	}
	if near != "" && p.Hint == "" {
		p.WithHint("did you mean '%s'?", near)
	}
	return p
}

// bound is a plan with the names of its columns.
type bound struct {
	node  plan.Node
	scope *scope
}

// count writes a number with its noun: 1 column, 3 columns.
func count(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}

func isWeightError(err error) bool {
	var a *function.ArgumentError
	return errors.As(err, &a) && a.Arg == function.WeightArg
}

// parseQuery reads the text of a view.
func (b *binder) parseQuery(text string) (*lang.Query, error) {
	q, err := lang.ParseQuery(text)
	return q, b.misread(err)
}

// misread turns an error of the parser into a problem of the binder's source.
func (b *binder) misread(err error) error {
	var e *lang.Error
	if errors.As(err, &e) {
		return problem.New("syntax", problem.Place{Source: b.source, Span: e.Span}, "%s", e.Message).WithHint("%s", e.Hint)
	}
	return err
}

func sortKey(e expr.Expr, k *lang.Key) plan.SortKey {
	return plan.SortKey{Expr: e, Descending: k.Descending, NullsFirst: k.Nulls == lang.NullsFirst}
}
