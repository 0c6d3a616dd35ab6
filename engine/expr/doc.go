// Package expr holds typed expressions and computes them, a batch of rows at a
// time, for the active rows only.
//
// # Model
//
// An expression is a tree of immutable nodes. The constructors (NewArith,
// NewCompare, NewCase …) check types and units, bring the two sides of an
// operator to one type, and return a *problem.Problem at the place of the part
// that is wrong, with both types and a way out. Nodes are exported with their
// parts for the rules of the planner to look at; only Column, Literal and Outer are
// leaves.
//
// Eval gives a vector for the whole batch. Kernels run over all rows at full
// speed and look at single rows only where a batch contains something
// suspicious; a row that is off or NULL never raises an error. AND, OR, CASE,
// COALESCE, BETWEEN and IN pass on only the rows that they leave undecided. A
// comparison of a text with a constant, LIKE and CAST from TEXT are computed
// once for each text of the dictionary.
//
// # Laws
//
//  1. For the rows of the mask a batch gives what the definitions give row by
//     row; it fails exactly if one of them does, and names such a row.
//  2. A mask or a batch may be cut into parts: the parts give what the whole
//     gives.
//  3. Logic is three-valued (ISO/IEC 9075-2): NULL is unknown, a filter keeps
//     what is TRUE, x NOT IN (…, NULL) is never TRUE.
//  4. The Bits of a BOOLEAN result are 0 where it is NULL. No REAL result is NaN
//     or a negative zero.
//  5. Fold, Remap and Shift change nothing that is computed; where a constant
//     part fails, it is left for the rows that reach it.
//
// # Types and values
//
// INTEGER with INTEGER stays INTEGER for + - * %, and leaving 64 bits is an
// error. / and ^ always give REAL; x / 0 is an error also for REAL. A REAL that
// would be NaN, or infinite from finite operands, is an error; Infinity that
// comes in (the volume of an unbounded cell) stays Infinity. % has the sign of
// its left side. INTEGER and REAL are compared exactly, also beyond 2^53; texts
// by code points, with upper and lower case and blanks at the end told apart.
// Time stamps stay within the years 1 to 9999; intervals times and by numbers go
// to the nearest microsecond. CAST(x AS INTEGER) rounds halves away from zero.
//
// # Units
//
// Units are labels. Where values are added, compared or put side by side, known
// units must be equal; a bare constant takes the unit of the other side, and
// anything else without a unit leaves the result without one. * and / multiply
// units, ^ by a constant integer raises them and any other power drops them.
// CAST drops the unit: that is the way to put different ones together.
//
// # Queries
//
// A query inside an expression (Subquery) is a leaf whose plan is a secret of
// whoever runs it (Work.Asker). The values of the row at hand on which it depends
// are its children; inside its plan they are read by Outer.
//
// # Limitations
//
// LIKE and comparison know no collation. A column of TEXT that is joined with
// another (||), or that CASE takes from several dictionaries, gets a dictionary
// of its own for each batch.
package expr
