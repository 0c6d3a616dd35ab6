package engine

import (
	"context"
	"fmt"
	"math"
	"strconv"
	"strings"
	"time"
	"unicode/utf8"

	"nearcell/catalog/column"
	"nearcell/engine/exec"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// explain prints the plan of a query with the rows and the geometry that each
// step is thought to take. MEASURED runs it and prints what they took as well.
func (s *Session) explain(ctx context.Context, st *statement, t *lang.Explain) error {
	node, err := s.prepare(st, t.Query)
	if err != nil || s.checkOnly {
		return err
	}
	node = plan.Apart(node)
	estimates, err := s.estimates(ctx, st, node)
	if err != nil {
		return err
	}
	e := &explained{estimates: estimates, shown: map[*plan.Common]bool{}}
	if t.Measured {
		e.measured = exec.NewMeasured(node)
		env := s.execEnv(st)
		env.Measured = e.measured
		if err := exec.Run(ctx, env, node, func(*column.Batch) error { return nil }); err != nil {
			return err
		}
	}
	e.add(node, 0, false)
	if !s.plain() {
		return s.showTable(st, e.table())
	}
	if err := s.showText(e.text(s.tableOptions().Width)); err != nil {
		return err
	}
	s.say("%s, %s", plural(e.count(), "step"), st.seconds())
	return nil
}

// estimates looks at the sites of relations, whose notes belong to running
// them: here they are not said.
func (s *Session) estimates(ctx context.Context, st *statement, n plan.Node) (map[plan.Node]plan.Estimate, error) {
	look := func(n *plan.Relation) (*relation.Forecast, error) {
		env := s.execEnv(st)
		env.Notes, env.Progress = &note.Notes{}, nil
		return exec.Forecast(ctx, env, n)
	}
	e := &plan.Estimator{Look: look, Threads: s.o.Threads}
	return e.Estimates(n)
}

// explained is a plan with what is known of its steps, in the order in which
// they are printed: what a step takes its rows from stands below it.
type explained struct {
	estimates map[plan.Node]plan.Estimate
	measured  *exec.Measured // nil: it was not run
	steps     []step
	shown     map[*plan.Common]bool
}

// count is the number of steps, titles aside.
func (e *explained) count() int {
	n := 0
	for _, x := range e.steps {
		if !x.title {
			n++
		}
	}
	return n
}

type step struct {
	line     string
	depth    int
	title    bool // of a query inside, no step itself
	often    bool // in a query that is computed for many rows outside: not counted
	estimate plan.Estimate
	count    exec.Count
	geometry string
}

// add lists a node, what it takes its rows from, and then what it asks: the
// queries in its expressions and, where it is first used, a common part.
func (e *explained) add(n plan.Node, depth int, often bool) {
	x := step{line: plan.Line(n), depth: depth, often: often, estimate: e.estimates[n]}
	if e.measured != nil && !often {
		x.count = e.measured.Of(n)
	}
	if f := x.estimate.Geometry; f != nil && n.(*plan.Relation).Bound.Def.Over == relation.OverSites {
		x.geometry = geometryText(f, n.(*plan.Relation).Bound.Per(), x.count.Geometry)
	}
	e.steps = append(e.steps, x)
	for _, in := range n.Inputs() {
		e.add(in, depth+1, often)
	}
	if c := plan.CommonOf(n); c != nil && !e.shown[c] {
		e.shown[c] = true
		e.add(c.Plan, depth+1, often)
	}
	for _, q := range plan.QueriesOf(n) {
		inside := q.Query.(*plan.Query)
		title := inside.String() + ", computed once:"
		if len(q.Outer) > 0 {
			title = inside.String() + ", computed for each different row outside:"
		}
		e.steps = append(e.steps, step{line: title, depth: depth + 1, title: true})
		e.add(inside.Plan, depth+2, often || len(q.Outer) > 0)
	}
}

// geometryText says what a relation computes: "volume, farthest of 53 cells,
// one by one, about 0.002 s".
func geometryText(f *relation.Forecast, per string, took *exec.GeometryCount) string {
	if len(f.Measures) == 0 {
		return "nothing but which sites have a cell" + partitionText(f)
	}
	about := ""
	if !f.Counted {
		about = "about "
	}
	text := strings.Join(f.Measures, ", ") + " of " + about + plural(f.Cost.Cells+f.Known, per) + partitionText(f)
	switch {
	case f.Cost.Cells == 0 && f.Known > 0:
		text += ", all known already"
	case f.Cost.Cells > 0:
		if f.Known > 0 {
			text += fmt.Sprintf(", %d of them known already", f.Known)
		}
		way := "all at once"
		if f.Cost.OneByOne {
			way = "one by one"
		}
		text += ", " + way + ", " + aboutSeconds(f.Cost.Seconds)
		if f.Cost.Slow {
			text += " (slow cells: hundreds of sites meet in each)"
		}
	}
	if took != nil && took.Cells > 0 {
		text += fmt.Sprintf("; %d computed", took.Cells)
	}
	return text
}

// partitionText says how many diagrams the partitions of FOR EACH need.
func partitionText(f *relation.Forecast) string {
	parts, diagrams := int64(f.Parts+0.5), int64(f.Diagrams+0.5)
	switch {
	case parts == 1:
		return ""
	case !f.Counted && parts == diagrams:
		return fmt.Sprintf(" in about %s", plural(parts, "partition"))
	case parts == diagrams:
		return fmt.Sprintf(" in %s", plural(parts, "partition"))
	}
	return fmt.Sprintf(" in %s, %d of them different", plural(parts, "partition"), diagrams)
}

func aboutSeconds(s float64) string {
	switch {
	case s < 0.001:
		return "under 0.001 s"
	case s >= 100:
		return "about " + strconv.FormatFloat(s, 'f', 0, 64) + " s"
	}
	digits := max(0, 1-int(math.Floor(math.Log10(s))))
	return "about " + strconv.FormatFloat(s, 'f', digits, 64) + " s"
}

// estimatedRows is a whole number; "~54" is one that may turn out another.
func estimatedRows(e plan.Estimate) string {
	if e.Exact {
		return strconv.FormatInt(wholeRows(e), 10)
	}
	return "~" + strconv.FormatInt(wholeRows(e), 10)
}

func wholeRows(e plan.Estimate) int64 {
	switch {
	case e.Rows > 0 && e.Rows < 1:
		return 1
	case e.Rows >= math.MaxInt64:
		return math.MaxInt64
	}
	return int64(e.Rows + 0.5)
}

// explainWidth is that of a line where no screen limits it.
const explainWidth = 100

// text is the plan for people: numbers to the left, and to the right of them
// the steps, indented, the long ones over several lines.
func (e *explained) text(width int) string {
	if width <= 0 {
		width = explainWidth
	}
	heads := []string{"rows"}
	if e.measured != nil {
		heads = []string{"estimated", "rows", "seconds", "MB"}
	}
	cells := make([][]string, len(e.steps))
	widths := make([]int, len(heads))
	for c, h := range heads {
		widths[c] = len(h)
	}
	for i := range e.steps {
		cells[i] = e.numbers(&e.steps[i])
		for c, text := range cells[i] {
			widths[c] = max(widths[c], len(text))
		}
	}
	var b strings.Builder
	left := 0
	for c, h := range heads {
		fmt.Fprintf(&b, "%*s  ", widths[c], h)
		left += widths[c] + 2
	}
	b.WriteString("step\n")
	for i, x := range e.steps {
		for c, text := range cells[i] {
			fmt.Fprintf(&b, "%*s  ", widths[c], text)
		}
		indented(&b, x.line, left, 2*x.depth, width)
		if x.geometry != "" {
			b.WriteString(strings.Repeat(" ", left))
			indented(&b, "geometry: "+x.geometry, left, 2*x.depth+4, width)
		}
	}
	return b.String()
}

func (e *explained) numbers(x *step) []string {
	list := []string{""}
	if !x.title {
		list[0] = estimatedRows(x.estimate)
	}
	switch {
	case e.measured == nil:
		return list
	case x.title || x.often:
		return append(list, "", "", "")
	case !x.count.Ran:
		return append(list, "not run", "", "")
	}
	return append(list, strconv.FormatInt(x.count.Rows, 10), seconds(x.count.Time), megabytes(x.count.Bytes))
}

func seconds(d time.Duration) string { return strconv.FormatFloat(d.Seconds(), 'f', 4, 64) }

// megabytes is empty where nothing was kept.
func megabytes(bytes int64) string {
	if bytes == 0 {
		return ""
	}
	return strconv.FormatFloat(max(0.001, float64(bytes)/1e6), 'f', 3, 64)
}

// indented writes a text behind what stands to its left, broken at blanks; the
// lines after the first are indented four further.
func indented(b *strings.Builder, text string, left, indent, width int) {
	const least = 30 // however deep the plan
	room := max(least, width-left-indent)
	b.WriteString(strings.Repeat(" ", indent))
	used := 0
	for i, word := range strings.Split(text, " ") {
		n := utf8.RuneCountInString(word)
		switch {
		case i == 0:
		case used+1+n > room:
			b.WriteString("\n" + strings.Repeat(" ", left+indent+4))
			used, room = 0, max(least, width-left-indent-4)
		default:
			b.WriteByte(' ')
			used++
		}
		b.WriteString(word)
		used += n
	}
	b.WriteByte('\n')
}

// table is the plan for programs. What was not measured is NULL.
func (e *explained) table() *column.Table {
	fields := column.Schema{
		{Name: "step", Type: column.Text}, {Name: "depth", Type: column.Integer}, {Name: "rows_estimated", Type: column.Integer},
		{Name: "rows", Type: column.Integer}, {Name: "seconds", Type: column.Real}, {Name: "bytes", Type: column.Integer},
		{Name: "geometry", Type: column.Text},
	}
	builders := make([]*column.Builder, len(fields))
	for i, f := range fields {
		builders[i] = column.NewBuilder(f.Type, nil)
	}
	for _, x := range e.steps {
		row := []column.Value{
			column.String(x.line), column.Int(int64(x.depth)), column.Int(wholeRows(x.estimate)),
			column.NullOf(column.Integer), column.NullOf(column.Real), column.NullOf(column.Integer), column.NullOf(column.Text),
		}
		if x.title {
			row[2] = column.NullOf(column.Integer)
		}
		if x.count.Ran {
			row[3], row[4], row[5] = column.Int(x.count.Rows), column.Float(x.count.Time.Seconds()), column.Int(x.count.Bytes)
		}
		if x.geometry != "" {
			row[6] = column.String(x.geometry)
		}
		for i, v := range row {
			builders[i].Append(v)
		}
	}
	t := &column.Table{Schema: fields, N: len(e.steps)}
	for _, b := range builders {
		t.Cols = append(t.Cols, b.Finish())
	}
	return t
}
