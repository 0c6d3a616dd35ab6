package engine

import (
	"context"

	"nearcell/engine/problem"
	"nearcell/lang"
)

// dispatch runs a statement by its kind; each kind has a file of its own.
func (s *Session) dispatch(ctx context.Context, st *statement, tree lang.Statement) error {
	switch t := tree.(type) {
	case *lang.QueryStatement:
		return s.query(ctx, st, t)
	case *lang.CreateData:
		return s.createData(ctx, st, t)
	case *lang.CreateSolid:
		return s.createSolid(st, t)
	case *lang.CreateFrame:
		return s.createFrame(ctx, st, t)
	case *lang.CreateView:
		return s.createView(st, t)
	case *lang.Drop:
		if t.Kind == lang.Diagrams {
			return s.dropDiagrams(ctx)
		}
		return s.drop(st, t)
	case *lang.Let:
		return s.let(ctx, st, t)
	case *lang.Save:
		return s.save(ctx, st, t)
	case *lang.List:
		return s.list(st, t)
	case *lang.Describe:
		if t.File != nil {
			return s.describeFile(ctx, st, t)
		}
		return s.describe(st, t)
	case *lang.Require:
		return s.require(ctx, st, t)
	case *lang.Explain:
		return s.explain(ctx, st, t)
	case *lang.Draw:
		return s.drawing(ctx, st, t)
	case *lang.Run:
		return s.runFile(ctx, st, t)
	case *lang.Set:
		return s.set(ctx, st, t)
	case *lang.Help:
		return s.help(st, t)
	case *lang.Remark:
		return s.remark(st, t)
	case *lang.Quit:
		return errQuit
	}
	return problem.NotThereYet(st.at(tree), "this statement")
}
