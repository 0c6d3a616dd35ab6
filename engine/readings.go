package engine

// readingEntries are the clauses of CREATE CAMPAIGN and CREATE TABLE, which may
// stand in any order, each at most once. The examples of those that only say how
// a file is read name files of the setting.
func readingEntries() []entry { return append(siteReadings(), fileReadings()...) }

// siteReadings say what the sites are.
func siteReadings() []entry {
	return []entry{
		{
			name: "ID", syntax: []string{"ID column"},
			meaning: "The column that tells the sites apart. Its values must differ; they are read as id.",
			example: "CREATE CAMPAIGN again FROM 'hall.csv' ID id;",
		},
		{
			name: "POSITION", syntax: []string{"POSITION (x, y, z)"},
			meaning: "Where the sites are: columns or expressions. They are read as x, y, z.",
			example: "CREATE CAMPAIGN again FROM 'hall.csv' POSITION (x, y, z + 0.1);",
		},
		{
			name: "IN FRAME", syntax: []string{"POSITION (px, py, h) IN FRAME frame"},
			meaning: "The position is in the coordinates of a drawing, which the frame brings to the site's.",
			example: "CREATE FRAME plan MATCHING 'control.csv';\nCREATE CAMPAIGN again FROM 'hall.csv' POSITION (x, y, z) IN FRAME plan;",
		},
		{
			name: "GEOGRAPHIC", syntax: []string{"POSITION (lat, lon, height) GEOGRAPHIC [ORIGIN (lat, lon)]"}, also: []string{"ORIGIN"},
			meaning: "The position is in degrees and metres on the WGS 84 ellipsoid, and becomes metres east, north and up of an origin: the middle of the extremes of latitude and longitude, to a hundredth of a degree, at height 0, or what ORIGIN says. A note tells it. Surveys with different origins are never compared: give them one ORIGIN. Rows far from the others whose latitude and longitude are exchanged, or both 0, are refused. Up is not height: far from the origin it is less, since the earth curves away.",
			example: "CREATE CAMPAIGN again FROM 'hall.csv' POSITION (y / 1000, x / 1000, z) GEOGRAPHIC ORIGIN (0, 0);",
		},
		{
			name: "COORDINATES IN", also: []string{"COORDINATES"}, syntax: []string{"COORDINATES IN m"},
			meaning: "The unit of the coordinates, m if nothing is said; volumes are in its cube. It is a label: nothing is converted.",
			example: "CREATE CAMPAIGN again FROM 'hall.csv' COORDINATES IN m;",
		},
		{
			name: "WITHIN", syntax: []string{"WITHIN solid", "WITHIN (solid, solid)"},
			meaning: "The solid of the campaign. It holds wherever the campaign is named after OF; relations made OF (query) name their own. A plain name follows the solid when that is replaced. Several in brackets are zones.",
			forms:   []form{{"WITHIN (solid, solid)", "CREATE CAMPAIGN again FROM 'hall.csv' WITHIN (air, air);"}},
			example: "CREATE CAMPAIGN again FROM 'hall.csv' WITHIN BOX (0, 0, 0) TO (30, 18, 7.5);",
			see:     []string{"SOLIDS", "TOLERANCE"},
		},
		{
			name: "TOLERANCE", syntax: []string{"TOLERANCE length"},
			meaning: "How far outside the solid a site may lie and still take part, as positions were measured no better than that; 0 if not given.",
			example: "CREATE CAMPAIGN again FROM 'hall.csv' WITHIN air TOLERANCE 0.05;",
		},
		{
			name: "STRETCHED", syntax: []string{"STRETCHED (sx, sy, sz)"},
			meaning: "The stretch in which the distances of this campaign are measured.",
			example: "CREATE CAMPAIGN again FROM 'hall.csv' STRETCHED (1, 1, 5);",
		},
		{
			name: "DUPLICATES", also: []string{"SPLIT", "FAIL"},
			syntax:  []string{"DUPLICATES SPLIT | MEAN | FIRST | FAIL"},
			meaning: "What becomes of sites at one place. SPLIT, if nothing is said, shares their cell among them equally, so that volumes still add up. MEAN makes one site of them with the means of their numbers. FIRST keeps the first by identifier. FAIL refuses them.",
			example: "CREATE CAMPAIGN again FROM 'hall.csv' DUPLICATES MEAN;",
		},
		{
			name: "UNITS", syntax: []string{"UNITS (temp '°C', co2 'ppm')"},
			meaning: "The units of columns, where the headings do not have them.",
			example: "CREATE TABLE again FROM 'log.csv' UNITS (temp '°C');",
		},
	}
}

