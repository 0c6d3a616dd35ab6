package plan

import (
	"fmt"
	"slices"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/problem"
)

// Window gives each row of its input, in the order of the input, further columns:
// values over the rows of its partition. All Calls share the partition and the
// order. Its columns are those of the input, then the calls.
type Window struct {
	Input     Node
	Partition []expr.Expr
	OrderBy   []SortKey
	Calls     []WindowCall
	Fields    column.Schema
}

// WindowCall is one function of a Window: one of the window functions (Fn, then
// Args alone count) or an aggregate over a frame.
type WindowCall struct {
	Fn *function.Window // nil: Aggregate
	Call
	Frame Frame
}

// Frame is the rows of the partition that count for one of them, from Start to End.
// Range: offsets are differences of the one key of ORDER BY, and rows with equal
// keys are in or out together; else offsets count rows.
type Frame struct {
	Range      bool
	Start, End FrameBound
}

// BoundKind says where a frame begins or ends.
type BoundKind uint8

// The bounds of frames.
const (
	UnboundedPreceding BoundKind = iota
	Preceding
	CurrentRow
	Following
	UnboundedFollowing
)

// FrameBound is one end of a frame; Offset, of Preceding and Following, is not
// negative and not NULL.
type FrameBound struct {
	Kind   BoundKind
	Offset column.Value
	Place  problem.Place
}

// Whole reports whether a frame is always the whole partition.
func (f Frame) Whole() bool {
	return f.Start.Kind == UnboundedPreceding && f.End.Kind == UnboundedFollowing
}

// Schema is the input's columns, then the calls.
func (n *Window) Schema() column.Schema { return n.Fields }

// Inputs is the one input.
func (n *Window) Inputs() []Node { return []Node{n.Input} }

// Name is that of the call's function.
func (c *WindowCall) Name() string {
	if c.Fn != nil {
		return c.Fn.Name
	}
	return c.Call.Fn.Name
}

func (n *Window) mapped(f func(expr.Expr) expr.Expr) *Window {
	c := *n
	c.Partition, c.OrderBy = mapList(n.Partition, f), mapKeys(n.OrderBy, f)
	c.Calls = slices.Clone(n.Calls)
	for i := range c.Calls {
		call := &c.Calls[i]
		call.Args = mapList(call.Args, f)
		call.Filter, call.Weight = mapMaybe(call.Filter, f), mapMaybe(call.Weight, f)
		call.Call.OrderBy = mapKeys(call.Call.OrderBy, f)
	}
	return &c
}

func windowLine(n *Window) string {
	line := "window over all rows"
	if len(n.Partition) > 0 {
		line = "window by " + exprs(n.Partition)
	}
	if len(n.OrderBy) > 0 {
		line += ", ordered by " + sortKeys(n.OrderBy)
	}
	texts := make([]string, len(n.Calls))
	for i := range n.Calls {
		texts[i] = n.Calls[i].line(len(n.OrderBy) > 0)
	}
	return line + ": " + strings.Join(texts, ", ")
}

// line is one call as EXPLAIN shows it.
func (c *WindowCall) line(ordered bool) string {
	text := c.Name()
	switch {
	case len(c.Args) > 0 && c.Distinct:
		text += "(DISTINCT " + exprs(c.Args) + ")"
	case len(c.Args) > 0:
		text += "(" + exprs(c.Args) + ")"
	}
	if c.Filter != nil {
		text += " where " + c.Filter.String()
	}
	if c.Weight != nil {
		text += " weighted by " + c.Weight.String()
	}
	return text + frameText(c, ordered)
}

// frameText says which rows count, unless it is what nobody needs to say.
func frameText(c *WindowCall, ordered bool) string {
	f := c.Frame
	usual := f.Start.Kind == UnboundedPreceding && (f.End.Kind == UnboundedFollowing || f.Range && f.End.Kind == CurrentRow && ordered)
	if c.Fn != nil && !c.Fn.Framed || usual {
		return ""
	}
	unit := "rows"
	if f.Range {
		unit = "range"
	}
	return fmt.Sprintf(" over %s from %s to %s", unit, f.Start.text(), f.End.text())
}

func (b FrameBound) text() string {
	switch b.Kind {
	case UnboundedPreceding:
		return "the first"
	case UnboundedFollowing:
		return "the last"
	case CurrentRow:
		return "the current"
	case Preceding:
		return b.Offset.String() + " before"
	}
	return b.Offset.String() + " after"
}

// prunedWindow drops the calls that nobody reads, and the node with the last of
// them.
func prunedWindow(n *Window, need []bool) (Node, []int) {
	width := len(n.Input.Schema())
	calls := kept(n.Calls, need[width:])
	below := slices.Clone(need[:width])
	if len(calls) == 0 {
		in, to := pruned(n.Input, below)
		return in, append(slices.Clone(to), slices.Repeat([]int{-1}, len(n.Calls))...)
	}
	c := *n
	c.Calls = calls
	schema := n.Input.Schema()
	for _, e := range exprsOf(&c) {
		mark(below, schema, e)
	}
	for i := range c.Calls {
		if c.Calls[i].Weight != nil {
			markID(below, schema)
		}
	}
	in, to := pruned(n.Input, below)
	c.Input = in
	out := c.mapped(func(e expr.Expr) expr.Expr { return expr.Remap(e, to) })
	out.Fields = slices.Concat(in.Schema(), kept(n.Fields[width:], need[width:]))
	shift := len(in.Schema())
	for _, at := range numbered(need[width:]) {
		if at >= 0 {
			at += shift
		}
		to = append(to[:len(to):len(to)], at)
	}
	return out, to
}

// pushWindow moves below a window the conditions that leave out whole partitions.
func pushWindow(n *Window, conds []condition) Node {
	to := slices.Repeat([]int{-1}, len(n.Fields))
	for _, p := range n.Partition {
		if c, ok := expr.AsColumn(p); ok {
			to[c] = c
		}
	}
	down, stay := split(conds, to)
	c := *n
	c.Input = push(n.Input, down)
	return filtered(&c, stay)
}

// SameRows reports whether two windows have the same partitions and order.
func (n *Window) SameRows(o *Window) bool {
	if !sameExprs(n.Partition, o.Partition) || !sameKeys(n.OrderBy, o.OrderBy) {
		return false
	}
	for i := range n.OrderBy {
		if !expr.Equal(n.OrderBy[i].Expr, o.OrderBy[i].Expr) {
			return false
		}
	}
	return true
}

// SameFrame reports whether two calls have the same frame.
func (c *WindowCall) SameFrame(o *WindowCall) bool { return sameFrame(c.Frame, o.Frame) }

func sameWindow(a, b *Window) bool {
	if len(a.Partition) != len(b.Partition) || !sameKeys(a.OrderBy, b.OrderBy) || len(a.Calls) != len(b.Calls) {
		return false
	}
	for i := range a.Calls {
		x, y := &a.Calls[i], &b.Calls[i]
		if x.Fn != y.Fn || !sameFrame(x.Frame, y.Frame) || !sameCalls([]Call{x.Call}, []Call{y.Call}) {
			return false
		}
	}
	return true
}

func sameFrame(a, b Frame) bool {
	return a.Range == b.Range && a.Start.Kind == b.Start.Kind && a.End.Kind == b.End.Kind &&
		a.Start.Offset.String() == b.Start.Offset.String() && a.End.Offset.String() == b.End.Offset.String()
}

// windowFails reports whether a call may have no value.
func windowFails(n *Window) bool {
	for i := range n.Calls {
		if n.Calls[i].Fn == nil && callFails(&n.Calls[i].Call) {
			return true
		}
	}
	return false
}
