package lang

// Levels of expressions, from loose to tight, as the grammar has them.
const (
	levelOr = iota
	levelAnd
	levelNot
	levelComparison
	levelSum
	levelProduct
	levelSign
	levelPower
	levelZoned
	levelPrimary
)

func binaryLevel(op Op) int {
	switch op {
	case Or:
		return levelOr
	case And:
		return levelAnd
	case Plus, Minus, Concat:
		return levelSum
	case Times, Divide, Modulo:
		return levelProduct
	case Power:
		return levelPower
	}
	return levelComparison
}

func exprLevel(e Expr) int {
	switch e := e.(type) {
	case *Binary:
		return binaryLevel(e.Op)
	case *Unary:
		if e.Op == Not {
			return levelNot
		}
		return levelSign
	case *Between, *In, *Quantified, *Like, *Is:
		return levelComparison
	case *AtTimeZone:
		return levelZoned
	}
	return levelPrimary
}

// expr writes an expression, in brackets where it binds less than its place asks for.
func (w *printer) expr(e Expr, level int) {
	if exprLevel(e) < level {
		w.put("(")
		defer w.put(")")
	}
	switch e := e.(type) {
	case *Binary:
		w.binary(e)
	case *Unary:
		w.unary(e)
	case *Between, *In, *Quantified, *Like, *Is:
		w.test(e)
	case *AtTimeZone:
		w.expr(e.Operand, levelZoned)
		w.put(" AT TIME ZONE ")
		w.expr(e.Zone, levelPrimary)
	case *Call:
		w.call(e)
	case *Case:
		w.caseExpr(e)
	case *Cast:
		w.put("CAST(")
		w.expr(e.Operand, levelOr)
		w.put(" AS ")
		w.name(e.Type)
		w.put(")")
	case *Exists:
		w.put("EXISTS ")
		w.bracketedQuery(e.Query)
	case *Subquery:
		w.bracketedQuery(e.Query)
	case *Overlaps:
		w.row(e.Left)
		w.put(" OVERLAPS ")
		w.row(e.Right)
	default:
		w.atom(e)
	}
}

// atom writes what has no parts that are expressions.
func (w *printer) atom(e Expr) {
	switch e := e.(type) {
	case *Number:
		w.put(e.Text)
	case *Text:
		w.text(e)
	case *Boolean:
		if e.Value {
			w.put("TRUE")
		} else {
			w.put("FALSE")
		}
	case *Null:
		w.put("NULL")
	case *Timestamp:
		w.put("TIMESTAMP ")
		w.text(e.Text)
	case *Interval:
		w.put("INTERVAL ")
		w.text(e.Text)
		w.put(" ")
		w.name(e.Unit)
	case *Param:
		w.put(":", e.Name)
	case *Column:
		if e.Qualifier.IsZero() {
			w.name(e.Name)
		} else {
			w.name(e.Qualifier)
			w.put(".")
			w.anyWord(e.Name)
		}
	}
}

func (w *printer) binary(e *Binary) {
	level := binaryLevel(e.Op)
	left, right := level, level+1
	switch level {
	case levelComparison:
		left = levelSum
	case levelPower:
		left, right = levelZoned, levelSign
	}
	w.expr(e.Left, left)
	w.put(" ", string(e.Op), " ")
	w.expr(e.Right, right)
}

// unary writes a sign or NOT. Two minus signs must not touch: -- begins a comment.
func (w *printer) unary(e *Unary) {
	if e.Op == Not {
		w.put("NOT ")
		w.expr(e.Operand, levelNot)
		return
	}
	w.put(string(e.Op))
	if inner, signed := e.Operand.(*Unary); signed && inner.Op != Not {
		w.put(" ")
	}
	w.expr(e.Operand, levelSign)
}

