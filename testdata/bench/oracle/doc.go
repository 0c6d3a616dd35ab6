// Package oracle holds the query language against another database: random
// queries, seeded, over the same small tables, and the same rows or a difference.
//
// # Model
//
// A query is written twice, once as this language has it and once as the other
// database (SQLite, in pure Go) must have it to mean the same. Tables have few
// values, so that NULLs, equal keys and repeated rows meet often; REALs are dyadic
// fractions, so that sums are exact in any order. Rows are compared as a multiset,
// or as a list where ORDER BY leaves no choice.
//
// Gen writes three kinds of queries: of everything nested in everything (Random), with
// windows (Windowed), and in the shapes of collections of test questions, with chains of
// signs, NOT in front of everything and NULL wherever a value may stand (Corpus). Chains
// of up to sixty-four tables behind commas must come out in their one row. Questions are
// not random: more than a thousand, written from the rules of the standard one by one.
//
// Each query runs with and without the rules of the planner, and with 1, 2 and 4
// threads, whose results must have the same bytes.
//
// # Known differences, written around
//
//   - / gives a REAL here and an INTEGER of INTEGERs there; x / 0 and x % 0 are
//     errors here and NULL there: divisors stand in NULLIF(…, 0).
//   - NULLs sort last here and first there: NULLS FIRST or LAST is always written.
//   - INTERSECT binds tighter than UNION here, as in the standard; there all set
//     operations bind alike: what binds tighter is put into FROM. INTERSECT ALL and
//     EXCEPT ALL are unknown there: rows are numbered among their equals instead.
//   - A scalar query with several rows is an error here and its first row there:
//     such queries are aggregates, or end with ORDER BY … LIMIT 1 over all columns.
//   - EXISTS (… OFFSET n) forgets the OFFSET there: EXISTS has none.
//   - HAVING without GROUP BY and without an aggregate in SELECT is refused there:
//     the query is passed over.
//   - LIKE tells upper from lower case here; there a setting makes it so.
//   - BOOLEAN is a type here and a number there: TRUE is compared as 1.
//   - ON behind a comma knows nothing of what stands before the comma here, as in the
//     standard; there it does.
//   - The functions of a row's place take no frame here, as in the standard, and
//     RANK, LAG and their like need an order.
//   - ALL, ANY and SOME of a query are unknown there: rows for which the comparison holds,
//     and is unknown, are counted instead.
//   - Types are fixed here; there values have types. Columns of one type only are
//     compared, joined and united.
//
// # Limitations
//
// Time stamps, intervals, points, units and weights are unknown there, and so is
// everything geometric.
package oracle
