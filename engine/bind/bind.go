package bind

import (
	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
	"nearcell/voronoi/solid"
)

// Env is what the names of one statement may mean. It is not changed by
// binding; one statement binds in one goroutine.
type Env struct {
	Catalog *catalog.Catalog
	Source  *problem.Source         // the text that the statement stands in
	Params  map[string]column.Value // values of LET and --let under lang.Fold(name)
	Folder  string                  // relative paths of files start here
	Notes   *note.Notes             // what binding has to say; nil: nowhere
	Solids  *SolidCache             // solids made before; nil: each is made anew
	// Verdicts are what the requirements of the session came to so far, and
	// VerdictWarnings what was to be said with them; nil: none.
	Verdicts        func() *column.Table
	VerdictWarnings func() []string
	// Shapes takes the polyhedra of cells for files of them: relations of cells then
	// have relation.ShapeColumn; nil: none have.
	Shapes *relation.Shapes
}

// Query binds a query to a plan. The plan is the query as written: no rule has
// touched it, every relation needs all its columns.
func Query(env *Env, q *lang.Query) (plan.Node, error) {
	n, err := newBinder(env).query(q)
	if err != nil {
		return nil, err
	}
	return plan.Inline(n), nil
}

// Expression binds an expression without columns: the value of LET, of SET, of
// a clause.
func Expression(env *Env, e lang.Expr) (expr.Expr, error) {
	return newBinder(env).constant(e)
}

// Value computes an expression without columns.
func Value(env *Env, e lang.Expr) (column.Value, error) {
	return newBinder(env).value(e)
}

// OverSchema binds an expression over the columns of a file: POSITION (x, y,
// -depth). what names the file for messages: "hall.csv".
func OverSchema(env *Env, e lang.Expr, schema column.Schema, what string) (expr.Expr, error) {
	return newBinder(env).overSchema(e, schema, what)
}

// Solid makes the solid that an expression describes.
func Solid(env *Env, s lang.Solid) (solid.Solid, error) {
	return newBinder(env).solid(s)
}

// KeptSolid is a solid and what the catalog keeps of it.
type KeptSolid struct {
	Body    solid.Solid
	Text    lang.Solid           // values in place of parameters, rings in place of files, the solids themselves in place of their names
	Table   *column.Table        // what MESH, BOXES and TERRAIN were made of; nil: nothing of the kind
	Sources []catalog.SourceFile // the files they were read from
}

// Keep makes the solid that an expression describes, and what is to be kept so that it can
// be made again without the files and names that it was made of.
func Keep(env *Env, s lang.Solid) (*KeptSolid, error) {
	b := newBinder(env)
	own, err := b.canonical(s)
	if err != nil {
		return nil, err
	}
	return b.kept(own, s)
}

// kept makes the solid of an expression that stands on its own, s as it was written.
func (b *binder) kept(own, s lang.Solid) (*KeptSolid, error) {
	body, err := b.make(own, s)
	if err != nil {
		return nil, err
	}
	k := &KeptSolid{Body: body, Text: own}
	k.Table, k.Sources = b.keep(own)
	return k, nil
}
