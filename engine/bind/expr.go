package bind

import (
	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// exprs binds the expressions of one clause.
type exprs struct {
	*binder
	scope  *scope // nil: no column may stand here
	clause string // "WHERE", for messages

	// group is set where rows are groups: in SELECT, HAVING and ORDER BY of a
	// query with aggregates. Columns then refer to the output of the aggregation.
	group *grouping
	// windows is set where OVER may stand: in SELECT and ORDER BY. window names the
	// function in whose OVER or arguments an expression is being bound.
	windows *windowing
	window  string
	// within names the aggregate whose arguments are being bound.
	within string
	// aliases give the items of SELECT by their aliases, where no column has the
	// name; nil where aliases are not known (WHERE).
	aliases func(n lang.Name) (expr.Expr, error)
	// hidden are aliases that exist but are not known in this clause.
	hidden []*lang.Item
}

// bind is the typed form of an expression.
func (x *exprs) bind(e lang.Expr) (expr.Expr, error) {
	if x.group != nil && x.within == "" {
		if key, ok := x.group.key(x, e); ok {
			return key, nil
		}
	}
	switch e := e.(type) {
	case *lang.Column:
		return x.column(e)
	case *lang.Number, *lang.Text, *lang.Boolean, *lang.Null, *lang.Timestamp, *lang.Interval, *lang.Param:
		return x.literal(e)
	case *lang.Unary:
		return x.unary(e)
	case *lang.Binary:
		return x.binary(e)
	case *lang.Between, *lang.In, *lang.Like, *lang.Is, *lang.Overlaps:
		return x.predicate(e)
	case *lang.Case:
		return x.caseOf(e)
	case *lang.Cast:
		return x.cast(e)
	case *lang.Call:
		return x.call(e)
	case *lang.Subquery:
		return x.scalar(e)
	case *lang.Exists:
		return x.exists(e)
	case *lang.Quantified:
		return x.quantified(e)
	case *lang.AtTimeZone:
		return x.atTimeZone(e)
	}
	return nil, problem.New("failed", x.at(e), "an expression of an unknown kind")
}

// all binds a list.
func (x *exprs) all(list []lang.Expr) ([]expr.Expr, error) {
	out := make([]expr.Expr, len(list))
	for i, e := range list {
		var err error
		if out[i], err = x.bind(e); err != nil {
			return nil, err
		}
	}
	return out, nil
}

// condition binds an expression that must be TRUE, FALSE or NULL.
func (x *exprs) condition(e lang.Expr) (expr.Expr, error) {
	c, err := x.bind(e)
	if err != nil {
		return nil, err
	}
	switch c.Type() {
	case column.Boolean:
		return c, nil
	case column.Null:
		return x.made(e)(expr.NewCast(c, column.Boolean, x.at(e)))
	}
	return nil, problem.New("types", x.at(e), "%s needs a condition, which is TRUE or FALSE, but this is %s", x.clause, c.Type()).
		WithHint("compare it with something: … > 0")
}

// made gives the errors of the makers of package expr their place.
func (x *exprs) made(n lang.Node, args ...expr.Expr) func(expr.Expr, error) (expr.Expr, error) {
	return func(e expr.Expr, err error) (expr.Expr, error) {
		if err != nil {
			return nil, x.faulty(err, x.at(n), args)
		}
		return e, x.oneSystemIn(n, e)
	}
}

// column binds the name of a column.
func (x *exprs) column(c *lang.Column) (expr.Expr, error) {
	if x.scope == nil {
		return x.outward(c, x.nothingHere(c))
	}
	i, err := x.scope.resolve(x.binder, c)
	if err != nil {
		return x.alias(c, err)
	}
	f := x.scope.columns[i].Field
	if x.group != nil && x.within == "" {
		// Where the column has no single value, an item of that name may be meant:
		// AVG(temp) AS temp … ORDER BY ABS(temp - 5).
		return x.alias(c, x.group.notGrouped(x, c, i))
	}
	return expr.NewColumn(i, f, x.at(c)), nil
}

// alias tries an item of SELECT where no column of the name can be meant; err
// says why not.
func (x *exprs) alias(c *lang.Column, err error) (expr.Expr, error) {
	if !c.Qualifier.IsZero() {
		return x.outward(c, err)
	}
	hits, _ := x.scope.find(x.binder, c.Qualifier, c.Name)
	if len(hits) > 1 {
		return nil, err // ambiguous
	}
	if x.aliases != nil && x.within == "" {
		if e, aliasErr := x.aliases(c.Name); e != nil || aliasErr != nil {
			return e, aliasErr
		}
	}
	if len(hits) > 0 {
		return nil, err
	}
	e, outerErr := x.outward(c, err)
	if outerErr == nil {
		return e, nil
	}
	for _, item := range x.hidden {
		if !item.Alias.IsZero() && c.Name.Matches(item.Alias.Text) {
			p := problem.New("no-column", x.at(c), "'%s' names an item of SELECT, which %s does not know yet", c.Name.Text, x.clause)
			if x.clause == "SELECT" {
				p.Message = "'" + c.Name.Text + "' names another item of SELECT, and items do not know each other"
			}
			return nil, p.WithHint("repeat the expression, or put the query into FROM (SELECT …)")
		}
	}
	return nil, outerErr
}

// nothingHere refuses a column where only values may stand.
func (x *exprs) nothingHere(c *lang.Column) error {
	p := problem.New("no-column", x.at(c), "'%s' is a column, but there are no columns here", x.text(c))
	var names []string
	for name := range x.env.Params {
		names = append(names, name)
	}
	switch near := lang.Nearest(c.Name.Text, sorted(names)); {
	case near != "":
		p.WithHint("the value set by LET is written :%s", near)
	case c.Name.Quoted:
		p.WithHint("a text stands between single quotes: '%s'", c.Name.Text)
	}
	return p
}

func (x *exprs) unary(e *lang.Unary) (expr.Expr, error) {
	if n, ok := e.Operand.(*lang.Number); ok && e.Op == lang.Minus && n.IsInteger {
		return x.number("-"+n.Text, true, e) // the smallest INTEGER has no positive twin
	}
	if e.Op == lang.Not {
		c, err := x.bind(e.Operand)
		if err != nil {
			return nil, err
		}
		return x.made(e, c)(expr.NewNot(c, x.at(e)))
	}
	v, err := x.bind(e.Operand)
	if err != nil {
		return nil, err
	}
	if e.Op == lang.Minus {
		return x.made(e, v)(expr.NewNeg(v, x.at(e)))
	}
	return x.made(e, v)(expr.NewPlus(v, x.at(e)))
}

func (x *exprs) binary(e *lang.Binary) (expr.Expr, error) {
	l, err := x.bind(e.Left)
	if err != nil {
		return nil, err
	}
	r, err := x.bind(e.Right)
	if err != nil {
		return nil, err
	}
	make := x.made(e, l, r)
	switch e.Op {
	case lang.And:
		return make(expr.NewAnd(l, r, x.at(e)))
	case lang.Or:
		return make(expr.NewOr(l, r, x.at(e)))
	case lang.Concat:
		return make(expr.NewConcat(l, r, x.at(e)))
	case lang.Plus, lang.Minus, lang.Times, lang.Divide, lang.Modulo, lang.Power:
		return make(expr.NewArith(e.Op, l, r, x.at(e)))
	}
	x.noteNull(e)
	return make(expr.NewCompare(e.Op, l, r, x.at(e)))
}

// noteNull says that a comparison with NULL is never TRUE, since the rows that it
// was meant to find are missed in silence.
func (x *exprs) noteNull(e *lang.Binary) {
	_, left := e.Left.(*lang.Null)
	_, right := e.Right.(*lang.Null)
	if left || right {
		x.say(note.Note, note.Rows, "%s is never TRUE: IS NULL and IS NOT NULL ask for missing values", lang.Print(e))
	}
}

// predicate binds BETWEEN, IN, LIKE, IS and OVERLAPS.
func (x *exprs) predicate(e lang.Expr) (expr.Expr, error) {
	switch e := e.(type) {
	case *lang.Between:
		v, err := x.all([]lang.Expr{e.Operand, e.Low, e.High})
		if err != nil {
			return nil, err
		}
		return x.made(e, v...)(expr.NewBetween(v[0], v[1], v[2], e.Not, x.at(e)))
	case *lang.In:
		return x.in(e)
	case *lang.Like:
		list := []lang.Expr{e.Operand, e.Pattern}
		if e.Escape != nil {
			list = append(list, e.Escape)
		}
		v, err := x.all(list)
		if err != nil {
			return nil, err
		}
		var escape expr.Expr
		if e.Escape != nil {
			escape = v[2]
		}
		return x.made(e, v...)(expr.NewLike(v[0], v[1], escape, e.Not, x.at(e)))
	case *lang.Is:
		return x.is(e)
	case *lang.Overlaps:
		return x.overlaps(e)
	}
	return nil, problem.New("failed", x.at(e), "a predicate of an unknown kind")
}

func (x *exprs) in(e *lang.In) (expr.Expr, error) {
	if e.Query != nil {
		return x.inQuery(e)
	}
	v, err := x.all(append([]lang.Expr{e.Operand}, e.List...))
	if err != nil {
		return nil, err
	}
	return x.made(e, v...)(expr.NewIn(v[0], v[1:], e.Not, x.at(e)))
}

func (x *exprs) is(e *lang.Is) (expr.Expr, error) {
	v, err := x.bind(e.Operand)
	if err != nil {
		return nil, err
	}
	if e.What != lang.IsDistinctFrom {
		return x.made(e, v)(expr.NewIs(v, e.What, e.Not, x.at(e)))
	}
	from, err := x.bind(e.From)
	if err != nil {
		return nil, err
	}
	return x.made(e, v, from)(expr.NewIsDistinct(v, from, e.Not, x.at(e)))
}

func (x *exprs) overlaps(e *lang.Overlaps) (expr.Expr, error) {
	for _, row := range []*lang.Row{e.Left, e.Right} {
		if len(row.Values) != 2 {
			return nil, problem.New("arguments", x.at(row), "a side of OVERLAPS is (start, end), two values and not %d", len(row.Values))
		}
	}
	v, err := x.all(append(append([]lang.Expr{}, e.Left.Values...), e.Right.Values...))
	if err != nil {
		return nil, err
	}
	return x.made(e, v...)(expr.NewOverlaps(v[0], v[1], v[2], v[3], x.at(e)))
}

func (x *exprs) caseOf(e *lang.Case) (expr.Expr, error) {
	var operand, otherwise expr.Expr
	var err error
	if e.Operand != nil {
		if operand, err = x.bind(e.Operand); err != nil {
			return nil, err
		}
	}
	whens := make([]expr.When, len(e.Whens))
	var parts []expr.Expr
	for i, w := range e.Whens {
		if whens[i].Cond, err = x.bind(w.Condition); err != nil {
			return nil, err
		}
		if whens[i].Result, err = x.bind(w.Result); err != nil {
			return nil, err
		}
		parts = append(parts, whens[i].Cond, whens[i].Result)
	}
	if e.Else != nil {
		if otherwise, err = x.bind(e.Else); err != nil {
			return nil, err
		}
	}
	return x.made(e, parts...)(expr.NewCase(operand, whens, otherwise, x.at(e)))
}

// castTypes are the types that CAST names.
var castTypes = []column.Type{column.Integer, column.Real, column.Text, column.Boolean, column.Timestamp, column.Interval, column.Point}

// typeSynonyms are further names that the standard has for these types.
var typeSynonyms = map[string]string{"int": "integer", "smallint": "integer", "bigint": "integer", "float": "real", "double": "real",
	"varchar": "text"}

func (x *exprs) cast(e *lang.Cast) (expr.Expr, error) {
	v, err := x.bind(e.Operand)
	if err != nil {
		return nil, err
	}
	var names []string
	called := lang.Fold(e.Type.Text)
	if name, ok := typeSynonyms[called]; ok {
		called = name
	}
	for _, t := range castTypes {
		if called == lang.Fold(t.String()) {
			return x.made(e, v)(expr.NewCast(v, t, x.at(e)))
		}
		names = append(names, t.String())
	}
	p := problem.New("no-type", x.at(&e.Type), "there is no type '%s'", e.Type.Text)
	switch called {
	case "numeric", "decimal", "dec", "number":
		return nil, p.WithHint("numbers are INTEGER or REAL: ROUND(x, 2) has two decimals")
	case "signed", "unsigned":
		return nil, p.WithHint("write INTEGER, which has a sign and 64 bits")
	case "date", "datetime", "time":
		return nil, p.WithHint("write TIMESTAMP; FLOOR_TO(t, INTERVAL '1' DAY) is its day")
	case "char", "character":
		return nil, p.WithHint("write TEXT; SUBSTRING(x FROM 1 FOR 1) is its first character")
	}
	didYouMean(p, e.Type.Text, names)
	if p.Hint == "" {
		p.WithHint("the types are INTEGER, REAL, TEXT, BOOLEAN, TIMESTAMP, INTERVAL and POINT")
	}
	return nil, p
}