// fileReadings say how a file is written.
func fileReadings() []entry {
	return []entry{
		{
			name: "FROM FILES", also: []string{"FILES"}, syntax: []string{"FROM FILES 'walk/*.csv'"},
			meaning: "Reads several files of one build after each other; the column source_file says which.",
			example: "CREATE TABLE again FROM FILES 'log*.csv';",
		},
		{
			name: "DELIMITER", syntax: []string{"DELIMITER ';'"},
			meaning: `What stands between the fields, ',' if nothing is said; '\t' is a tab.`,
			example: "CREATE TABLE again FROM 'semicolon.csv' DELIMITER ';' DECIMAL MARK ',';",
		},
		{
			name: "DECIMAL MARK", also: []string{"DECIMAL"}, syntax: []string{"DECIMAL MARK ','"},
			meaning: "How decimals are written: 7,5 needs ','.",
			example: "CREATE TABLE again FROM 'semicolon.csv' DELIMITER ';' DECIMAL MARK ',';",
		},
		{
			name: "MISSING", syntax: []string{"MISSING 'n/a'", "MISSING ('n/a', '-99')"},
			meaning: "Marks that are read as NULL, beside the empty field.",
			example: "CREATE TABLE again FROM 'log.csv' MISSING ('n/a', '-99');",
		},
		{
			name: "HEADING AT LINE", also: []string{"HEADING"}, syntax: []string{"HEADING AT LINE 16"},
			meaning: "The line with the names of the columns; those before it are passed over.",
			example: "CREATE TABLE again FROM 'log.csv' HEADING AT LINE 1;",
		},
		{
			name: "REFUSED TO", also: []string{"REFUSED"}, syntax: []string{"REFUSED TO 'refused.csv'"},
			meaning: "Sets lines that cannot be read aside in a file, says how many, and imports the rest. Without it nothing is imported.",
			example: "CREATE TABLE again FROM 'broken.csv' REFUSED TO 'refused.csv';",
		},
		{
			name: "TIME", syntax: []string{"TIME (t 'DD.MM.YYYY hh:mm:ss' [ZONE 'Europe/Zurich'])"},
			meaning: "How time stamps are written, and of which zone they are.",
			example: "CREATE TABLE again FROM 'local.csv' TIME (t 'DD.MM.YYYY hh:mm:ss' ZONE 'Europe/Zurich');",
		},
		{
			name: "PREAMBLE", syntax: []string{"PREAMBLE (serial AFTER 'Serial:')"},
			meaning: "Makes columns of what stands in the lines before the heading.",
			example: "CREATE TABLE again FROM 'preamble.csv' HEADING AT LINE 2 PREAMBLE (serial AFTER 'Serial:');",
		},
		{
			name: "UNPIVOT", syntax: []string{"UNPIVOT (temp FOR logger IN (a, b, c))"},
			meaning: "Makes rows of columns: one for each logger in place of a column for each.",
			example: "CREATE TABLE again FROM 'wide.csv' UNPIVOT (temp FOR logger IN (L01, L02));",
		},
		{
			name: "CENSORED", syntax: []string{"CENSORED (dust)"},
			meaning: "Columns with values such as <0.5, below what the instrument can tell, or >5. The column dust stays as it is written; dust_low and dust_high beside it are the bounds: 0 and 0.5, or 5 and Infinity, and twice the value where it was measured. An aggregate takes one of the bounds; QUANTILE and MEDIAN of dust itself answer where both agree.",
			example: "CREATE TABLE again FROM 'dust.csv' CENSORED (dust);",
		},
		{
			name: "SHEET", syntax: []string{"SHEET 'Data'"},
			meaning: "The sheet of a workbook.",
			example: "CREATE TABLE again FROM 'log.xlsx' SHEET 'Data';",
		},
		{
			name: "ENCODING", syntax: []string{"ENCODING 'latin1'"},
			meaning: "How the characters of the file are written, UTF-8 if nothing is said.",
			example: "CREATE TABLE again FROM 'latin.csv' ENCODING 'latin1';",
		},
	}
}
