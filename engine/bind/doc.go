// Package bind gives names, types and units: it turns the syntax tree of a query
// into a plan, of an expression into a typed one, and of a solid into the solid.
//
// # Model
//
// A scope lists the columns that names may mean, source by source, in the order
// of the plan's rows; an expression's columns are indices into it. Sources nest:
// a view's text is parsed and bound anew at each use with a text (problem.Source)
// of its own, so that an error inside it points into the view; a name of WITH is
// bound once, and where it is used more than once the plan has it as a common part.
//
// A SELECT becomes
//
//	FROM -> filter WHERE -> [aggregate -> filter HAVING] -> [windows] -> project -> [distinct] -> [sort] -> [limit]
//
// with hidden columns behind the shown ones where ORDER BY needs them. Where
// rows are groups, an expression that equals a key or is an aggregate becomes a
// column of the aggregation; any other column is an error with a way out.
//
// Functions with OVER of one partition and order are computed together. Where rows
// are groups, what stands in OVER and in its function's brackets speaks of the groups.
//
// A relation becomes a node with a relation.Bound. The solid, the tolerance and
// the other clauses of CREATE CAMPAIGN hold only where OF names the campaign
// itself; a query or a view has no solid unless WITHIN names one.
//
// A query inside an expression is bound with the scope outside at hand (outside):
// what means nothing among its own sources is looked up there, level by level, and
// becomes an expr.Outer with the expression over the rows outside beside it. An
// aggregate all of whose columns are outside belongs to the groups outside.
//
// RIGHT JOIN is LEFT JOIN with the sides exchanged, so that its rows come in the
// order of the right side. FULL JOIN gives the rows of LEFT JOIN, then the right
// rows without a partner. Columns of USING come first and stand once.
//
// # Names
//
// A bare name means a column, source or object in any case, a quoted one exactly
// as written. Of columns of one source that differ only in case, the one spelt
// as written is meant. ORDER BY knows the names of the output first, GROUP BY the
// columns of FROM first; HAVING and expressions in ORDER BY know the aliases of
// SELECT where no column of the name can be meant. WHERE knows none.
//
// # Errors
//
// Each is a problem.Problem: a stable code, the place in the text it stands in,
// the thing by its name, and the nearest name or another way out. What the
// language has and the engine lacks is refused by name, never misread.
//
// # Exact and rounded
//
// Whole numbers that do not fit 64 bits and intervals finer than a microsecond
// are refused rather than rounded. Coordinates of solids are written back with
// as many digits as read back to the same bits.
//
// # Limitations
//
// Not there yet: MESH, BOXES, TERRAIN, PLUS and MINUS. A name of WITH whose
// query depends on a row outside cannot be used in a query further inside. Queries
// stand in no LIMIT and in no clause of a relation, where a value is needed before
// any query runs; LET computes one for them.
package bind
