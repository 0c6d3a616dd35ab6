package relation

import (
	"slices"

	"nearcell/lang"
)

// Clause is the registry line of a clause of relations: what HELP tells of it.
// Which relation takes it stands in the Definition of that relation.
type Clause struct {
	Name    string // as in Definition.Clauses: "FOR EACH"
	Syntax  string
	Meaning string
	Example string // a query, over a campaign hall, a solid air, a table log and a view readings
}

// clauses is the registry, in the order in which HELP lists it.
var clauses = []Clause{
	{"WITHIN", "WITHIN solid | WITHIN (solid, solid)",
		"The cells end at the walls of the solid. Sites farther outside than the campaign's TOLERANCE are left out of the partition and named in a note. " +
			"It goes before the solid of the campaign. Several solids in brackets are zones: each is divided among its own sites only.",
		"SELECT SUM(volume) FROM CELLS OF readings FOR EACH t WITHIN air;"},
	{"UNCLIPPED", "UNCLIPPED",
		"The open diagram, although the campaign has a solid. Cells at the rim then run to infinity, and their volume is Infinity.",
		"SELECT id, volume FROM CELLS OF hall UNCLIPPED WHERE bounded;"},
	{"FOR EACH", "FOR EACH column | FOR EACH (column, column)",
		"Makes one partition for each value, such as an instant or a pass; the rows carry the value. The space of a site that is missing in one of them goes to its neighbours there.",
		"SELECT t, AVG(temp) WEIGHTED BY volume AS mean\nFROM CELLS OF readings FOR EACH t WITHIN air GROUP BY t ORDER BY t;"},
	{"OMITTING", "OMITTING ('id', 'id') BECAUSE 'reason'",
		"Leaves sites out before the partition, so that their space goes to their neighbours; a note tells of it with the reason. WHERE only chooses the rows that are shown and never changes which sites partition.",
		"SELECT AVG(temp) WEIGHTED BY volume\nFROM CELLS OF hall OMITTING ('L08') BECAUSE 'hangs in the sun';"},
	{"MEASURED IN", "MEASURED IN solid | MEASURED IN (solid, solid)",
		"All sites partition the solid; volumes, areas, contacts and gaps count inside each of these parts only, with a row for each in the column part: the share of the racks over 8 °C. " +
			"A cell that does not reach into a part has no row in it; what of a part lies outside the solid does not count. The surface of a part is no wall.",
		"CREATE SOLID racks AS BOX (2,2,0) TO (12,10,4);\nSELECT SUM(volume) AS stored, SHARE(temp > 8) WEIGHTED BY volume AS too_warm\nFROM CELLS OF hall MEASURED IN racks;"},
	{"STRETCHED", "STRETCHED (sx, sy, sz)",
		"Distances are measured in a stretched space: with (1, 1, 5) a metre up counts as five. All results are in true units.",
		"SELECT id, volume FROM CELLS OF hall STRETCHED (1, 1, 5);"},
	{"UNCERTAINTY", "UNCERTAINTY column | UNCERTAINTY (reading value EACH, (column) COMMON)",
		"The instruments' part of the uncertainty of a weighted mean, told in a note: EACH is every instrument's own error, COMMON one that all of them share. " +
			"Each is a number, or the name of a column in parentheses, with the standard uncertainty of each site in the unit of the reading (K goes with °C): independent errors u make √Σw²u² / Σw, shared ones Σwu / Σw. " +
			"A NULL among them leaves the note untold, a negative one is refused. It says nothing of how well they stand for the space between them. EXTREMES takes the column of each row's standard uncertainty, too.",
		"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF hall UNCERTAINTY (temp 0.1 EACH, 0.2 COMMON);\nSELECT AVG(temp) WEIGHTED BY volume\nFROM CELLS OF (SELECT *, 0.01 * temp AS u FROM hall) WITHIN air UNCERTAINTY (temp (u) EACH);"},
	{"METHOD", "METHOD SIBSON | LAPLACE | LINEAR | NEAREST | IDW(power) | HOLD | MEAN | MAX | MIN",
		"How values between the sites are estimated. SIBSON (the rule) weighs each site by what the cell of the place would take from it, LAPLACE by the areas of that cell's faces over the distances, " +
			"LINEAR by the place in its Delaunay tetrahedron; NEAREST takes the nearest site, IDW the twelve nearest by an inverse power of the distance. In a solid SIBSON and LAPLACE use cells that end at its walls, " +
			"as if nothing passed through them: they are defined everywhere in it, and a field that rises evenly is flattened near a wall. Without one they reproduce even rises and are NULL outside the convex hull of the sites, as LINEAR always is. " +
			"Of SERIES, how a row comes of the readings: on the straight line between two of them at its stamp (LINEAR, the rule), the last one before it (HOLD), " +
			"the mean by time of its span (MEAN; at least half of the span must lie between readings), or the largest or smallest reading in its span (MAX, MIN). Texts and truth values are held.",
		"SELECT * FROM RESIDUALS OF hall FOR temp METHOD SIBSON;"},
	{"FOR", "FOR column",
		"The reading that the relation is about. Sites without a value of it take no part: their space goes to those that have one.",
		"SELECT * FROM RESIDUALS OF hall FOR temp;"},
	{"AT", "AT points | AT (query) | AT z = value",
		"Where to estimate, or where to cut. Points are rows with the columns x, y, z, of a table, a campaign, a query, GRID or TRANSECT; their other columns are carried along, under own_… where an attribute has the name.",
		"SELECT * FROM SECTION OF hall AT z = 1.1;"},
	{"THROUGH", "THROUGH (x, y, z) NORMAL (nx, ny, nz)",
		"Cuts along any plane: a point of it and what stands upright on it. The side that NORMAL points to is above: where the plane lies in a face between two cells, it cuts the one above.",
		"SELECT * FROM SECTION OF hall THROUGH (0, 0, 1) NORMAL (0, 1, 1);"},
	{"ABOVE", "ABOVE value", "The limit that is exceeded. A reading that equals it is not above it.",
		"SELECT * FROM EXCEEDANCE OF hall FOR temp ABOVE 8;"},
	{"BELOW", "BELOW value", "The limit that is fallen short of.",
		"SELECT * FROM EPISODES OF log BY logger ON t FOR temp BELOW 2;"},
	{"THRESHOLDS", "THRESHOLDS (value, value)", "Several limits, with a row for each.",
		"SELECT * FROM EXCEEDANCE OF hall FOR temp THRESHOLDS (7, 8, 9);"},
	{"NUMBER", "NUMBER count", "How many are proposed or chosen.",
		"SELECT logger, temp, side, rank, tied FROM EXTREMES OF log FOR temp NUMBER 5;"},
	{"CLEARANCE", "CLEARANCE distance", "How far proposed sites keep from the walls, at least. The place is then found to within 0.01 % of its radius.",
		"SELECT * FROM PLACEMENTS OF hall NUMBER 5 CLEARANCE 0.3;"},
	{"AMONG", "AMONG points | AMONG (query)", "The places that may be proposed, each once; those outside the solid, or nearer to a wall than CLEARANCE, are not.",
		"SELECT * FROM PLACEMENTS OF hall NUMBER 5 AMONG (SELECT x, y, z FROM hall);"},
	{"DISTANCES", "DISTANCES (value, value)", "For each distance, the share of the space that is farther from every site: of SPACING the columns beyond_1, beyond_2 …, of CELLS a note beside what is weighted by volume. The shares are exact.",
		"SELECT * FROM SPACING OF hall DISTANCES (2.5, 5);"},
	{"ACROSS", "ACROSS length UP length", "For DISTANCES where a metre up is not a metre across: with ACROSS 5 UP 2, five metres across count as two up. A place is within the distance 5 of a site if it lies in the ellipsoid about it that reaches 5 across and 2 up. SPACING without DISTANCES takes that of ACROSS.",
		"SELECT * FROM SPACING OF hall ACROSS 5 UP 2;"},
	{"AGAINST", "AGAINST campaign | AGAINST (query)", "The other campaign, whose attributes carry the prefix other_.",
		"SELECT * FROM OVERLAY OF hall AGAINST hall;"},
	{"STEP", "STEP length", "The distance from one point to the next. The points of GRID are the middles of cubes with this edge, counted from the lowest corner of the solid's bounding box, as far as they lie in the solid.",
		"SELECT * FROM GRID OF air STEP 0.5;"},
	{"WEIGHTS", "WEIGHTS AREA | CONTACT | CONDUCTANCE", "How strongly cells that touch count as neighbours: all alike (CONTACT), by the area of their face, or by the area over the distance.",
		"SELECT * FROM AUTOCORRELATION OF hall FOR temp WEIGHTS AREA;"},
	{"BY", "BY column ON time | BY (column, column) ON time | BY MEAN | BY HIGHEST | BY COURSE",
		"What tells the loggers apart, with ON the time of the readings; or what the chosen sites are to stand for.",
		"SELECT * FROM AUDIT OF log BY logger ON t;"},
	{"EVERY", "EVERY interval [FROM time TO time]",
		"The step of the common instants of a series, or of the readings that were to be expected. They begin at FROM and end before TO: seven days of 15 minutes are 672. Without FROM, " +
			"a series has the multiples of the step (counted from 1970-01-01 00:00 UTC) from the first reading to the last of all loggers.",
		"SELECT * FROM SERIES OF log BY logger ON t EVERY INTERVAL '15' MINUTE;"},
	{"STAMP", "STAMP AT START | INSTANT | END",
		"Where in the time that a row stands for its stamp is: at its start (the rule for MEAN, MAX and MIN), at its end, or in its middle. LINEAR and HOLD give the value at the stamp itself. " +
			"Of a log whose own stamps are the ends of its intervals, take the interval off in OF (SELECT t - INTERVAL '15' MINUTE AS t, …).",
		"SELECT * FROM SERIES OF log BY logger ON t EVERY INTERVAL '1' HOUR METHOD MEAN STAMP AT START;"},
	{"LONGEST GAP", "LONGEST GAP interval",
		"Across a longer gap between two readings nothing is filled in; one of just this length is filled. Without it the longest gap is twice the usual step (the median) of the logger. " +
			"Behind the last reading, METHOD HOLD holds it for that long, or for one EVERY where LONGEST GAP is not given.",
		"SELECT * FROM SERIES OF log BY logger ON t\n  EVERY INTERVAL '15' MINUTE LONGEST GAP INTERVAL '1' HOUR;"},
	{"BRIDGING", "BRIDGING interval", "A return of up to this length does not end an excursion. What lies in it is in the duration, and not in the excess.",
		"SELECT * FROM EPISODES OF log BY logger ON t FOR temp ABOVE 8 BRIDGING INTERVAL '30' MINUTE;"},
	{"UNTIL", "UNTIL BELOW value | UNTIL ABOVE value",
		"The excursion ends only where the reading has fallen below this limit (of one below a limit: risen above it), so that a reading that wavers about the limit makes one excursion and not many.",
		"SELECT * FROM EPISODES OF log BY logger ON t FOR temp ABOVE 8 UNTIL BELOW 7.5;"},
	{"EXPECTING", "EXPECTING name | EXPECTING (query)",
		"The loggers that were to report, so that one without any reading has a row, too. The column with the name of the BY column counts; where there is but one column, that one.",
		"SELECT * FROM AUDIT OF log BY logger ON t EXPECTING (SELECT id FROM hall);"},
	{"KEEP", "KEEP ('id', 'id')", "Sites that are chosen in any case.",
		"SELECT * FROM REPRESENTATIVES OF readings FOR EACH t FOR temp NUMBER 2 KEEP ('L02') BY MEAN;"},
}

// AllClauses are the clauses of the language, those too that no relation takes yet.
func AllClauses() []Clause { return slices.Clone(clauses) }

// LookupClause finds a clause by its name, in any case.
func LookupClause(name string) (Clause, bool) {
	for _, c := range clauses {
		if lang.Fold(c.Name) == lang.Fold(name) {
			return c, true
		}
	}
	return Clause{}, false
}

// Taking are the relations that take a clause.
func Taking(clause string) []string {
	var nouns []string
	for _, d := range definitions {
		if slices.Contains(d.Clauses, clause) {
			nouns = append(nouns, d.Noun)
		}
	}
	return nouns
}

// PlannedRow is what a row of a relation that is not there yet is, "" for others.
func PlannedRow(noun string) string { return planned[noun] }
