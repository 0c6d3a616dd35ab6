package exec

import (
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/engine/plan/plantest"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// sites is a table of five sites at two instants, in the way of a campaign:
// temp is NULL for site C at the second instant.
func sites() *plan.Scan {
	schema := column.Schema{{Name: "id", Type: column.Text}, {Name: "w", Type: column.Real}, {Name: "temp", Type: column.Real},
		{Name: "t", Type: column.Timestamp}}
	b := []*column.Builder{column.NewBuilder(column.Text, nil), column.NewBuilder(column.Real, nil),
		column.NewBuilder(column.Real, nil), column.NewBuilder(column.Timestamp, nil)}
	for t := range 2 {
		for i, id := range []string{"A", "B", "C", "D", "E"} {
			b[0].AppendText(id)
			b[1].AppendFloat([]float64{1, 2, 3, 3.5, 0.5}[i])
			if id == "C" && t == 1 {
				b[2].AppendNull()
			} else {
				b[2].AppendFloat(float64(4 + i))
			}
			b[3].AppendInt(int64(t) * 3_600_000_000)
		}
	}
	table := &column.Table{Schema: schema, N: 10}
	for _, x := range b {
		table.Cols = append(table.Cols, x.Finish())
	}
	return plantest.Scan(table)
}

const ( // columns of sites and of CROWD OF sites
	siteID = iota
	siteW
	siteTemp
	siteT
	siteVolume
)

func weighted(fn string, schema column.Schema, arg, weight expr.Expr) plan.Call {
	return plan.Call{Fn: function.LookupAggregate(fn), Args: []expr.Expr{arg}, Weight: weight,
		Text: fmt.Sprintf("%s(%s) WEIGHTED BY %s", fn, arg, weight)}
}

func is(schema column.Schema, c int, op lang.Op, v column.Value) expr.Expr {
	return must(expr.NewCompare(op, plantest.Column(schema, c), expr.NewConst(v, plantest.Nowhere), plantest.Nowhere))
}

func where(n plan.Node, cond expr.Expr) plan.Node {
	return &plan.Filter{Input: n, Cond: cond, Clause: "WHERE"}
}

func crowdOf(n plan.Node, each int) *plan.Relation {
	return &plan.Relation{Bound: plantest.Bound(n.Schema(), siteID, siteW, each), Input: n}
}

func aggregate(n plan.Node, keys []expr.Expr, list ...plan.Call) *plan.Aggregate {
	a := &plan.Aggregate{Input: n, Keys: keys, Calls: list}
	for _, k := range keys {
		a.Fields = append(a.Fields, column.Field{Name: k.String(), Type: k.Type()})
	}
	for _, c := range list {
		t := column.Real
		if c.Fn.Name == "COUNT" {
			t = column.Integer
		}
		a.Fields = append(a.Fields, column.Field{Name: c.Text, Type: t})
	}
	return a
}

// notesOf runs a plan as it is and with the rules: both must say the same.
func notesOf(t *testing.T, n plan.Node) []string {
	t.Helper()
	better, err := plan.Optimise(n)
	if err != nil {
		t.Fatal(err)
	}
	var said [2][]string
	for i, p := range []plan.Node{n, better} {
		for _, sizes := range [][2]int{{0, 0}, {64, 64}} {
			env := testEnv(sizes[0], sizes[1])
			if _, err := run(t, env, p); err != nil {
				t.Fatal(err)
			}
			said[i] = nil
			for _, l := range env.Notes.Lines() {
				said[i] = append(said[i], l.Level.String()+": "+l.Text)
			}
		}
	}
	rows := func(s []string) string {
		return strings.ReplaceAll(strings.Join(s, "\n"), "rows of CROWD", "sites of CROWD")
	}
	if d := cmp.Diff(rows(said[0]), rows(said[1])); d != "" {
		t.Errorf("the rules change what is said: %s", d)
	}
	return said[1]
}

func expectNotes(t *testing.T, n plan.Node, want ...string) {
	t.Helper()
	if d := cmp.Diff(want, notesOf(t, n)); d != "" {
		t.Error(d)
	}
}

// expectRules is expectNotes for what only the rules can tell.
func expectRules(t *testing.T, n plan.Node, want ...string) {
	t.Helper()
	better, err := plan.Optimise(n)
	if err != nil {
		t.Fatal(err)
	}
	env := testEnv(0, 0)
	if _, err := run(t, env, better); err != nil {
		t.Fatal(err)
	}
	var said []string
	for _, l := range env.Notes.Lines() {
		said = append(said, l.Level.String()+": "+l.Text)
	}
	if d := cmp.Diff(want, said); d != "" {
		t.Error(d)
	}
}

// The weights 1, 2, 3, 3.5, 0.5 sum to 10 and their squares to 26.5: n_eff is
// 100 / 26.5 = 3.77 and the largest share 35 % (computed by hand).
func TestWeightNotes(t *testing.T) {
	s := sites()
	first := where(s, is(s.Fields, siteT, lang.Equals, column.Value{Type: column.Timestamp}))
	temp, w := plantest.Column(s.Fields, siteTemp), plantest.Column(s.Fields, siteW)
	avg, std := weighted("AVG", s.Fields, temp, w), weighted("STDDEV_POP", s.Fields, temp, w)
	expectNotes(t, aggregate(first, nil, avg, std),
		"note: AVG(temp) WEIGHTED BY w, STDDEV_POP(temp) WEIGHTED BY w: n_eff 3.8 of 5 values, largest weight 35.0 % (id 'D')")
	// without C: 7 and 17.5, so 2.8 of 4, 50 %; C's 3 of 10 has no value
	expectNotes(t, aggregate(s, columns(s.Fields, siteT), avg),
		"note: AVG(temp) WEIGHTED BY w: in 1 of 2 groups weight was left out, its values are NULL: space nobody spoke for, 30.0 % of the group's",
		"note: AVG(temp) WEIGHTED BY w: over 2 groups n_eff 2.8 to 3.8 of 4 to 5 values, largest weight 35.0 to 50.0 %")
	second := where(s, is(s.Fields, siteT, lang.Greater, column.Value{Type: column.Timestamp}))
	expectNotes(t, aggregate(second, nil, avg),
		"note: AVG(temp) WEIGHTED BY w: 30.0 % of the weight was left out, its values are NULL: space nobody spoke for",
		"note: AVG(temp) WEIGHTED BY w: n_eff 2.8 of 4 values, largest weight 50.0 % (id 'D')")
	// equal weights have no largest one to name
	one := expr.NewConst(column.Float(2), plantest.Nowhere)
	expectNotes(t, aggregate(first, nil, weighted("AVG", s.Fields, temp, one)),
		"note: AVG(temp) WEIGHTED BY 2.0: n_eff 5.0 of 5 values, largest weight 20.0 %")
	expectNotes(t, aggregate(where(s, is(s.Fields, siteID, lang.Equals, column.String("X"))), nil, avg))
}

// The largest weight is found whichever chunk it is in, and a tie across chunks
// is one.
func TestLargestWeightAcrossChunks(t *testing.T) {
	for _, c := range []struct {
		second float64
		want   string
	}{{8, " (id 'S150')"}, {9, ""}} {
		ids, w := column.NewBuilder(column.Text, nil), column.NewBuilder(column.Real, nil)
		for i := range 200 {
			ids.AppendText(fmt.Sprintf("S%d", i))
			w.AppendFloat(map[int]float64{20: c.second, 150: 9}[i] + 1)
		}
		schema := column.Schema{{Name: "id", Type: column.Text}, {Name: "w", Type: column.Real}}
		scan := plantest.Scan(&column.Table{Schema: schema, N: 200, Cols: []column.Vector{ids.Finish(), w.Finish()}})
		n := aggregate(scan, nil, weighted("AVG", schema, plantest.Column(schema, 1), plantest.Column(schema, 1)))
		env := testEnv(64, 64)
		if _, err := run(t, env, n); err != nil {
			t.Fatal(err)
		}
		if lines := env.Notes.Lines(); len(lines) != 1 || !strings.HasSuffix(lines[0].Text, " %"+c.want) {
			t.Errorf("%v, want one that ends with %q", lines, c.want)
		}
	}
}

// A WHERE over the cells says whose space is missing, where it took out any and
// an aggregate uses that space.
func TestVanishedCells(t *testing.T) {
	first := where(sites(), is(sites().Fields, siteT, lang.Equals, column.Value{Type: column.Timestamp}))
	r := crowdOf(first, -1)
	schema := r.Schema()
	avg := weighted("AVG", schema, plantest.Column(schema, siteTemp), plantest.Column(schema, siteVolume))
	sum := calls(schema, "SUM", siteVolume)[0]
	notA := is(schema, siteID, lang.NotEquals, column.String("A"))
	const left = "note: WHERE left out 1 of 5 sites of CROWD OF sites: their space is in no sum and no weight, " +
		"and it is not given to the others (OF (query) or OMITTING would do that)"
	expectNotes(t, aggregate(where(r, notA), nil, avg), left,
		"note: AVG(temp) WEIGHTED BY volume: n_eff 4.0 of 4 values, largest weight 25.0 %")
	expectNotes(t, aggregate(where(r, notA), nil, sum), left)
	// a condition that takes out nothing, an aggregate that uses no space, and
	// the cells of one site alone say nothing
	expectNotes(t, aggregate(where(r, is(schema, siteID, lang.NotEquals, column.String("X"))), nil, sum))
	expectNotes(t, aggregate(where(r, notA), nil, calls(schema, "MAX", siteTemp)[0]))
	expectNotes(t, where(r, notA))
	// a condition on what the relation computes is counted in rows
	big := is(schema, siteVolume, lang.Greater, column.Float(10))
	expectNotes(t, aggregate(where(r, big), nil, sum), strings.Replace(left, "1 of 5 sites", "5 of 5 rows", 1))
	// through a view that renames and a join that keeps the cells apart
	p := &plan.Project{Input: where(r, notA), Exprs: columns(schema, siteID, siteVolume), Fields: column.Schema{{Name: "k", Type: column.Text}, {Name: "v", Type: column.Real}}}
	expectNotes(t, aggregate(p, nil, calls(p.Fields, "SUM", 1)[0]), left)
}

// A WHERE on FOR EACH alone leaves out whole partitions and tears no hole.
func TestWholePartitionsLeftOut(t *testing.T) {
	r := crowdOf(sites(), siteT)
	schema := r.Schema()
	sum := calls(schema, "SUM", siteVolume)[0]
	first := is(schema, siteT, lang.Equals, column.Value{Type: column.Timestamp})
	expectNotes(t, aggregate(where(r, first), nil, sum))
	both := must(expr.NewAnd(first, is(schema, siteID, lang.NotEquals, column.String("A")), plantest.Nowhere))
	got := notesOf(t, aggregate(where(r, both), nil, sum))
	if len(got) != 1 || !contains(got[0], "left out 1 of 5 rows") {
		t.Errorf("%q", got)
	}
}

// A sum of volumes over rows that repeat cells is warned of, and only that.
func TestRepeatedCells(t *testing.T) {
	r := crowdOf(sites(), siteT)
	schema := r.Schema()
	sum := calls(schema, "SUM", siteVolume)[0]
	expectNotes(t, aggregate(r, nil, sum), "warning: SUM(volume) adds up 10 rows of CROWD OF sites that are only 5 different ones in their group: "+
		"the same space counts more than once (GROUP BY the columns of FOR EACH gives each partition its own sum)")
	expectNotes(t, aggregate(r, columns(schema, siteT), sum))

	first := where(sites(), is(sites().Fields, siteT, lang.Equals, column.Value{Type: column.Timestamp}))
	cells := crowdOf(first, -1)
	join := &plan.Join{Left: cells, Right: sites(), LeftKeys: columns(cells.Schema(), siteID), RightKeys: columns(sites().Fields, siteID)}
	both := join.Schema()
	const repeated = "warning: SUM(volume) adds up 10 rows of CROWD OF sites that are only 5 different ones in their group: " +
		"the same space counts more than once (a join repeats them: sum before joining, in FROM (SELECT … GROUP BY …))"
	expectNotes(t, aggregate(join, nil, calls(both, "SUM", siteVolume)[0]), repeated)
	// grouped by the log's instant each cell stands once in a group
	logT := len(cells.Schema()) + siteT
	expectNotes(t, aggregate(join, columns(both, logT), calls(both, "SUM", siteVolume)[0]))
	// the cells on the other side of the join
	swapped := &plan.Join{Left: sites(), Right: cells, LeftKeys: columns(sites().Fields, siteID), RightKeys: columns(cells.Schema(), siteID)}
	expectNotes(t, aggregate(swapped, nil, calls(swapped.Schema(), "SUM", len(sites().Fields)+siteVolume)[0]), repeated)
	// behind views that drop the identifier
	const each = "GROUP BY the columns of FOR EACH gives each partition its own sum)"
	view := &plan.Project{Input: r, Exprs: columns(schema, siteT, siteVolume), Fields: fields(schema, siteT, siteVolume)}
	expectNotes(t, aggregate(view, nil, calls(view.Fields, "SUM", 1)[0]), "warning: SUM(volume) adds up 10 rows of CROWD OF sites "+
		"of 2 partitions in 1 group: the same space counts more than once ("+each)
	expectNotes(t, aggregate(view, columns(view.Fields, 0), calls(view.Fields, "SUM", 1)[0]))
	instant := where(view, is(view.Fields, 0, lang.Equals, column.Value{Type: column.Timestamp}))
	expectRules(t, aggregate(instant, nil, calls(view.Fields, "SUM", 1)[0]))
	view = &plan.Project{Input: join, Exprs: columns(both, siteVolume, logT), Fields: fields(both, siteVolume, logT)}
	expectNotes(t, aggregate(view, nil, calls(view.Fields, "SUM", 0)[0]), strings.Replace(repeated,
		"that are only 5 different ones in their group", "of which there are only 5", 1))
	expectNotes(t, aggregate(view, columns(view.Fields, 1), calls(view.Fields, "SUM", 0)[0]))
	// a join that repeats nothing
	once := &plan.Join{Left: cells, Right: first, LeftKeys: join.LeftKeys, RightKeys: join.RightKeys}
	expectNotes(t, aggregate(once, nil, calls(both, "SUM", siteVolume)[0]))
}

// Cubic metre hours, and whatever else has a factor, are no plain sum over
// space; sums and differences of measures are, and so is a factor of one.
func TestRepeatedCellsWithAFactor(t *testing.T) {
	r := crowdOf(sites(), siteT)
	schema := r.Schema()
	volume := plantest.Column(schema, siteVolume)
	number := func(f float64, unit string) expr.Expr {
		return expr.NewConst(column.Value{Type: column.Real, F: f, Unit: column.Symbol(unit)}, plantest.Nowhere)
	}
	arith := func(l expr.Expr, op lang.Op, r expr.Expr) expr.Expr {
		return must(expr.NewArith(op, l, r, plantest.Nowhere))
	}
	for _, c := range []struct {
		sum  expr.Expr
		warn bool
	}{
		{arith(volume, lang.Times, plantest.Column(schema, siteTemp)), false},
		{arith(volume, lang.Times, number(0.25, "h")), false},
		{arith(number(1, "h"), lang.Times, volume), false},
		{arith(volume, lang.Times, number(0.25, "")), false},
		{arith(volume, lang.Divide, number(4, "")), false},
		{arith(volume, lang.Times, number(1, "")), true},
		{arith(volume, lang.Divide, number(1, "")), true},
		{arith(volume, lang.Plus, volume), true},
		{must(expr.NewNeg(volume, plantest.Nowhere)), true},
	} {
		call := plan.Call{Fn: function.LookupAggregate("SUM"), Args: []expr.Expr{c.sum}, Text: "SUM(" + c.sum.String() + ")"}
		said := notesOf(t, aggregate(r, nil, call))
		if warned := len(said) == 1 && contains(said[0], "counts more than once"); warned != c.warn || len(said) > 1 {
			t.Errorf("%s: %q", call.Text, said)
		}
	}
}

// No plan fails, or gives other rows, because somebody listens.
func TestNotesNeverFail(t *testing.T) {
	for seed := range uint64(300) {
		rng := rand.New(rand.NewPCG(seed, 9))
		n := plantest.Plan(rng, 4, 20)
		loud, loudErr := run(t, testEnv(0, 0), n)
		quiet, quietErr := run(t, &Env{Env: relation.Env{}}, n)
		if (loudErr == nil) != (quietErr == nil) {
			t.Fatalf("%v with notes, %v without", loudErr, quietErr)
		}
		if loudErr == nil {
			if err := sameRows(n, loud, quiet); err != nil {
				t.Fatal(err)
			}
		}
	}
}
