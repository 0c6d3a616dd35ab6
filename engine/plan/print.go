package plan

import (
	"fmt"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/relation"
	"nearcell/voronoi"
)

// Format writes a plan as an indented tree, one node a line, the source last.
// Columns are written as the expressions write themselves; node lines say what
// the rules have done: which columns a scan reads, what a relation computes.
func Format(n Node) string {
	var b strings.Builder
	formatInto(&b, n, 0)
	return b.String()
}

func formatInto(b *strings.Builder, n Node, depth int) {
	b.WriteString(strings.Repeat("  ", depth))
	b.WriteString(Line(n))
	b.WriteByte('\n')
	for _, in := range n.Inputs() {
		formatInto(b, in, depth+1)
	}
}

// Line is the text of one node, without its inputs.
func Line(n Node) string {
	switch n := n.(type) {
	case *One:
		return "one row"
	case *Values:
		return fmt.Sprintf("values: %s", count(len(n.Rows), "row"))
	case *Scan:
		return scanLine(n)
	case *Relation:
		return relationLine(n)
	case *Filter:
		return fmt.Sprintf("keep %s: %s", strings.ToLower(n.Clause), n.Cond)
	case *Project:
		return projectLine(n)
	case *Aggregate:
		return aggregateLine(n)
	case *Join:
		return joinLine(n)
	case *Interpolate:
		return interpolateLine(n)
	case *Sort:
		line := "sort: " + sortKeys(n.Keys)
		if n.Top > 0 {
			line += fmt.Sprintf(", first %d", n.Top)
		}
		return line
	case *Window:
		return windowLine(n)
	case *Limit:
		return limitLine(n)
	case *Distinct:
		return "distinct rows"
	case *Number:
		return "number the rows"
	case *Union:
		return "union all"
	case *Matched:
		return matchedLine(n)
	case *Shared:
		return "rows of " + n.Common.Name
	case *Nearest:
		return nearestLine(n)
	case *Lookup:
		return fmt.Sprintf("rows of %s found by hash: %s = %s", n.Common.Name, exprs(n.Keys), exprs(n.Values))
	}
	return fmt.Sprintf("%T", n)
}

func count(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}

func scanLine(n *Scan) string {
	names := make([]string, len(n.Fields))
	for i, f := range n.Fields {
		names[i] = f.Name
	}
	cols := strings.Join(names, ", ")
	if len(names) == 0 {
		cols = "no columns"
	}
	return fmt.Sprintf("read %s %s: %s", n.Kind, n.Name, cols)
}

func relationLine(n *Relation) string {
	var names []string
	for i, c := range n.Bound.Columns {
		if n.Need == nil || n.Need[i] {
			names = append(names, c.Name)
		}
	}
	cols := strings.Join(names, ", ")
	if len(names) == 0 {
		cols = "no columns"
	}
	line := fmt.Sprintf("%s of %s%s: %s", strings.ToLower(n.Bound.Def.Noun), n.Bound.Name, clauses(n.Bound), cols)
	if n.Wanted != nil {
		line += fmt.Sprintf("; only %s", n.Wanted)
	}
	if n.Most > 0 {
		line += fmt.Sprintf("; first %d", n.Most)
	}
	if n.Also != 0 {
		line += fmt.Sprintf("; with them %s, for other uses", strings.Join(n.Bound.Def.Measuring(n.Also), ", "))
	}
	return line
}

// clauses are those that say what partitions.
func clauses(b *relation.Bound) string {
	c := &b.Clauses
	text := ""
	if c.Solid != nil && b.Def.Over != relation.OverNothing {
		text += " within " + shortened(c.SolidName)
	}
	if len(c.Zones) > 0 && b.Def.Over != relation.OverNothing {
		text += " within (" + regionNames(c.Zones) + ")"
	}
	if voronoi.IsStretch(c.Stretch) {
		text += fmt.Sprintf(" stretched (%s, %s, %s)", column.FormatReal(c.Stretch.X), column.FormatReal(c.Stretch.Y), column.FormatReal(c.Stretch.Z))
	}
	if len(c.Measured) > 0 {
		text += " measured in (" + regionNames(c.Measured) + ")"
	}
	for i, of := range c.For {
		if i == 0 {
			text += " for "
		} else {
			text += ", "
		}
		text += b.Input[of].Name
	}
	for _, beside := range b.Beside {
		text += " " + strings.ToLower(beside.Clause) + " " + shortened(beside.Name)
	}
	if c.MethodText != "" {
		text += " by " + c.MethodText
	}
	if c.Weights != "" {
		text += " weights " + c.Weights
	}
	for i, each := range c.Each {
		if i == 0 {
			text += " for each "
		} else {
			text += ", "
		}
		text += b.Input[each].Name
	}
	if len(c.Omitting) > 0 {
		text += " omitting " + shortened("'"+strings.Join(c.Omitting, "', '")+"'")
	}
	return text
}

