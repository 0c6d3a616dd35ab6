package plan_test

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"nearcell/catalog/column"
	"nearcell/engine/exec"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/plan/plantest"
	"nearcell/engine/relation"
)

// result is the rows of a plan as texts in which every bit shows.
func result(n plan.Node) ([]string, error) {
	env := &exec.Env{Env: relation.Env{Notes: &note.Notes{}}}
	var rows []string
	err := exec.Run(context.Background(), env, n, func(b *column.Batch) error {
		for i := range b.N {
			s := ""
			for c := range b.Cols {
				v := b.Cols[c].Value(i)
				if v.Null {
					s += "NULL;"
					continue
				}
				s += fmt.Sprintf("%d %x %s %v;", v.I, math.Float64bits(v.F), v.S, v.P)
			}
			rows = append(rows, s)
		}
		return nil
	})
	return rows, err
}

// Law 1: no rule, and not all of them together, changes the rows of a plan,
// their order or their columns; a plan that runs without a rule runs with it.
func TestRulesKeepResults(t *testing.T) {
	rules := append([]plan.Rule{{Name: "all", Apply: plan.Optimise}, {Name: "all twice", Apply: twice}}, plan.Rules...)
	rapid.Check(t, func(t *rapid.T) {
		seed := rapid.Uint64().Draw(t, "seed")
		depth := rapid.IntRange(1, 6).Draw(t, "depth")
		for k := range uint64(20) {
			checkRules(t, rules, plantest.Plan(rand.New(rand.NewPCG(seed, k)), depth, 12))
		}
	})
}

func checkRules(t interface{ Fatalf(string, ...any) }, rules []plan.Rule, n plan.Node) {
	before := plan.Format(n)
	want, err := result(n)
	if err != nil || len(want) > 20000 {
		return // a rule may spare a failing row
	}
	for _, r := range rules {
		better, err := r.Apply(n)
		if err != nil {
			t.Fatalf("%s: %v", r.Name, err)
		}
		if after := plan.Format(n); after != before {
			t.Fatalf("%s changed the plan that it was given:\n%s", r.Name, cmp.Diff(before, after))
		}
		if d := cmp.Diff(names(n), names(better)); d != "" {
			t.Fatalf("%s: other columns: %s", r.Name, d)
		}
		got, err := result(better)
		if err != nil {
			t.Fatalf("%s: %v\n%s\n%s", r.Name, err, before, plan.Format(better))
		}
		if d := cmp.Diff(want, got); d != "" {
			t.Fatalf("%s: %s\n%s\n%s", r.Name, d, before, plan.Format(better))
		}
	}
}

// A join with a guarded key that was made into keys once more lost the first of them for
// batches in which a key fails.
func TestGuardedKeysTwice(t *testing.T) {
	rules := []plan.Rule{{Name: "all twice", Apply: twice}}
	for k := range uint64(20) {
		checkRules(t, rules, plantest.Plan(rand.New(rand.NewPCG(0xdc30208d04, k)), 1, 12))
	}
}

func twice(n plan.Node) (plan.Node, error) {
	n, err := plan.Optimise(n)
	if err != nil {
		return nil, err
	}
	return plan.Optimise(n)
}

func names(n plan.Node) []string {
	var list []string
	for _, f := range n.Schema() {
		list = append(list, f.Name+" "+f.Type.String())
	}
	return list
}