// test writes BETWEEN, IN, LIKE and IS.
func (w *printer) test(e Expr) {
	word := func(not bool, text string) {
		if not {
			w.put(" NOT")
		}
		w.put(text)
	}
	switch e := e.(type) {
	case *Between:
		w.expr(e.Operand, levelSum)
		word(e.Not, " BETWEEN ")
		w.expr(e.Low, levelSum)
		w.put(" AND ")
		w.expr(e.High, levelSum)
	case *In:
		w.expr(e.Operand, levelSum)
		word(e.Not, " IN ")
		if e.Query != nil {
			w.bracketedQuery(e.Query)
			return
		}
		w.put("(")
		w.exprs(e.List)
		w.put(")")
	case *Quantified:
		w.expr(e.Operand, levelSum)
		w.put(" " + string(e.Op) + " ")
		if e.All {
			w.put("ALL ")
		} else {
			w.put("ANY ")
		}
		w.bracketedQuery(e.Query)
	case *Like:
		w.expr(e.Operand, levelSum)
		word(e.Not, " LIKE ")
		w.expr(e.Pattern, levelSum)
		if e.Escape != nil {
			w.put(" ESCAPE ")
			w.expr(e.Escape, levelSum)
		}
	case *Is:
		w.expr(e.Operand, levelComparison)
		w.put(" IS ")
		if e.Not {
			w.put("NOT ")
		}
		w.put(string(e.What))
		if e.From != nil {
			w.put(" ")
			w.expr(e.From, levelSum)
		}
	}
}

func (w *printer) caseExpr(e *Case) {
	w.put("CASE ")
	if e.Operand != nil {
		w.expr(e.Operand, levelOr)
		w.put(" ")
	}
	for _, arm := range e.Whens {
		w.when(arm)
		w.put(" ")
	}
	if e.Else != nil {
		w.put("ELSE ")
		w.expr(e.Else, levelOr)
		w.put(" ")
	}
	w.put("END")
}

func (w *printer) when(arm *When) {
	w.put("WHEN ")
	w.expr(arm.Condition, levelOr)
	w.put(" THEN ")
	w.expr(arm.Result, levelOr)
}

func (w *printer) call(c *Call) {
	w.name(c.Name)
	w.put("(")
	if c.Star {
		w.put("*")
	}
	if c.Distinct {
		w.put("DISTINCT ")
	}
	for i, arg := range c.Args {
		switch {
		case i == 0:
		case c.Separators == nil || c.Separators[i-1] == Comma:
			w.put(", ")
		default:
			w.put(" ", string(c.Separators[i-1]), " ")
		}
		w.expr(arg, levelOr)
	}
	if c.Along != nil {
		w.put(" ALONG ")
		w.expr(c.Along, levelOr)
		w.put(" AT ")
		w.expr(c.AtValue, levelOr)
		if !c.Outside.IsZero() {
			w.put(" OUTSIDE ")
			w.anyWord(c.Outside)
		}
	}
	if len(c.OrderBy) > 0 {
		w.put(" ORDER BY ")
		list(w, c.OrderBy, w.key)
	}
	w.put(")")
	if c.Filter != nil {
		w.put(" FILTER (WHERE ")
		w.expr(c.Filter, levelOr)
		w.put(")")
	}
	if c.Weight != nil {
		w.put(" WEIGHTED BY ")
		w.weight(c.Weight)
	}
	if c.Over != nil {
		w.put(" OVER ")
		w.window(c.Over)
	}
}

// weight writes a weight: what is more than a name, a number or a call in brackets.
func (w *printer) weight(e Expr) {
	switch e := e.(type) {
	case *Column, *Number, *Param, *Subquery:
		w.expr(e, levelPrimary)
		return
	case *Call:
		if e.Filter == nil && e.Weight == nil && e.Over == nil {
			w.expr(e, levelPrimary)
			return
		}
	}
	w.put("(")
	w.expr(e, levelOr)
	w.put(")")
}

func (w *printer) window(o *Window) {
	w.put("(")
	gap := ""
	if len(o.PartitionBy) > 0 {
		w.put("PARTITION BY ")
		w.exprs(o.PartitionBy)
		gap = " "
	}
	if len(o.OrderBy) > 0 {
		w.put(gap, "ORDER BY ")
		list(w, o.OrderBy, w.key)
		gap = " "
	}
	if o.Frame != nil {
		w.put(gap)
		w.frame(o.Frame)
	}
	w.put(")")
}

func (w *printer) frame(f *Frame) {
	if f.Range {
		w.put("RANGE ")
	} else {
		w.put("ROWS ")
	}
	if f.End == nil {
		w.bound(f.Start)
		return
	}
	w.put("BETWEEN ")
	w.bound(f.Start)
	w.put(" AND ")
	w.bound(f.End)
}

func (w *printer) bound(b *Bound) {
	if b.Offset != nil {
		level := levelSum
		if c, bare := b.Offset.(*Column); bare && c.Qualifier.IsZero() && c.Name.Is("UNBOUNDED") {
			level = levelPrimary + 1 // UNBOUNDED PRECEDING means something else
		}
		w.expr(b.Offset, level)
		w.put(" ")
	}
	w.put(string(b.Kind))
}
