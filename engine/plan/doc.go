// Package plan holds the logical plan of a query, the rules that improve it and
// the lineage of its columns. A plan is plain data: it computes nothing.
//
// # Model
//
// A plan is a tree of nodes. Each node has a schema; its expressions refer by
// index to the columns of its input (for a Join: the left columns, then the
// right ones). Every node has one fixed order of rows: a Scan that of its table,
// a Filter, a Project, a Window and a Distinct that of their input, a Join that of the left
// rows and for each of them of the right ones, an Aggregate that of its keys with
// NULL last, a Relation that of its own rule, a Union that of its parts.
//
// Nodes are never changed once they are made. A rule gives a new tree and may
// share parts with the old one.
//
// # Rules
//
// Law 1: a rule never changes the rows of a plan, their order or the root's
// columns. Where the plan fails, the better plan may succeed, since it may spare
// a row an expression that would have failed for it; never the reverse. (Tested
// with random plans, with each rule alone and with all of them once and twice.)
//
// Fold computes constant parts. Safe: an expression without columns has the
// same value for every row, and one that fails is left for the row that reaches
// it.
//
// Push down splits conditions at AND and moves the parts towards the rows. Safe:
// only parts that cannot fail move, so that no row can fail that was taken out
// before; a filter keeps the order of what is left; through a Project go only
// conditions on columns that are handed through; a Sort, a Union and the inputs of
// an inner join may be filtered before as well as after; of a left join the left
// side takes what speaks of it alone from above, the right side takes from ON what
// speaks of it alone, and everything else stays where NULL-extended rows pass it.
// A Limit, a Distinct, an Aggregate and a Sort with a top count or merge rows:
// nothing moves through them. Through a Window go conditions on columns of its partition,
// which leave out whole partitions. Into a Relation a condition on the sites' own
// columns goes as Wanted, which says what is shown; it never goes below, since
// the sites that it leaves out still partition.
//
// Join order joins tables in another order where the one that is written costs more
// than twice as much by the estimates: what nothing ties together yet waits, and small
// sides are the ones kept in memory. Safe: conditions that can fail, or ask a query,
// keep the order; where it matters, the rows are numbered before and put back in the
// order that was written. It does not matter below groups, whose sums are added in
// double-double: in another order they are the same to all bits that this holds.
//
// Join keys turns equalities between the sides into hash keys. Safe: NULL equals
// nothing either way, and INTEGER meets REAL exactly either way. Keys that can fail are
// guarded, as they are computed for rows without a partner too: where one fails, pairs
// are looked at one by one, by the whole condition. An equality that can fail and so stays
// above the joins is a key of the one that its sides meet in all the same. Where the left
// side is known to have so few rows that all pairs are less work, there are no keys.
//
// Top tells a Sort how many rows a Limit above it takes. Safe: only projections
// stand between them, which give one row for each.
//
// Prune drops columns that nobody reads, down to Scan.Use, Relation.Need and
// the sites' columns that a partition does not rest on. Safe: rows are never
// dropped with them; a Distinct needs all columns of its input, an Aggregate all
// its keys, a Union the same columns of each part. A column named id stays beside
// expressions that may fail or weigh, so that messages can name the row.
//
// # Queries in expressions
//
// Merges makes an Interpolate of a query that is INTERPOLATE over rows which
// equalities tie to the row outside: they are sorted once, and every row finds its place
// in them. Safe: what the query computes for its rows cannot fail; where OUTSIDE FAIL has
// no value the step marks the row, and the expression fails where it is asked for.
//
// A Query is a plan of its own that reads the row outside by expr.Outer; it is
// optimised with the plan that it stands in. Unnest makes semi, anti and grouped
// left joins of those where that is plain. Safe: only where nothing in the query can
// fail, as a join computes it for rows that nobody asks for. Hoist makes common
// parts of what does not read the row outside, and finds by hash the rows that equal
// its values. The rest is computed once for each combination of the values outside.
//
// Nearest gives ORDER BY DISTANCE(point of the row, place) LIMIT k, and MIN(DISTANCE(…)), only
// the rows that can be among the first ones, by a k-d tree: of stored tables, and in queries
// that depend on the row outside of whatever does not read it. Near joins looks up by one
// which right rows DISTANCE(left point, right point) <= bound lets match, where the bound
// reads one side alone; of bounds of the right side's rows the largest counts. Safe: the sort, the aggregate and the condition stay, and see
// in the same order whatever can matter to them; distances by rounding equal are never told
// apart. A condition that fails for a near row is asked of all rows, so that the row at
// fault is the one that is told.
//
// Shared cells tells each use of CELLS which measures other uses of the same sites in the
// query ask for, so that each cell is built once. Safe: measures that nobody reads change
// no row, and no bit of another measure.
//
// A Common part (a name of WITH used twice, a side of FULL JOIN) is optimised once
// and computed once; Shared and Lookup are its uses. Conditions and columns stop at
// it. Inline takes those away that are used once.
//
// # Lineage
//
// Lineage follows columns back to the relation that computed them. On it rest
// what an aggregate may have to say: Removals (cells that a WHERE leaves out of
// weights and sums) and CellSums (sums of measures that may count a cell twice).
// Whether it happened is seen only when the plan runs.
//
// # Estimates
//
// An Estimator says how many rows the nodes of a plan will give, from what is
// known without running it: the rows of stored tables, how many different values
// their columns have (texts, and columns of up to 131,072 rows, are counted, longer
// ones sampled), NULLs, the range of time stamps. Conditions without such a count
// take a fixed share, parts of an AND are taken to be independent, and of two sides
// of a join the values of the one with fewer are taken to be among the other's.
// Estimates that are Exact are promises (tested with random plans). The work of a
// relation is told by whoever can look at its sites, as long as they come from few
// stored rows without another relation; else it is guessed from their estimate, as
// an upper bound, since nobody knows which partitions of FOR EACH are alike.
//
// # Limitations
//
// Statements of a script share diagrams and known measures; a measure that a later one asks
// for first is computed then.
//
// Lineage ends at common parts: what leaves out cells there is not noted. Of a join the right side is the one kept in memory. Conditions
// do not move through groups to their keys. A measure counts as lost or repeated
// only as far as its column is handed through unchanged. Behind a view without
// the site's identifier a repeated cell is only noticed where the numbers of rows
// and partitions leave no other way.
package plan
