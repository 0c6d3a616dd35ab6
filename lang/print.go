package lang

import (
	"strings"
)

// Print writes a tree back as text on one line: keywords in upper case, names as they
// were written and quoted only where they must be, numbers as they were written, and
// no brackets but those that are needed. Statements have no semicolon of their own; a
// Script has one after each, and a line for each. Parsing the text gives the same tree
// again but for the spans.
func Print(n Node) string {
	w := &printer{}
	w.node(n)
	return w.String()
}

type printer struct{ strings.Builder }

// put writes the parts one after another.
func (w *printer) put(parts ...string) {
	for _, part := range parts {
		w.WriteString(part)
	}
}

func (w *printer) node(n Node) {
	switch n := n.(type) {
	case *Script:
		for _, s := range n.Statements {
			w.statement(s)
			w.put(";\n")
		}
	case Statement:
		w.statement(n)
	case *Query:
		w.query(n)
	case *Name:
		w.name(*n)
	case Expr:
		w.expr(n, levelOr)
	case Body:
		w.body(n, levelSet)
	case Source:
		w.source(n, false)
	case *Relation:
		w.relation(n)
	case Clause:
		w.clause(n)
	case Reading:
		w.reading(n)
	case Solid:
		w.solid(n, false)
	default:
		w.part(n)
	}
}

// part writes the nodes that stand within others only.
func (w *printer) part(n Node) {
	switch n := n.(type) {
	case *CTE:
		w.cte(n)
	case *Key:
		w.key(n)
	case *Item:
		w.item(n)
	case *Row:
		w.row(n)
	case *When:
		w.when(n)
	case *Window:
		w.window(n)
	case *Frame:
		w.frame(n)
	case *Bound:
		w.bound(n)
	case *Point:
		w.point(n)
	case *Ring:
		w.ring(n)
	case *Corner:
		w.corner(n)
	case *ColumnUnit:
		w.columnUnit(n)
	case *TimeColumn:
		w.timeColumn(n)
	case *PreambleField:
		w.preambleField(n)
	case *UncertaintyPart:
		w.uncertaintyPart(n)
	}
}

// list writes the items with commas between.
func list[T any](w *printer, items []T, write func(T)) {
	for i, item := range items {
		if i > 0 {
			w.put(", ")
		}
		write(item)
	}
}

// name writes a name where a reserved word would have to be quoted.
func (w *printer) name(n Name) { w.put(printName(n)) }

// anyWord writes a name where every word may stand.
func (w *printer) anyWord(n Name) {
	if n.Quoted || !looksLikeWord(n.Text) {
		w.put(quoteName(n.Text))
	} else {
		w.put(n.Text)
	}
}

func printName(n Name) string {
	if n.Quoted || !looksLikeWord(n.Text) || isReserved(wordType(n.Text)) {
		return quoteName(n.Text)
	}
	return n.Text
}

func looksLikeWord(text string) bool { return text != "" && wordEnd(text, 0) == len(text) }

func quoteName(text string) string { return `"` + strings.ReplaceAll(text, `"`, `""`) + `"` }

// QuoteName gives the text of a name as it must be written in a query: bare where that
// is read back as the same text, quoted otherwise.
func QuoteName(text string) string { return printName(Name{Text: text}) }

// QuoteText gives a text as it must be written in a query.
func QuoteText(text string) string { return "'" + strings.ReplaceAll(text, "'", "''") + "'" }

func (w *printer) names(names []Name) {
	w.put("(")
	list(w, names, w.name)
	w.put(")")
}

// nameList writes one name bare and several in brackets. A lone name that would be
// taken for a word of the clause stands in brackets too.
func (w *printer) nameList(names []Name, avoid string) {
	if len(names) == 1 && (avoid == "" || !names[0].Is(avoid)) {
		w.name(names[0])
		return
	}
	w.names(names)
}

func (w *printer) text(t *Text) { w.put(QuoteText(t.Value)) }

func (w *printer) texts(texts []*Text) {
	w.put("(")
	list(w, texts, w.text)
	w.put(")")
}

// optional writes a word and a name, if there is one.
func (w *printer) optional(word string, n Name) {
	if !n.IsZero() {
		w.put(word)
		w.name(n)
	}
}

// operand writes a name, or a query or a relation in brackets.
func (w *printer) operand(o Operand) {
	switch o := o.(type) {
	case *Name:
		w.name(*o)
	case *Query:
		w.bracketedQuery(o)
	case *Relation:
		w.put("(")
		w.relation(o)
		w.put(")")
	}
}
