package exec

import (
	"errors"
	"fmt"
	"strings"

	"nearcell/engine/plan"
	"nearcell/engine/problem"
)

func (e *Env) tooMuch() string {
	if e.Memory < 1<<20 {
		return fmt.Sprintf(" more than %d KiB", e.Memory>>10)
	}
	return fmt.Sprintf(" more than %d MiB", e.Memory>>20)
}

// inBetween is what a limit of memory is said of until it is known better.
const inBetween = "the intermediate results"

// blame says of an error of memory what was too large. The step that is nearest to
// what was kept is asked first, and its word stands.
func blame(err error, n plan.Node) error {
	var p *problem.Problem
	if !errors.As(err, &p) || p.Code != "memory" || !strings.HasPrefix(p.Message, inBetween) {
		return err
	}
	what := ""
	switch n := n.(type) {
	case *plan.Aggregate:
		what = "the groups and what their aggregates keep"
		if len(n.Keys) == 0 {
			what = "the values that the aggregates keep"
		}
	case *plan.Sort:
		what = "the rows to be put in order"
	case *plan.Distinct:
		what = "the different rows"
	case *plan.Limit:
		what = "the rows up to the LIMIT"
	case *plan.Join:
		what = "the rows and keys of the right side of the join"
	case *plan.Window:
		what = "the rows of the windows"
	case *plan.Matched:
		what = "the rows to be compared"
	case *plan.Relation:
		what = "the rows that " + n.Bound.Title() + " works on, and what it holds of them,"
	default:
		return err
	}
	c := *p
	c.Message = what + strings.TrimPrefix(p.Message, inBetween)
	return &c
}
