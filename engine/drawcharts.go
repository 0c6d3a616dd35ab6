package engine

import (
	"context"
	"math"
	"slices"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/draw"
	"nearcell/engine/exec"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// chartSource is what a course or a histogram is made OF.
func chartSource(st *statement, t *lang.Draw) (lang.Source, error) {
	r := t.Relation
	if len(r.Clauses) > 0 {
		return nil, problem.New("no-clause", st.at(r.Clauses[0]), "a picture of %s takes no clauses of a partition", strings.ToUpper(r.Noun.Text)).
			WithHint("they stand in the query: OF (SELECT … FROM CELLS OF …)")
	}
	switch o := r.Operand.(type) {
	case *lang.Query:
		return &lang.QuerySource{At: o.At, Query: o, Aliased: lang.Aliased{Alias: lang.Name{At: o.At, Text: "picture"}}}, nil
	case *lang.Name:
		return &lang.NameSource{At: o.At, Name: *o}, nil
	case *lang.Relation:
		return &lang.RelationSource{At: o.At, Relation: o}, nil
	}
	return nil, problem.New("needs-clause", st.at(r), "a picture of %s needs OF (query)", strings.ToUpper(r.Noun.Text)).WithHint("HELP DRAW shows it")
}

// chartRows runs the query of a chart; nil where the statement is only checked.
func (s *Session) chartRows(ctx context.Context, st *statement, t *lang.Draw, q *lang.Query, check func(column.Schema) error) (*column.Table, error) {
	node, err := s.prepare(st, q)
	if err != nil {
		return nil, err
	}
	if err := check(node.Schema()); err != nil || s.checkOnly {
		return nil, err
	}
	rows, err := exec.Collect(ctx, s.execEnv(st), node)
	if err == nil && rows.N == 0 {
		err = problem.New("no-rows", st.at(t.Relation), "the query gives no rows: there is nothing to draw").WithHint("run the query alone to see why")
	}
	return rows, err
}

// coursePicture is DRAW COURSE.
func (s *Session) coursePicture(ctx context.Context, st *statement, t *lang.Draw) (picture, error) {
	limits, err := s.pictureLimits(st, t)
	if err != nil {
		return nil, err
	}
	source, err := chartSource(st, t)
	if err != nil {
		return nil, err
	}
	q := selecting(t, source, append([]lang.Name{t.Along}, t.Showing...)...)
	named := q.Body.(*lang.Select)
	q.OrderBy = []*lang.Key{{At: t.Along.At, Expr: named.Items[0].Expr}}
	rows, err := s.chartRows(ctx, st, t, q, func(f column.Schema) error { return courseColumns(st, t, f) })
	if err != nil || rows == nil {
		return nil, err
	}
	c := &draw.Course{Title: "Course of " + listed(namesOf(t.Showing), 6), Along: rows.Schema[0].Name, Unit: rows.Schema[0].Unit.String(),
		Time: rows.Schema[0].Type == column.Timestamp, Limits: limits}
	at, kept, err := courseStamps(st, t, &rows.Cols[0])
	if err != nil {
		return nil, err
	}
	if missing := rows.N - len(kept); missing > 0 {
		s.noted(st, &c.Notes, "%s without %s: not drawn", plural(missing, "row"), t.Along.Text)
	}
	if c.Gap = usualStep(at) * 1.5; c.Gap > 0 && wider(at, c.Gap) > 0 {
		s.noted(st, &c.Notes, "the lines are open at %s where rows are missing: steps of more than one and a half times the usual", plural(wider(at, c.Gap), "place"))
	}
	for k := range t.Showing {
		l := draw.Line{Name: rows.Schema[1+k].Name, Unit: rows.Schema[1+k].Unit.String(), At: at}
		v := &rows.Cols[1+k]
		for _, i := range kept {
			missing := v.IsNull(i) || math.IsInf(number(v, i), 0)
			l.Missing = append(l.Missing, missing)
			x := 0.0
			if !missing {
				x = number(v, i)
			}
			l.Value = append(l.Value, x)
		}
		c.Lines = append(c.Lines, l)
	}
	if len(limits) > 0 && slices.ContainsFunc(c.Lines, func(l draw.Line) bool { return l.Unit != c.Lines[0].Unit }) {
		s.noted(st, &c.Notes, "LIMITS are those of %s, and of the others in its unit", rows.Schema[1].Name)
	}
	return c, nil
}

func namesOf(list []lang.Name) []string {
	var out []string
	for _, n := range list {
		out = append(out, n.Text)
	}
	return out
}

// courseColumns refuses what no line can be drawn of.
func courseColumns(st *statement, t *lang.Draw, f column.Schema) error {
	if k := f[0].Type; k != column.Timestamp && !k.Numeric() {
		return problem.New("types", st.at(&t.Along), "'%s' is %s: a course runs along time or a number", f[0].Name, k)
	}
	units := map[string]bool{}
	for i, n := range t.Showing {
		if err := numeric(st, n, f[1+i]); err != nil {
			return err
		}
		units[f[1+i].Unit.String()] = true
		if len(units) > 2 {
			return problem.New("units", st.at(&n), "a picture has two axes, and '%s' has a third unit", n.Text).WithHint("draw it in a picture of its own")
		}
	}
	return nil
}

// courseStamps are the places of the rows, which must be different ones.
func courseStamps(st *statement, t *lang.Draw, v *column.Vector) (at []float64, kept []int, err error) {
	for i := range v.N {
		if v.IsNull(i) {
			continue
		}
		x := 0.0
		if v.Type.Counted() {
			x = float64(v.I[i])
		} else {
			x = v.F[i]
		}
		if math.IsInf(x, 0) {
			return nil, nil, problem.New("not-finite", st.at(&t.Along), "a value of '%s' is infinite", t.Along.Text)
		}
		if n := len(at); n > 0 && at[n-1] == x {
			return nil, nil, problem.New("many-rows", st.at(&t.Along), "several rows have %s = %s: a line has one value there", t.Along.Text, v.Value(i).String()).
				WithHint("OF (SELECT %s, AVG(…) … GROUP BY %s)", t.Along.Text, t.Along.Text)
		}
		at, kept = append(at, x), append(kept, i)
	}
	if len(at) == 0 {
		return nil, nil, problem.New("no-rows", st.at(&t.Along), "'%s' is NULL throughout: there is nothing to draw", t.Along.Text)
	}
	return at, kept, nil
}

// usualStep is the median of the steps; 0 of fewer than two places.
func usualStep(at []float64) float64 {
	var steps []float64
	for i := 1; i < len(at); i++ {
		steps = append(steps, at[i]-at[i-1])
	}
	if len(steps) == 0 {
		return 0
	}
	slices.Sort(steps)
	return steps[len(steps)/2]
}

// wider counts the steps that are wider than a gap.
func wider(at []float64, gap float64) int {
	n := 0
	for i := 1; i < len(at); i++ {
		if at[i]-at[i-1] > gap {
			n++
		}
	}
	return n
}

// histogramPicture is DRAW HISTOGRAM.
func (s *Session) histogramPicture(ctx context.Context, st *statement, t *lang.Draw) (picture, error) {
	limits, err := s.pictureLimits(st, t)
	if err != nil {
		return nil, err
	}
	if len(t.Showing) > 1 {
		return nil, problem.New("clauses", st.at(&t.Showing[1]), "a histogram shows one column, not %d", len(t.Showing)).WithHint("draw one for each")
	}
	source, err := chartSource(st, t)
	if err != nil {
		return nil, err
	}
	q := selecting(t, source, t.Showing[0])
	items := &q.Body.(*lang.Select).Items
	if t.Weight != nil {
		*items = append(*items, &lang.Item{At: t.At, Expr: t.Weight})
	}
	rows, err := s.chartRows(ctx, st, t, q, func(f column.Schema) error {
		if err := numeric(st, t.Showing[0], f[0]); err != nil {
			return err
		}
		if t.Weight != nil && !f[1].Type.Numeric() {
			return problem.New("types", st.at(t.Weight), "the weight is %s, not a number", f[1].Type)
		}
		return nil
	})
	if err != nil || rows == nil {
		return nil, err
	}
	h := &draw.Histogram{Value: rows.Schema[0].Name, Unit: rows.Schema[0].Unit.String(), Limits: limits}
	h.Title = "Distribution of " + h.Value
	if t.Weight != nil {
		h.Weight, h.WeightUnit = st.source.Text[t.Weight.Span().Start:t.Weight.Span().End], rows.Schema[1].Unit.String()
		h.Title += " by " + h.Weight
	}
	return h, s.fillHistogram(st, t, h, rows)
}

// fillHistogram takes values and weights over, and tells what has none.
func (s *Session) fillHistogram(st *statement, t *lang.Draw, h *draw.Histogram, rows *column.Table) error {
	left := 0
	for i := range rows.N {
		if rows.Cols[0].IsNull(i) {
			left++
			continue
		}
		v, w := number(&rows.Cols[0], i), 1.0
		if math.IsInf(v, 0) {
			return problem.New("not-finite", st.at(&t.Showing[0]), "a value of '%s' is infinite: no bar can show it", t.Showing[0].Text).
				WithHint("choose others with WHERE in OF (query)")
		}
		if t.Weight != nil {
			c := &rows.Cols[1]
			if c.IsNull(i) || !(number(c, i) >= 0) || math.IsInf(number(c, i), 0) {
				return problem.New("weight", st.at(t.Weight), "a weight is NULL, negative or infinite").
					WithHint("leave such rows out with WHERE in OF (query)")
			}
			w = number(c, i)
		}
		h.Values, h.Weights = append(h.Values, v), append(h.Weights, w)
	}
	total := 0.0
	for _, w := range h.Weights {
		total += w
	}
	if total == 0 {
		return problem.New("no-rows", st.at(&t.Showing[0]), "no row has a value of '%s' with a weight: there is nothing to draw", t.Showing[0].Text)
	}
	if left > 0 {
		s.noted(st, &h.Notes, "%s without %s: not in the picture", plural(left, "row"), h.Value)
	}
	return nil
}

// profilePicture is DRAW PROFILE.
func (s *Session) profilePicture(ctx context.Context, st *statement, t *lang.Draw) (picture, error) {
	limits, err := s.pictureLimits(st, t)
	if err != nil {
		return nil, err
	}
	r := t.Relation
	plain := &lang.Relation{At: r.At, Noun: lang.Name{At: r.Noun.At, Text: "CELLS"}, Operand: r.Operand}
	var value *lang.ForClause
	for _, c := range r.Clauses {
		switch c := c.(type) {
		case *lang.ForClause:
			value = c
		case *lang.ForEachClause, *lang.MeasuredInClause:
			return nil, problem.New("no-clause", st.at(c), "a picture of PROFILE shows one partition as a whole").WithHint("choose an instant with WHERE in OF (query)")
		default:
			plain.Clauses = append(plain.Clauses, c)
		}
	}
	if value == nil || len(value.Names) != 1 {
		return nil, problem.New("needs-clause", st.at(r), "a picture of PROFILE needs FOR and one column").WithHint("DRAW PROFILE OF campaign FOR temp ALONG z TO …")
	}
	if !slices.Contains([]string{"x", "y", "z"}, lang.Fold(t.Along.Text)) {
		return nil, problem.New("plane", st.at(&t.Along), "'%s' is no axis", t.Along.Text).WithHint("ALONG x, ALONG y or ALONG z")
	}
	q := selecting(t, &lang.RelationSource{At: r.At, Relation: plain}, lang.Name{Text: "id"}, t.Along, value.Names[0], lang.Name{Text: "volume"})
	node, err := s.prepare(st, q)
	if err != nil {
		return nil, err
	}
	if err := numeric(st, value.Names[0], node.Schema()[2]); err != nil {
		return nil, err
	}
	bound := boundIn(node)
	if bound == nil || !bound.Closed() {
		return nil, problem.New("no-solid", st.at(r), "a profile weighs by the volumes of the cells, which have no end without a solid").
			WithHint("WITHIN solid, in DRAW or in CREATE CAMPAIGN")
	}
	if s.checkOnly {
		return nil, nil
	}
	rows, err := exec.Collect(ctx, s.execEnv(st), node)
	if err != nil {
		return nil, err
	}
	f := rows.Schema
	p := &draw.Profile{Title: "Profile of " + f[2].Name + " along " + f[1].Name, Value: f[2].Name, Unit: f[2].Unit.String(), Along: f[1].Name,
		Length: bound.Clauses.Unit.String(), Limits: limits}
	left, space := 0, 0.0
	for i := range rows.N {
		if rows.Cols[2].IsNull(i) {
			left, space = left+1, space+number(&rows.Cols[3], i)
			continue
		}
		p.Sites = append(p.Sites, draw.Height{ID: rows.Cols[0].Value(i).String(), At: number(&rows.Cols[1], i), Value: number(&rows.Cols[2], i),
			Weight: number(&rows.Cols[3], i)})
	}
	if len(p.Sites) == 0 {
		return nil, problem.New("no-rows", st.at(&value.Names[0]), "no site has a value of '%s': there is nothing to draw", value.Names[0].Text)
	}
	if left > 0 {
		s.noted(st, &p.Notes, "%s without %s (%s) not in the picture", plural(left, "site"), f[2].Name, draw.WithUnit(draw.Number(space), p.Length+"³"))
	}
	return p, nil
}
