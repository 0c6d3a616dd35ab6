package bind_test

import (
	"context"
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/bind"
	"nearcell/engine/exec"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// tablesToJoin makes tables t0, t1, … of columns a, b (numbers, some NULL), c (a name)
// and n (the row's number).
func tablesToJoin(t *testing.T, rng *rand.Rand, sizes []int, values int) *catalog.Catalog {
	c := catalog.Memory()
	for i, n := range sizes {
		schema := column.Schema{{Name: "a", Type: column.Integer}, {Name: "b", Type: column.Real}, {Name: "c", Type: column.Text}, {Name: "n", Type: column.Integer}}
		var cols []*column.Builder
		for _, f := range schema {
			cols = append(cols, column.NewBuilder(f.Type, nil))
		}
		for row := range n {
			if rng.IntN(12) == 0 {
				cols[0].AppendNull()
			} else {
				cols[0].AppendInt(int64(rng.IntN(values)))
			}
			cols[1].AppendFloat(float64(rng.IntN(values)))
			cols[2].AppendText(fmt.Sprint("w", rng.IntN(values)))
			cols[3].AppendInt(int64(row))
		}
		table := &column.Table{Schema: schema, N: n}
		for _, b := range cols {
			table.Cols = append(table.Cols, b.Finish())
		}
		name := fmt.Sprint("t", i)
		if err := c.Put(catalog.Object{Kind: catalog.Table, Key: name, Name: name, Table: table}, false); err != nil {
			t.Fatal(err)
		}
	}
	return c
}

func bound(t *testing.T, c *catalog.Catalog, text string) plan.Node {
	q, err := lang.ParseQuery(text)
	if err != nil {
		t.Fatalf("%s: %v", text, err)
	}
	n, err := bind.Query(&bind.Env{Catalog: c, Source: &problem.Source{Name: "query", Text: text}, Notes: &note.Notes{}}, q)
	if err != nil {
		t.Fatalf("%s: %s", text, problem.Render(err))
	}
	return n
}

func collected(t *testing.T, n plan.Node, threads int) *column.Table {
	env := &exec.Env{Env: relation.Env{Notes: &note.Notes{}, Threads: threads}}
	out, err := exec.Collect(context.Background(), env, n)
	if err != nil {
		t.Fatal(problem.Render(err))
	}
	return out
}

// inWrittenOrder improves a plan without putting joins in order.
func inWrittenOrder(t *testing.T, n plan.Node) plan.Node {
	for _, r := range plan.Rules {
		if r.Name == "join order" {
			continue
		}
		var err error
		if n, err = r.Apply(n); err != nil {
			t.Fatal(err)
		}
	}
	return n
}

// Joins in another order give the rows that were asked for, in the order that was
// written, whatever ties the tables together and however they are written.
func TestJoinsInAnyOrder(t *testing.T) {
	changed := 0
	for seed := range uint64(150) {
		rng := rand.New(rand.NewPCG(11, seed))
		sizes := make([]int, 3+rng.IntN(2))
		for i := range sizes {
			sizes[i] = []int{20, 60, 150}[rng.IntN(3)]
		}
		c := tablesToJoin(t, rng, sizes, 40)
		text := randomJoin(rng, len(sizes))
		n := bound(t, c, text)
		better, err := plan.Optimise(n)
		if err != nil {
			t.Fatal(err)
		}
		if strings.Contains(plan.Format(better), "number the rows") || plan.Format(better) != plan.Format(inWrittenOrder(t, n)) {
			changed++
		}
		want := collected(t, inWrittenOrder(t, n), 2)
		for _, threads := range []int{1, 4} {
			if d := column.DiffTables(collected(t, better, threads), want); d != "" {
				t.Fatalf("seed %d: %s\n%s\n%s", seed, text, d, plan.Format(better))
			}
		}
	}
	if changed < 15 {
		t.Errorf("only %d joins were put in another order", changed)
	}
}

// randomJoin ties tables in a random tree, each to one before it in a random order,
// and asks for their rows or for groups of them.
func randomJoin(rng *rand.Rand, tables int) string {
	order := rng.Perm(tables)
	var conds []string
	for i := 1; i < tables; i++ {
		one, other := order[i], order[rng.IntN(i)]
		keys := [][2]string{{"a", "a"}, {"a", "b"}, {"b", "b"}, {"c", "c"}, {"n", "a"}}[rng.IntN(5)]
		conds = append(conds, fmt.Sprintf("t%d.%s = t%d.%s", one, keys[0], other, keys[1]))
	}
	if rng.IntN(3) == 0 {
		conds = append(conds, fmt.Sprintf("t%d.a < t%d.b", order[0], order[1]))
	}
	if rng.IntN(2) == 0 {
		conds = append(conds, fmt.Sprintf("t%d.n %% 3 = 1", order[rng.IntN(tables)]))
	}
	var from []string
	for i := range tables {
		from = append(from, fmt.Sprint("t", i))
	}
	items := "*"
	tail := ""
	switch rng.IntN(3) {
	case 0:
		items = "t0.c, COUNT(*), SUM(t1.b), MAX(t2.n)"
		tail = " GROUP BY t0.c"
	case 1:
		items = "t1.n, t0.n AS m, t2.c || t0.c AS w"
	}
	return "SELECT " + items + " FROM " + strings.Join(from, ", ") + " WHERE " + strings.Join(conds, " AND ") + tail
}

// Sixty-four tables behind commas, tied in a chain that is written in any order, are
// joined without pairing what nothing ties together.
func TestManyTables(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 64))
	sizes := make([]int, 64)
	for i := range sizes {
		sizes[i] = 10
	}
	c := tablesToJoin(t, rng, sizes, 10)
	var from, conds []string
	place := rng.Perm(64)
	for i := range 64 {
		from = append(from, fmt.Sprint("t", place[i]))
		if i > 0 {
			conds = append(conds, fmt.Sprintf("t%d.n = t%d.n", i-1, i))
		}
	}
	rng.Shuffle(len(conds), func(a, b int) { conds[a], conds[b] = conds[b], conds[a] })
	text := "SELECT t0.n, t63.c, t17.b FROM " + strings.Join(from, ", ") + " WHERE " + strings.Join(conds, " AND ")
	n, err := plan.Optimise(bound(t, c, text))
	if err != nil {
		t.Fatal(err)
	}
	if strings.Contains(plan.Format(n), "cross join") {
		t.Errorf("there is a cross join in\n%s", plan.Format(n))
	}
	out := collected(t, n, 2)
	if out.N != 10 || out.Cols[0].I[3] != 3 {
		t.Fatalf("%d rows, the fourth is of %v", out.N, out.Cols[0].I)
	}
}

// A large table on the right side is not the one that is kept in memory where the
// order of the rows does not matter.
func TestSmallSideIsKept(t *testing.T) {
	c := tablesToJoin(t, rand.New(rand.NewPCG(11, 2)), []int{50, 40_000}, 50)
	n, err := plan.Optimise(bound(t, c, "SELECT t0.n, COUNT(*) FROM t0 JOIN t1 ON t1.n = t0.n GROUP BY t0.n"))
	if err != nil {
		t.Fatal(err)
	}
	text := plan.Format(n)
	if strings.Index(text, "table t1") > strings.Index(text, "table t0") {
		t.Errorf("the larger table is not the left side:\n%s", text)
	}
	if out := collected(t, n, 2); out.N != 50 {
		t.Errorf("%d groups, want 50", out.N)
	}
}