// regionNames names zones or parts, the first few of many.
func regionNames(list []relation.Region) string {
	const most = 5
	var names []string
	for i, r := range list {
		if i == most && len(list) > most+1 {
			names = append(names, fmt.Sprintf("%d more", len(list)-most))
			break
		}
		names = append(names, shortened(r.Name))
	}
	return strings.Join(names, ", ")
}

// shortened leaves the end of a long text out: solids may be written in place.
func shortened(s string) string {
	const most = 40
	r := []rune(s)
	if len(r) <= most {
		return s
	}
	return string(r[:most-1]) + "…"
}

// projectLine tells computed columns from those that are only handed on.
func projectLine(n *Project) string {
	what := "columns: "
	parts := make([]string, len(n.Exprs))
	for i, e := range n.Exprs {
		parts[i] = e.String()
		computed := parts[i]
		if c, plain := e.(*expr.Column); plain {
			computed = c.Field.Name
		} else {
			what = "compute: "
		}
		if name := n.Fields[i].Name; name != computed {
			parts[i] += " AS " + name
		}
	}
	if len(parts) == 0 {
		return "no columns"
	}
	return what + strings.Join(parts, ", ")
}

func aggregateLine(n *Aggregate) string {
	line := "aggregate all rows"
	if len(n.Keys) > 0 {
		line = "group by " + exprs(n.Keys)
	}
	for i, c := range n.Calls {
		if i == 0 {
			line += ": " + c.Text
		} else {
			line += ", " + c.Text
		}
	}
	return line
}

func joinLine(n *Join) string {
	line := "inner join"
	switch n.Kind {
	case Left:
		line = "left join"
	case Semi:
		line = "keep rows with a match"
	case Anti:
		line = "keep rows without a match"
	}
	for i := range n.LeftKeys {
		if i == 0 {
			line += " by hash: "
		} else {
			line += ", "
		}
		line += fmt.Sprintf("%s = %s", n.LeftKeys[i], n.RightKeys[i])
	}
	if n.Guarded {
		line += " (row by row where one of these fails)"
	}
	if n.Near != nil {
		line += fmt.Sprintf(", pairs by nearest-site search: %s within %s%s of %s", n.Near.Right, farthest(n.Near), n.Near.Within, n.Near.Left)
	}
	switch {
	case n.Rest == nil && n.Near != nil:
	case n.Rest != nil && len(n.LeftKeys) > 0:
		line += "; on " + n.Rest.String()
	case n.Rest != nil:
		line += " on " + n.Rest.String()
	case len(n.LeftKeys) == 0 && n.Kind == Inner:
		line = "cross join"
	}
	return line
}

func farthest(n *Near) string {
	if n.OfRight {
		return "the farthest "
	}
	return ""
}

func matchedLine(n *Matched) string {
	line := "intersect"
	if n.Kind == Except {
		line = "except"
	}
	if n.All {
		line += " all"
	}
	return line
}

func sortKeys(keys []SortKey) string {
	parts := make([]string, len(keys))
	for i, k := range keys {
		parts[i] = k.Expr.String()
		if k.Descending {
			parts[i] += " DESC"
		}
		if k.NullsFirst {
			parts[i] += " NULLS FIRST"
		}
	}
	return strings.Join(parts, ", ")
}

func limitLine(n *Limit) string {
	switch {
	case n.Count < 0:
		return fmt.Sprintf("offset %d", n.Offset)
	case n.Offset > 0:
		return fmt.Sprintf("limit %d offset %d", n.Count, n.Offset)
	}
	return fmt.Sprintf("limit %d", n.Count)
}

func exprs(list []expr.Expr) string {
	parts := make([]string, len(list))
	for i, e := range list {
		parts[i] = e.String()
	}
	return strings.Join(parts, ", ")
}
