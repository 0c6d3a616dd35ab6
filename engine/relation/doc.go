// Package relation has one file for each geometric relation: its columns, its
// clauses, its cost and its rows; and the one idea behind FOR EACH, zones and
// duplicates: rows of the input that share one diagram.
//
// # Model
//
// The registry (Lookup, All) holds a Definition for each relation; DESCRIBE,
// HELP and completion read the same lines. Binding fills a Bound: which columns
// of the input are identifier and position, which clauses hold, which columns
// the rows have. Open arranges the rows of the input into parts, one for each
// value of FOR EACH. Run asks the store for the diagram of each part, measures
// the cells that are shown, and emits rows in batches.
//
//	input rows -> admit -> parts -> duplicates -> diagrams -> cells -> batches
//
// A part's sites stand in the order of their identifiers: INTEGER by value,
// TEXT by code points. Rows come out in the order of the values of FOR EACH,
// then of the identifiers. So neither the order of the input nor the number of
// threads changes a bit of the answer.
//
// A Request says which columns are needed and which rows are shown; it never
// says which sites partition. Rows that are not shown cost nothing.
//
// GAPS has a row for each place, not for each site: its rows come largest first, and
// which of them have a certain nearest site is known only when all are.
//
// TETRAHEDRA, TRIANGLES, VERTICES and HULL are rows of one tetrahedralisation
// (simplices.go), which the diagram keeps. Corners ascend within a row, and rows in the
// order of their corners: a tetrahedron and its vertex, a triangle and its edge of a
// cell are found by equal corners. Sites in one place are one corner, named by the
// first. A condition on a says which rows are made.
//
// # Zones
//
// WITHIN (a, b) makes zones (zones.go): the rows of one value of FOR EACH fall into one
// part for each zone, each with a solid of its own, so that nothing reaches through a
// wall. A site belongs to the zone that it lies strictly in; else to the first, in the
// order of WITHIN, on whose surface it lies exactly; else to the nearest within the
// tolerance. Sites that more than one zone could have are told, zones without a site
// too. A relation takes zones by setting Definition.Zoned and by keeping to four rules:
//
//   - a diagram comes from sites.open, or is made with sites.options(part);
//   - the solid is Part.Solid, never Clauses.Solid, and Bound.Closed tells whether there
//     is any;
//   - batches.now(part.Zone, noPart) stands before the rows of a part are put;
//   - computed columns are found by their place in Def.Computed, behind the own ones:
//     Layout puts the column zone behind all of them, and batches fill it.
//
// A relation without Zoned is refused in zones by name.
//
// # Stretched distances
//
// Clauses.Stretch goes with sites.options into the diagram. What it measures is in true
// units all the same. A relation that measures places itself takes Clauses.Stretch into
// account before it says STRETCHED in its Clauses; one that does not is refused of a
// campaign with stretched distances.
//
// # Measured in parts
//
// With MEASURED IN (measuredin.go) a row counts in one of the regions Clauses.Measured,
// which is solid.Divided or what the solid shares with a mesh (Clauses.Shared), and says so in the column part, which
// comes as zone does: batches.now(part.Zone, region). Which sites divide the space does
// not change. Diagram handles measure cells, contacts and gaps in regions.
//
// SERIES, AUDIT and EPISODES are relations over rows (Definition.Over), not over sites:
// a log has no position. BY tells its loggers apart and ON is their time; their rows are
// sorted by logger once (log.go), the mathematics is that of package series, and the
// loggers are computed on all cores and emitted in their order (lanes.go). A logger that
// is far ahead of the one being emitted waits, so that memory is bounded. What a
// relation reads of its input whatever is asked of it is told by Bound.Reads; a clause
// that names rows of its own (EXPECTING) has them in Bound.Beside.
//
// What such a relation holds counts against the limit of the statement: the order of the
// rows before it opens (Bound.Holds), the readings of a logger and the slabs that wait for
// their turn while that logger is worked on (Env.Keep, by Env.hold). The log itself is the
// caller's.
//
// Of the columns of a log, SERIES draws those out between two readings that were read at
// its stamps. Those of a campaign or a register joined to the log (LogClauses.Carried,
// found by plan.Registers) were not: one value for a logger holds for all of its instants,
// of several the last one does, up to the next reading.
//
// EXTREMES ranks any rows from both ends (extremes.go): values within 1e-9 are tied, ties
// share a rank and none of them is cut off by NUMBER. Its probabilities are shares of
// 100,000 draws with a fixed seed over the rows in the order of their values; rows alike
// share what they win, so that neither threads nor the order of the input matter.
//
// REPRESENTATIVES has the readings of all instants in one table (representatives.go). It
// grows a set greedily on the first half of the instants and exchanges members as long as
// that helps; the second half has no say in it and judges. With zones an instant is several
// parts, of one Group, and the mean of all is that of the zones together.
//
// # The space that rows speak for
//
// Relations whose rows divide a closed space know how (Divider): among how many
// partitions, and how much of their space no site was given, since a zone has no site or a
// part of MEASURED IN lies outside the solid. The ledger under weighted answers (package
// exec) takes what rows add up to from that: the rest was removed on the way.
//
// OVERLAY has a second campaign (Bound.Other), whose rows are those of Beside[0] and make
// parts of their own. Each part of the first is laid over those of the second with its
// value of FOR EACH, in whatever zones: what two solids do not share is in no row. Its rows
// come by a, then by b; where several rows share a place, each pair has its share.
//
// AUTOCORRELATION and CLUSTERS are about those sites that have a reading and touch another;
// the mathematics is that of package spatial.
//
// A new relation is one file and one registry line.
//
// # Laws
//
//  1. The volumes of the rows of a part add up to the volume of the solid,
//     duplicates or not (SPLIT shares the cell among them).
//  2. Contacts are symmetric: (a, b) and (b, a) have equal areas.
//  3. Any order of the input's rows gives the same batches.
//  4. Parts with equal places share one computation.
//  5. What is shown never changes what is computed for it.
//
// # Forecasts
//
// Before they run, rows can tell how many they will be and which cells have to be
// computed for them, in how many different diagrams. This builds the diagrams, up
// to 262,144 sites of them, but no cells, other than the few by which a diagram
// finds out what a cell costs (32 of each of four diagrams); a diagram that is
// looked at stays for the query. Of more sites a part is looked at, evenly spread.
//
// # Degenerate inputs
//
// An identifier that is NULL or stands twice in a part, a coordinate that is
// NULL or infinite are errors that name the site. Rows without a value of FOR
// EACH are left out with a note. Sites outside the solid by more than the
// tolerance are left out of the partition, have no row and are named in a note;
// if none is left, the space of the solid would be nobody's, and that is an
// error. Without a solid, cells may be unbounded: their volume, area and
// farthest are Infinity, their centroid NULL, with a note.
//
// FOR EACH over stamps of which half the partitions hold less than half of the
// sites is refused: such stamps were never common to the sites.
//
// Sites in one plane or on one line have no tetrahedra, which is noted.
//
// Rows of a log without a logger or a stamp are left out with a warning. Rows that
// repeat a stamp of their logger count as one reading, their mean (of texts the last by
// the alphabet), with a warning; an infinite reading is an error where something is
// computed with it. Columns that come from a campaign joined to the log and have one
// value for a logger are known in a gap, too.
//
// # Exact and rounded
//
// Which rows share a part, a place or a cell is decided exactly. Measures are
// those of package voronoi; shares of them are one more rounding.
//
// # Limitations
//
// UNCERTAINTY of CELLS takes numbers and columns, but nothing computed from columns, and
// by a column it is not told where DUPLICATES MEAN may have merged instruments. Contacts
// in parts are not remembered by the diagram, and OVERLAY counts in parts that are solid.Divided only. The whole input is held in memory.
package relation
