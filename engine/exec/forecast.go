package exec

import (
	"context"

	"nearcell/engine/plan"
	"nearcell/engine/relation"
)

// Forecast computes the sites of a relation, and of the relation only what it
// knows of its rows and its work beforehand. Errors are those that running it
// would give.
func Forecast(ctx context.Context, env *Env, n *plan.Relation) (*relation.Forecast, error) {
	r := start(ctx, env)
	o, err := r.openSites(ctx, n)
	if err != nil {
		return nil, err
	}
	f, err := relation.ForecastOf(ctx, n.Bound, o.rows, n.Need)
	return f, placed(err, n)
}
