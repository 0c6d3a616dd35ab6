// Package exec runs plans: pipelines of a source, steps and a sink over numbered
// chunks of rows.
//
// # Model
//
// A source gives chunks of 64 Ki rows in batches of 2,048; a step turns a batch
// into batches; a sink takes all rows and becomes the source of the next
// pipeline. Scans and results of sinks are tables in memory (or mapped), whose
// batches are views. A relation is a stream: its chunks are numbered by the rows
// that it gives, as they come.
//
// Filters never copy. They hand on the same columns under a mask (Batch.On),
// which every expression respects: only active rows are computed and only they
// can fail. Rows are moved where they are kept, in the sinks, where a join
// multiplies them, and before they leave Run, whose batches have no mask.
//
// A sink gives each chunk a part of its own. Env.Threads workers (0: one a core)
// take the chunks of a table one after another and wait for their turn to merge a
// full part, so that parts are merged in the order of their numbers; nothing else
// passes between chunks, and the number of workers changes no bit. Streams, LIMIT
// and what Run hands out are the work of one. With other sizes of chunks sums of
// REAL values may differ in their last bit, everything else is the same.
//
// Whoever loops over many rows without handing any on (merges, sorts, tables of keys,
// final aggregates, windows) asks every cancelRows of them whether to go on: a query that
// is cancelled ends within a tenth of a second.
//
// A worker owns the scratch memory of its expressions. It is given back when a
// source begins its next batch; a join, which makes several batches of one, has
// its own level of it for what comes after.
//
// # What nodes do
//
// Filter and Project are steps, Join is a step over its left side with the right
// side in memory, Aggregate, Sort, Window, Limit and Distinct are sinks, Relation
// collects its sites and is a source. Limit stops what feeds it as soon as it has
// its rows.
//
//   - Keys of groups, joins and Distinct are words: -0 is 0, texts are compared by
//     text whatever dictionary they come with, NULLs are one group and match no
//     partner. Groups come out in the order of their keys, NULL last; without keys
//     there is one group, of no rows too.
//   - Joins give rows in the order of the left rows, for each of them in that of
//     the right rows. INTEGER and REAL keys are compared exactly.
//     Keys that can fail are guarded: where one fails, its batch, or the whole right side,
//     is joined pair by pair.
//   - Sorts are stable. Texts are ordered by their bytes, which for UTF-8 is the
//     order of code points; FALSE before TRUE; points by x, y, z; Infinity last.
//   - Distinct keeps the first of equal rows.
//   - A Window keeps the rows in their order. It parts them by hash, sorts each partition
//     by itself and shares the partitions out among the workers; one that holds all rows is
//     the work of one. Frames only move forwards, and a row enters each state twice at most:
//     the time does not depend on their length (function.Slider). Offsets of RANGE are added
//     to keys as decimal numbers, so that 0.8 is within 0.1 of 0.7.
//
// # Queries in expressions
//
// A worker's expressions ask for the answers of queries (Worker, asker). One that
// depends on nothing is computed once; the answers of others are kept by the values
// outside that they depend on, up to 64 MiB, and then forgotten. Workers take turns
// at the answers of one query. Of notes of a query computed for many rows only
// warnings are told, three of them. What queries do is counted to the step around.
//
// # Nearest-site search
//
// A k-d tree gives a sort by distance what can be among its first rows. A tree costs as
// much as some scans: of more than 4,096 rows the first search is one, and the tree is
// built for the second. The trees of stored tables are kept from one statement to the next
// (Places, four of them), others until the end of the run. Where a point is not finite, or
// memory does not reach, it is a scan, too.
//
// # Errors and notes
//
// An error of a row becomes a problem at the expression's place that names the
// row: by its column id where the batch has one, else by its number in the table
// or relation that it comes from, counted from 1 (behind a join it has none). Of
// several rows at fault the first chunk's is told, however many workers there are.
//
// Aggregates say what weighted answers rest on (Kish's effective sample size
// n_eff = (Σw)² / Σw², the largest weight, the weight without a value), and warn
// of cells that a WHERE took out of sums and weights and of sums that count a cell
// twice. Each of these is said only where it happened.
//
// # Measuring
//
// With Env.Measured each step of a plan is put into a meter that counts its rows,
// its own time and what it keeps; without it there is none. A worker's clock turns
// to the step that has the batch, twice for each step and batch. The time of several
// workers is added up, that of a relation is by the clock. A step whose expressions
// ask a query counts the time of the query as well. Steps of a query that depends on
// the row outside are not counted. Forecast is what a relation knows of its rows
// and work before it runs: it computes the sites, not the relation.
//
// # Degenerate inputs
//
// Tables without rows or without columns, batches of which nothing is active,
// columns of type NULL (also for columns that a relation was not asked for) and
// dictionaries without texts are normal input.
//
// # Limitations
//
// Sums of measures with OVER do not warn of cells that FOR EACH or a join repeats. One
// partition is the work of one worker.
//
// Intermediate results are kept in memory and refused beyond Env.Memory, which
// counts the rows, keys and groups of all sinks of a statement until its end, and of
// relations an estimate of what they hold of each row of their input (Bound.Holds), and
// the values that MEDIAN and DISTINCT keep. A result has at most 2³¹ − 1 rows. The right side of a join without
// equalities is walked for every left row.
package exec
