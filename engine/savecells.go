package engine

import (
	"context"
	"errors"
	"io"

	"nearcell/catalog/column"
	"nearcell/engine/exec"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/engine/vtu"
	"nearcell/lang"
)

// prepareCells prepares a query whose rows are cells, for a file of their polyhedra. It
// adds the column that leads from a row to its cell, as the last.
func (s *Session) prepareCells(st *statement, q *lang.Query) (plan.Node, *relation.Shapes, error) {
	node, err := s.prepare(st, q)
	if err != nil {
		return nil, nil, err
	}
	body, simple := q.Body.(*lang.Select)
	if simple = simple && len(body.From) == 1; simple { // a view or a query around CELLS does not hand its cells on
		_, simple = body.From[0].(*lang.RelationSource)
	}
	source := cellsBelow(node)
	if !simple || source == nil {
		return nil, nil, problem.New("not-cells", st.at(q), "the rows of this query are not the cells of one CELLS, so there are no polyhedra to go with them").
			WithHint("SELECT … FROM CELLS OF … [WHERE …] [ORDER BY …] [LIMIT …], without joins and groups")
	}
	if len(source.Bound.Clauses.Measured) > 0 {
		return nil, nil, problem.New("not-cells", st.at(q), "with MEASURED IN a row is a part of a cell, of which there are no polyhedra").
			WithHint("leave MEASURED IN out")
	}
	followed, selected := *q, *body
	name := lang.Name{At: body.At, Text: relation.ShapeColumn, Quoted: true}
	selected.Items = append(selected.Items[:len(selected.Items):len(selected.Items)], &lang.Item{At: body.At, Expr: &lang.Column{At: body.At, Name: name}})
	followed.Body = &selected
	shapes := &relation.Shapes{}
	env := s.bindEnv(st)
	env.Shapes = shapes
	if node, err = prepareIn(env, &followed); err != nil {
		return nil, nil, err
	}
	return node, shapes, nil
}

// cellsBelow is the CELLS whose rows the plan hands on, one for one; nil where there is
// none.
func cellsBelow(node plan.Node) *plan.Relation {
	for {
		switch n := node.(type) {
		case *plan.Project:
			node = n.Input
		case *plan.Filter:
			node = n.Input
		case *plan.Sort:
			node = n.Input
		case *plan.Limit:
			node = n.Input
		case *plan.Relation:
			if n.Bound.Def.Noun == "CELLS" {
				return n
			}
			return nil
		default:
			return nil
		}
	}
}

// writeCells runs the query and writes the file.
func (s *Session) writeCells(ctx context.Context, st *statement, node plan.Node, shapes *relation.Shapes, w io.Writer) (rows int64, err error) {
	schema := node.Schema()
	last := len(schema) - 1
	columns := make([]*column.Builder, len(schema))
	for i, f := range schema {
		columns[i] = column.NewBuilder(f.Type, f.Unit)
	}
	err = exec.Run(ctx, s.execEnv(st), node, func(b *column.Batch) error {
		for i := range columns {
			columns[i].AppendVector(&b.Cols[i], b.On)
		}
		return nil
	})
	if err != nil {
		return 0, err
	}
	cols := make([]column.Vector, len(columns))
	for i, b := range columns {
		cols[i] = b.Finish()
	}
	grid := &vtu.Grid{}
	for _, shape := range cols[last].I {
		grid.Cell(shapes.At(shape))
	}
	return grid.Rows(), grid.Write(w, schema[:last], cols[:last])
}

// cellsProblem words what a file of cells cannot hold; nil for other errors.
func cellsProblem(err error, at problem.Place, name string) error {
	var taken *vtu.TakenError
	var whole *vtu.WholeNumberError
	switch {
	case errors.As(err, &taken):
		return problem.New("column-twice", at, "'%s' has an array called '%s' already", name, taken.Name).
			WithHint("give the column another name with AS").Because(err)
	case errors.As(err, &whole):
		return problem.New("file-kind", at, "the column %s has NULLs and the number %d, which '%s' cannot hold beside them", whole.Column, whole.Value, name).
			WithHint("CAST(%s AS TEXT) is written as it is", whole.Column).Because(err)
	}
	return nil
}
