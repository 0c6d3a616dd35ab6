package plan_test

import (
	"math/rand/v2"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/engine/plan/plantest"
	"nearcell/lang"
)

func must(e expr.Expr, err error) expr.Expr {
	if err != nil {
		panic(err)
	}
	return e
}

func col(n plan.Node, name string) expr.Expr {
	for i, f := range n.Schema() {
		if f.Name == name {
			return plantest.Column(n.Schema(), i)
		}
	}
	panic("no column " + name)
}

// right is a column of the right side of a join, over the joined columns.
func right(j *plan.Join, name string) expr.Expr {
	c, _ := expr.AsColumn(col(j.Right, name))
	return plantest.Column(j.Schema(), len(j.Left.Schema())+c)
}

func num(f float64) expr.Expr { return expr.NewConst(column.Float(f), plantest.Nowhere) }
func text(s string) expr.Expr { return expr.NewConst(column.String(s), plantest.Nowhere) }

func compare(l expr.Expr, op lang.Op, r expr.Expr) expr.Expr {
	return must(expr.NewCompare(op, l, r, plantest.Nowhere))
}

func arith(l expr.Expr, op lang.Op, r expr.Expr) expr.Expr {
	return must(expr.NewArith(op, l, r, plantest.Nowhere))
}

func and(list ...expr.Expr) expr.Expr { return expr.AndAll(list) }

func where(n plan.Node, list ...expr.Expr) plan.Node {
	return &plan.Filter{Input: n, Cond: and(list...), Clause: "WHERE"}
}

func project(n plan.Node, list ...expr.Expr) *plan.Project {
	p := &plan.Project{Input: n, Exprs: list}
	for _, e := range list {
		p.Fields = append(p.Fields, column.Field{Name: e.String(), Type: e.Type()})
	}
	return p
}

func scan() plan.Node { return plantest.Scan(plantest.Table(rand.New(rand.NewPCG(1, 1)), 3)) }

func crowd(n plan.Node, each int) *plan.Relation {
	return &plan.Relation{Bound: plantest.Bound(n.Schema(), 0, 2, each), Input: n}
}

// expect compares the printed plan after a rule, or after all of them.
func expect(t *testing.T, rule string, n plan.Node, want string) {
	t.Helper()
	apply := plan.Optimise
	for _, r := range plan.Rules {
		if r.Name == rule {
			apply = r.Apply
		}
	}
	got, err := apply(n)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(strings.TrimLeft(want, "\n"), plan.Format(got)); d != "" {
		t.Errorf("%s of\n%s%s", rule, plan.Format(n), d)
	}
}

func TestFold(t *testing.T) {
	n := scan()
	expect(t, "fold", where(n, compare(num(1), lang.Less, arith(num(1), lang.Plus, num(1)))), `
read table x: id, n, r, s, b, t, p
`)
	// what cannot be computed stays
	expect(t, "fold", where(n, compare(arith(num(1), lang.Divide, num(0)), lang.Less, arith(num(1), lang.Plus, num(1)))), `
keep where: 1.0 / 0.0 < 2.0
  read table x: id, n, r, s, b, t, p
`)
}

// Through plain columns, into the sides of joins, but not past what it guards.
func TestPushDown(t *testing.T) {
	n := scan()
	p := project(n, col(n, "r"), arith(col(n, "r"), lang.Plus, num(1)))
	expect(t, "push down", where(p, compare(col(p, "r"), lang.Less, num(3)), compare(col(p, "r + 1.0"), lang.Less, num(3))), `
keep where: "r + 1.0" < 3.0
  compute: r, r + 1.0
    keep where: r < 3.0
      read table x: id, n, r, s, b, t, p
`)
	fails := compare(arith(num(1), lang.Divide, col(n, "r")), lang.Less, num(3))
	expect(t, "push down", where(where(n, fails), compare(col(n, "r"), lang.NotEquals, num(0))), `
keep where: 1.0 / r < 3.0
  keep where: r <> 0.0
    read table x: id, n, r, s, b, t, p
`)
	limit := &plan.Limit{Input: n, Count: 5}
	expect(t, "push down", where(limit, compare(col(n, "r"), lang.Less, num(3))), `
keep where: r < 3.0
  limit 5
    read table x: id, n, r, s, b, t, p
`)
}

func TestPushIntoJoin(t *testing.T) {
	for kind, want := range map[plan.JoinKind]string{
		plan.Inner: `
inner join on n = n
  keep on: b
    keep where: n < 1
      read table x: id, n, r, s, b, t, p
  keep on: s = 'a'
    keep where: r < 2.0
      read table x: id, n, r, s, b, t, p
`,
		plan.Left: `
keep where: r < 2.0
  left join on n = n AND b
    keep where: n < 1
      read table x: id, n, r, s, b, t, p
    keep on: s = 'a'
      read table x: id, n, r, s, b, t, p
`,
	} {
		j := &plan.Join{Kind: kind, Left: scan(), Right: scan()}
		j.Rest = and(compare(col(j.Left, "n"), lang.Equals, right(j, "n")), col(j.Left, "b"), compare(right(j, "s"), lang.Equals, text("a")))
		one := expr.NewConst(column.Int(1), plantest.Nowhere)
		expect(t, "push down", where(j, compare(col(j.Left, "n"), lang.Less, one), compare(right(j, "r"), lang.Less, num(2))), want)
	}
}

