package bind

import (
	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// windowBase is where the numbers of window columns begin while a SELECT is bound:
// how many columns stand in front of them is known only when all of it is.
const windowBase = 1 << 20

// windowing collects the windows of one SELECT: calls of one partition and order
// make one node. Expressions above refer to their columns from windowBase on, in the
// order in which the calls were met.
type windowing struct {
	nodes  []*plan.Window
	fields []column.Field
	node   []int // of each call, by its number
	call   []int // of each call, within its node
}

// over binds a function with OVER.
func (x *exprs) over(c *lang.Call) (expr.Expr, error) {
	fn, agg := function.LookupWindow(c.Name.Text), function.LookupAggregate(c.Name.Text)
	if fn == nil && agg == nil {
		if function.LookupScalar(c.Name.Text) != nil || c.Name.Is("POINT") {
			return nil, problem.New("arguments", x.at(c.Over), "OVER follows aggregates and window functions, and '%s' is a function of one row", c.Name.Text)
		}
		return nil, x.noFunction(c)
	}
	if err := x.windowAllowed(c); err != nil {
		return nil, err
	}
	inner := *x
	inner.windows, inner.aliases, inner.window = nil, nil, windowName(fn, agg)
	w := &plan.Window{}
	var err error
	if w.Partition, err = inner.partition(c.Over); err != nil {
		return nil, err
	}
	if w.OrderBy, err = inner.windowOrder(c.Over); err != nil {
		return nil, err
	}
	call := plan.WindowCall{Fn: fn, Call: plan.Call{Fn: agg, Distinct: c.Distinct, Place: x.at(c), Text: x.text(c)}}
	var result function.Result
	if fn != nil {
		result, err = inner.windowFunction(c, &call)
	} else {
		result, err = inner.windowAggregate(c, &call)
	}
	if err != nil {
		return nil, err
	}
	if err := x.frame(c, &call, w.OrderBy); err != nil {
		return nil, err
	}
	return x.windows.add(w, call, column.Field{Name: call.Text, Type: result.Type, Unit: result.Unit, System: systemOfCall(&call.Call, result.Type)}), nil
}

// windowAllowed refuses windows where rows are not yet what they are computed over.
func (x *exprs) windowAllowed(c *lang.Call) error {
	switch {
	case x.within != "":
		return problem.New("window", x.at(c), "%s with OVER stands inside %s, and an aggregate cannot hold a window", c.Name.Text, x.within).
			WithHint("compute the window in a query of its own: FROM (SELECT …)")
	case x.window != "":
		return problem.New("window", x.at(c), "%s with OVER stands inside the window of %s, and a window cannot hold another", c.Name.Text, x.window).
			WithHint("compute the inner one in a query of its own: FROM (SELECT …)")
	case x.scope == nil:
		return problem.New("window", x.at(c), "%s with OVER needs rows, and there are none here", c.Name.Text)
	case x.windows == nil:
		return problem.New("window", x.at(c), "%s with OVER cannot stand in %s: windows are computed after it", c.Name.Text, x.clause).
			WithHint("name it in a query of its own, and ask there: FROM (SELECT …, %s AS w …) AS q WHERE q.w …", x.text(c))
	}
	return nil
}

func (x *exprs) partition(o *lang.Window) ([]expr.Expr, error) {
	var keys []expr.Expr
	for _, e := range o.PartitionBy {
		if n, ok := e.(*lang.Number); ok {
			return nil, problem.New("position", x.at(n), "PARTITION BY %s is one part, not a position", n.Text).
				WithHint("name the column")
		}
		k, err := x.bind(e)
		if err != nil {
			return nil, err
		}
		keys = append(keys, k)
	}
	return keys, nil
}

func (x *exprs) windowOrder(o *lang.Window) ([]plan.SortKey, error) {
	var keys []plan.SortKey
	for _, k := range o.OrderBy {
		if n, ok := k.Expr.(*lang.Number); ok {
			return nil, problem.New("position", x.at(n), "in OVER, ORDER BY %s is no position but a number that is the same for all rows", n.Text).
				WithHint("name the column")
		}
		e, err := x.bind(k.Expr)
		if err != nil {
			return nil, err
		}
		if e.Type() == column.Point {
			return nil, problem.New("types", x.at(k.Expr), "points have no order").WithHint("order by the coordinates")
		}
		keys = append(keys, sortKey(e, k))
	}
	return keys, nil
}

// windowFunction binds the arguments of a function that is no aggregate.
func (x *exprs) windowFunction(c *lang.Call, call *plan.WindowCall) (function.Result, error) {
	fn := call.Fn
	at, what := x.at(c), ""
	switch {
	case c.Star:
		what = "*"
	case c.Distinct:
		what = "DISTINCT"
	case c.OrderBy != nil:
		what, at = "ORDER BY in its brackets", x.at(c.OrderBy[0])
	case c.Filter != nil:
		what, at = "FILTER", x.at(c.Filter)
	case c.Weight != nil:
		what, at = "WEIGHTED BY", x.at(c.Weight)
	case c.Along != nil:
		what = "ALONG"
	case c.Separators != nil:
		return function.Result{}, problem.New("arguments", at, "the arguments of %s are separated by commas", fn.Name).WithHint("%s", fn.Signature)
	}
	if what != "" {
		return function.Result{}, problem.New("arguments", at, "%s takes no %s", fn.Name, what).WithHint("%s", fn.Signature)
	}
	if fn.Ordered && len(c.Over.OrderBy) == 0 {
		return function.Result{}, problem.New("arguments", x.at(c.Over), "%s needs an order: without ORDER BY in OVER no row comes before another", fn.Name).
			WithHint("%s", fn.Signature)
	}
	var err error
	if call.Args, err = x.all(c.Args); err != nil {
		return function.Result{}, err
	}
	args := make([]function.Arg, len(call.Args))
	for i, a := range call.Args {
		args[i] = argument(a)
	}
	result, err := fn.Check(args)
	if err != nil {
		return result, x.faulty(err, x.at(c), call.Args)
	}
	return result, x.castArgs(c, call.Args, result.Args)
}

// windowAggregate binds an aggregate over frames.
func (x *exprs) windowAggregate(c *lang.Call, call *plan.WindowCall) (function.Result, error) {
	fn := call.Call.Fn
	if err := x.aggregateClauses(c, fn); err != nil {
		return function.Result{}, err
	}
	if fn.Slide == nil {
		return function.Result{}, problem.New("window", x.at(c), "%s cannot stand with OVER", fn.Name).
			WithHint("compute it with GROUP BY in a query of its own, and JOIN that")
	}
	if c.Distinct && (len(c.Over.OrderBy) > 0 || c.Over.Frame != nil) {
		return function.Result{}, problem.New("arguments", x.at(c), "DISTINCT stands over whole partitions only: not with ORDER BY or a frame in OVER").
			WithHint("leave out ORDER BY and the frame, or DISTINCT")
	}
	return x.aggregateParts(c, &call.Call)
}

// frame binds the frame of a call, or takes the standard's: up to the current row
// and its equals where there is an order, else the whole partition.
func (x *exprs) frame(c *lang.Call, call *plan.WindowCall, order []plan.SortKey) error {
	f := c.Over.Frame
	if call.Fn != nil && !call.Fn.Framed {
		if f != nil {
			return problem.New("frame", x.at(f), "%s looks at the whole partition and takes no frame", call.Fn.Name).
				WithHint("leave out %s", x.text(f))
		}
		return nil
	}
	call.Frame = plan.Frame{Range: true, End: plan.FrameBound{Kind: plan.UnboundedFollowing}}
	if len(order) > 0 {
		call.Frame.End.Kind = plan.CurrentRow
	}
	if f == nil {
		return nil
	}
	call.Frame = plan.Frame{Range: f.Range, End: plan.FrameBound{Kind: plan.CurrentRow}}
	var err error
	if call.Frame.Start, err = x.frameBound(f, f.Start, order); err != nil {
		return err
	}
	if f.End != nil {
		if call.Frame.End, err = x.frameBound(f, f.End, order); err != nil {
			return err
		}
	}
	start, end := call.Frame.Start.Kind, call.Frame.End.Kind
	if start == plan.UnboundedFollowing || end == plan.UnboundedPreceding || start > end {
		return problem.New("frame", x.at(f), "the frame ends before it begins").
			WithHint("a frame runs from what precedes to what follows: BETWEEN 2 PRECEDING AND CURRENT ROW")
	}
	return nil
}

var boundKinds = map[lang.BoundKind]plan.BoundKind{
	lang.UnboundedPreceding: plan.UnboundedPreceding, lang.Preceding: plan.Preceding, lang.CurrentRow: plan.CurrentRow,
	lang.Following: plan.Following, lang.UnboundedFollowing: plan.UnboundedFollowing,
}

func (x *exprs) frameBound(f *lang.Frame, b *lang.Bound, order []plan.SortKey) (plan.FrameBound, error) {
	out := plan.FrameBound{Kind: boundKinds[b.Kind], Place: x.at(b)}
	if b.Offset == nil {
		return out, nil
	}
	none := &exprs{binder: x.binder, clause: "a frame"}
	e, err := none.bind(b.Offset)
	if err != nil {
		return out, err
	}
	v, constant := expr.Const(expr.Fold(e))
	if !constant || v.Null {
		return out, problem.New("frame", x.at(b.Offset), "an offset of a frame is a constant, and not NULL").
			WithHint("ROWS 3 PRECEDING, or RANGE INTERVAL '1' HOUR PRECEDING")
	}
	want := column.Integer
	if f.Range {
		if want, err = x.rangeType(f, order); err != nil {
			return out, err
		}
	}
	if want == column.Real && v.Type == column.Integer {
		v = column.Float(float64(v.I))
	}
	if v.Type != want {
		return out, x.wrongOffset(f, b, v.Type, want, order)
	}
	if v.Type == column.Real && !(v.F >= 0) || v.Type != column.Real && v.I < 0 {
		return out, problem.New("frame", x.at(b.Offset), "an offset of a frame is not negative").
			WithHint("PRECEDING and FOLLOWING give the direction")
	}
	out.Offset = v
	return out, nil
}

// rangeType is the type of offsets under RANGE: that of differences of the one key.
func (x *exprs) rangeType(f *lang.Frame, order []plan.SortKey) (column.Type, error) {
	if len(order) != 1 {
		return 0, problem.New("frame", x.at(f), "RANGE with an offset needs exactly one key in ORDER BY, not %d", len(order)).
			WithHint("ROWS counts rows, whatever the order")
	}
	switch t := order[0].Expr.Type(); t {
	case column.Timestamp, column.Interval:
		return column.Interval, nil
	case column.Integer, column.Real:
		return t, nil
	default:
		return 0, problem.New("frame", x.at(f), "RANGE with an offset needs a key with differences: numbers, TIMESTAMP or INTERVAL, not %s", t).
			WithHint("ROWS counts rows, whatever the order")
	}
}

func (x *exprs) wrongOffset(f *lang.Frame, b *lang.Bound, is, want column.Type, order []plan.SortKey) error {
	if !f.Range {
		return problem.New("frame", x.at(b.Offset), "ROWS counts rows, with a whole number and not %s", is).
			WithHint("RANGE goes by differences of the key: RANGE INTERVAL '1' HOUR PRECEDING")
	}
	p := problem.New("frame", x.at(b.Offset), "the offset is %s, and the key of ORDER BY is %s", is, order[0].Expr.Type())
	switch want {
	case column.Interval:
		p.WithHint("write INTERVAL '15' MINUTE")
	case column.Integer:
		p.WithHint("write a whole number, or order by CAST(… AS REAL)")
	}
	return p
}

// add adds a call, or finds it where it was added before, and gives its column.
func (w *windowing) add(n *plan.Window, c plan.WindowCall, f column.Field) expr.Expr {
	at := -1
	for i, have := range w.nodes {
		if have.SameRows(n) {
			at = i
		}
	}
	if at < 0 {
		at = len(w.nodes)
		w.nodes = append(w.nodes, n)
	}
	node := w.nodes[at]
	for i := range w.node {
		if have := &node.Calls; w.node[i] == at && sameWindowCall(&(*have)[w.call[i]], &c) {
			return expr.NewColumn(windowBase+i, w.fields[i], c.Place)
		}
	}
	w.node, w.call, w.fields = append(w.node, at), append(w.call, len(node.Calls)), append(w.fields, f)
	node.Calls = append(node.Calls, c)
	return expr.NewColumn(windowBase+len(w.fields)-1, f, c.Place)
}

func sameWindowCall(a, b *plan.WindowCall) bool {
	return a.Fn == b.Fn && a.SameFrame(b) && sameCall(&a.Call, &b.Call)
}

// plan puts the windows over their rows, and give is what turns the numbers of
// window columns into those that they have there.
func (w *windowing) plan(input plan.Node) (out plan.Node, give func(expr.Expr) expr.Expr) {
	at := make([]int, len(w.fields))
	for i, n := range w.nodes {
		fields := append(column.Schema(nil), input.Schema()...)
		for k := range w.fields {
			if w.node[k] == i {
				at[k] = len(input.Schema()) + w.call[k]
				fields = append(fields, w.fields[k])
			}
		}
		c := *n
		c.Input, c.Fields = input, fields
		input = &c
	}
	return input, func(e expr.Expr) expr.Expr {
		return expr.Rewrite(e, func(e expr.Expr) expr.Expr {
			if c, ok := e.(*expr.Column); ok && c.Index >= windowBase {
				return expr.NewColumn(at[c.Index-windowBase], c.Field, c.Place())
			}
			return e
		})
	}
}

func windowName(fn *function.Window, agg *function.Aggregate) string {
	if fn != nil {
		return fn.Name
	}
	return agg.Name
}