// Conditions on the sites' own columns choose what is shown; the partition is
// that of all of them. What is computed, and what can fail, stays above.
func TestPushIntoRelation(t *testing.T) {
	r := crowd(scan(), -1)
	fails := compare(arith(num(1), lang.Divide, col(r, "r")), lang.Less, num(3))
	expect(t, "push down", where(r, compare(col(r, "id"), lang.Equals, text("R1")), compare(col(r, "volume"), lang.Less, num(3)), fails), `
keep where: 1.0 / r < 3.0
  keep where: volume < 3.0
    crowd of sites: id, n, r, s, b, t, p, volume, partners; only id = 'R1'
      read table x: id, n, r, s, b, t, p
`)
}

func TestJoinKeys(t *testing.T) {
	j := &plan.Join{Left: scan(), Right: scan()}
	j.Rest = and(compare(right(j, "r"), lang.Equals, col(j.Left, "n")), compare(col(j.Left, "s"), lang.Equals, right(j, "s")),
		compare(col(j.Left, "n"), lang.Equals, col(j.Left, "r")), compare(col(j.Left, "n"), lang.Less, right(j, "n")),
		compare(arith(num(1), lang.Divide, col(j.Left, "r")), lang.Equals, right(j, "r")))
	expect(t, "join keys", j, `
inner join by hash: n = r, s = s, 1.0 / r = r (row by row where one of these fails); on n = r AND n < n
  read table x: id, n, r, s, b, t, p
  read table x: id, n, r, s, b, t, p
`)
}

// An equality that can fail stays in the condition above a join, and is a key of the
// join that its sides meet in.
func TestJoinKeysFromAbove(t *testing.T) {
	in := &plan.Join{Left: scan(), Right: scan()}
	j := &plan.Join{Left: in, Right: scan()}
	f := &plan.Filter{Input: j, Clause: "WHERE", Cond: compare(arith(num(1), lang.Divide, col(in.Left, "r")), lang.Equals, right(in, "r"))}
	expect(t, "join keys", f, `
keep where: 1.0 / r = r
  cross join
    inner join by hash: 1.0 / r = r (row by row where one of these fails)
      read table x: id, n, r, s, b, t, p
      read table x: id, n, r, s, b, t, p
    read table x: id, n, r, s, b, t, p
`)
}

// Of one row on the left all pairs are fewer steps than a table of keys.
func TestJoinOfOneRowHasNoKeys(t *testing.T) {
	one := &plan.Aggregate{Input: scan(), Calls: []plan.Call{{Fn: function.LookupAggregate("COUNT"), Text: "COUNT(*)"}}, Fields: column.Schema{{Name: "n", Type: column.Integer}}}
	j := &plan.Join{Left: one, Right: scan()}
	j.Rest = compare(col(one, "n"), lang.Equals, right(j, "n"))
	expect(t, "join keys", j, `
inner join on n = n
  aggregate all rows: COUNT(*)
    read table x: id, n, r, s, b, t, p
  read table x: id, n, r, s, b, t, p
`)
}

func TestTop(t *testing.T) {
	s := &plan.Sort{Input: scan(), Keys: []plan.SortKey{{Expr: col(scan(), "r"), Descending: true}}}
	expect(t, "top", &plan.Limit{Input: project(s, col(s, "id")), Count: 5, Offset: 2}, `
limit 5 offset 2
  columns: id
    sort: r DESC, first 7
      read table x: id, n, r, s, b, t, p
`)
	expect(t, "top", &plan.Limit{Input: &plan.Distinct{Input: s}, Count: 5}, `
limit 5
  distinct rows
    sort: r DESC
      read table x: id, n, r, s, b, t, p
`)
}

// A relation computes the measure that is asked for over as few columns as the
// partition, the choice and the answer need.
func TestPrune(t *testing.T) {
	r := crowd(scan(), 5)
	shown := where(r, compare(col(r, "s"), lang.Equals, text("a")))
	avg := plan.Call{Fn: function.LookupAggregate("AVG"), Args: []expr.Expr{col(r, "n")}, Weight: col(r, "volume"), Text: "AVG(n) WEIGHTED BY volume"}
	a := &plan.Aggregate{Input: shown, Calls: []plan.Call{avg}, Fields: column.Schema{{Name: "mean", Type: column.Real}}}
	expect(t, "all", a, `
aggregate all rows: AVG(n) WEIGHTED BY volume
  crowd of sites for each t: id, n, volume; only s = 'a'
    read table x: id, n, r, s, t
`)
	// rows are counted without any column
	count := plan.Call{Fn: function.LookupAggregate("COUNT"), Text: "COUNT(*)"}
	expect(t, "prune", &plan.Aggregate{Input: scan(), Calls: []plan.Call{count}, Fields: column.Schema{{Name: "n", Type: column.Integer}}}, `
aggregate all rows: COUNT(*)
  read table x: no columns
`)
	// the id stays beside what can fail, so that the row can be named
	n := scan()
	expect(t, "prune", project(n, arith(num(1), lang.Divide, col(n, "r"))), `
compute: 1.0 / r
  read table x: id, r
`)
}
