package engine

import (
	"strings"

	"nearcell/engine/present"
)

// statementEntries are the statements, in the order in which HELP lists them.
// What may be listed, set and saved is filled in from its own registry.
func statementEntries() []entry {
	return append(dataStatements(), sessionStatements()...)
}

// dataStatements are about questions and what they are put to.
func dataStatements() []entry {
	return []entry{
		{
			name: "SELECT", also: []string{"QUERY"},
			syntax: []string{
				"[WITH name AS (query), …]",
				"SELECT [DISTINCT] item [AS name], … [FROM source [AS name], …] [WHERE condition]",
				"  [GROUP BY item, …] [HAVING condition] [UNION [ALL] query]",
				"  [ORDER BY item [ASC | DESC] [NULLS FIRST | LAST], …] [LIMIT n [OFFSET m]];",
			},
			meaning: "Asks a question and prints the answer as a table. A source is a campaign, a table, a view, a (query), or a relation such as CELLS OF hall, computed only as far as the query needs it.",
			example: "SELECT level, AVG(temp) AS plain, AVG(temp) WEIGHTED BY volume AS by_space\nFROM CELLS OF hall WHERE temp IS NOT NULL GROUP BY level ORDER BY by_space DESC;",
			see:     []string{"FROM", "JOIN", "WEIGHTED BY", "RELATIONS", "FUNCTIONS"},
		},
		{
			name: "CREATE CAMPAIGN", also: []string{"CAMPAIGN", "CAMPAIGNS"},
			syntax: []string{
				"CREATE [OR REPLACE] CAMPAIGN name FROM 'file' | FROM FILES 'pattern' | AS (query)",
				"  [ID column] [POSITION (x, y, z)] [WITHIN solid] {clause};",
			},
			meaning: "Keeps a set of sites: each has a position, an identifier and any attributes. Without ID a column id serves, else the number of the row; without POSITION the columns x, y, z. Whatever the file calls them, they are read as id, x, y, z.",
			more:    []string{"A campaign has one row for each site. Readings over time belong to a table, which a query joins with the sites."},
			example: "CREATE OR REPLACE CAMPAIGN hall FROM 'hall.csv' ID id POSITION (x, y, z)\n  WITHIN air TOLERANCE 0.05;",
			forms:   []form{{"FROM FILES", "CREATE CAMPAIGN again FROM FILES 'hall*.csv';"}},
			see:     []string{"FILES", "WITHIN", "DUPLICATES", "CREATE TABLE"},
		},
		{
			name: "CREATE TABLE", also: []string{"TABLE", "TABLES"},
			syntax:  []string{"CREATE [OR REPLACE] TABLE name FROM 'file' | FROM FILES 'pattern' | AS (query) {clause};"},
			meaning: "Keeps rows, such as the readings of loggers over time. POSITION gives them x, y, z without making the table a campaign.",
			example: "CREATE OR REPLACE TABLE log FROM 'log.csv' UNITS (temp '°C');",
			see:     []string{"FILES", "CREATE CAMPAIGN"},
		},
		{
			name: "CREATE SOLID", also: []string{"SOLID"},
			syntax:  []string{"CREATE [OR REPLACE] SOLID name AS solid;"},
			meaning: "Keeps a body of space, such as the air of a room, under a name. Campaigns and relations are closed at its walls by WITHIN.",
			example: "CREATE OR REPLACE SOLID air AS\n  PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18)) FROM 0 TO 7.5;",
			see:     []string{"SOLIDS", "WITHIN"},
		},
		{
			name: "CREATE VIEW", also: []string{"VIEW", "VIEWS"},
			syntax:  []string{"CREATE [OR REPLACE] VIEW name AS (query);"},
			meaning: "Keeps a query under a name; it is computed anew wherever the name is used. A :name in it has the value of that time.",
			example: "CREATE VIEW warm AS (SELECT id, temp FROM hall WHERE temp > :upper);\nSELECT COUNT(*) FROM warm;",
			see:     []string{"WITH", "LET"},
		},
		{
			name: "CREATE FRAME", also: []string{"FRAME", "FRAMES"},
			syntax:  []string{"CREATE [OR REPLACE] FRAME name MATCHING 'file';"},
			meaning: "Keeps how the coordinates of a drawing become those of the site: scaled, turned, moved and, where it has to be, mirrored, as fits pairs of points best (least squares). The file has the columns px, py of the drawing and x, y of the site, in metres, and a name if wanted; heights then stay as they are. With pz and z it is a frame in space. DESCRIBE shows what each pair is off.",
			example: "CREATE FRAME plan MATCHING 'control.csv';",
		},
		{
			name:    "DROP",
			syntax:  []string{"DROP CAMPAIGN | TABLE | SOLID | VIEW | FRAME name;", "DROP DIAGRAMS;"},
			meaning: "Removes a thing from the catalog. The file from which it was made stays.",
			example: "DROP TABLE log;",
			more: []string{
				"DROP DIAGRAMS removes what is kept of computed diagrams; they are computed again when they are asked for.",
			},
			forms: []form{{"DROP FRAME", "DROP FRAME plan;"}, {"DROP DIAGRAMS", "DROP DIAGRAMS;"}},
		},
		{
			name: "LET", also: []string{"VALUE", "PARAMETER"},
			syntax:  []string{"LET name = value;", "LET name = (query);"},
			meaning: "Sets a value that statements use as :name. A query gives its one value when LET runs, and NULL where it finds none. The option --let name=value of the command line goes before it, so that a script runs with other values unchanged.",
			example: "LET limit = 2 * 4;\nSELECT id, temp FROM hall WHERE temp > :limit;",
			see:     []string{"LIST VALUES"},
		},
		{
			name: "SAVE", also: []string{"OVERWRITE", "WITH UNITS", "QUOTE FORMULAS"},
			syntax:  []string{"SAVE query TO 'file' [OVERWRITE] [WITH UNITS] [WITH PROVENANCE] [QUOTE FORMULAS];"},
			meaning: "Writes the rows of a query to a file, by its ending: " + strings.Join(savedEndings(), ", ") + ". Numbers read back to the same bits. The file gets its name when it is whole, and one that is there is replaced only with OVERWRITE.",
			more: []string{
				"WITH UNITS writes the units into the heading: volume [m^3]; a .parquet file has them in its metadata under the key units. In an .xlsx file time stamps are dates to the millisecond, and infinities and whole numbers beyond 2^53, which a sheet cannot hold, are texts. A .vtu file has the cells of a CELLS as polyhedra with the columns as their attributes, for viewers of grids; pieces of one cell in a room that is not convex share the number in its array row. QUOTE FORMULAS puts an apostrophe before texts that a spreadsheet would compute. WITH PROVENANCE writes a second file beside it that says where the numbers come from.",
			},
			example: "SAVE SELECT id, volume, cx, cy, cz FROM CELLS OF hall TO 'cells.csv' WITH UNITS;",
			forms: []form{
				{"WITH PROVENANCE", "SAVE SELECT id FROM hall TO 'sites.csv' WITH PROVENANCE;"},
				{".parquet", "SAVE SELECT id FROM hall TO 'sites.parquet';"},
				{".xlsx", "SAVE SELECT id FROM hall TO 'sites.xlsx';"},
				{".vtu", "SAVE SELECT id FROM CELLS OF hall TO 'cells.vtu';"},
			},
		},
		{
			name: "EXPLAIN", also: []string{"EXPLAIN MEASURED", "PLAN"},
			syntax:  []string{"EXPLAIN query;", "EXPLAIN MEASURED query;"},
			meaning: "Shows how a query will be computed: its steps, the rows and the geometry that each is thought to take. MEASURED runs it and shows what they took.",
			example: "EXPLAIN SELECT id, volume FROM CELLS OF hall WHERE id = 'L01';",
			forms:   []form{{"EXPLAIN MEASURED", "EXPLAIN MEASURED SELECT id, volume FROM CELLS OF hall;"}},
		},
		{
			name: "REQUIRE", also: []string{"NONE", "VERDICTS", "VERDICT"},
			syntax:  []string{"REQUIRE 'what' condition;", "REQUIRE 'what' NONE (query);", "SELECT … FROM VERDICTS;"},
			meaning: "States a requirement and says whether it is met: PASS, FAIL or NOT DECIDED. Of a query no row may come out. The script goes on; VERDICTS lists what the requirements of the session came to, and the program returns 3 where one failed.",
			more: []string{
				"NOT DECIDED is what nothing can be said of: a condition that is NULL, and an answer that is empty because no row came as far as the condition, as of an empty log, or because values are missing in all of them. A relation such as EPISODES that finds nothing in the rows it looked at is an answer.",
				"A limit that readings are equal to, or nearer to than 1e-9, is told of in a note.",
			},
			example: "REQUIRE 'A1 nothing above 12 °C' NONE (SELECT id FROM hall WHERE temp > 12);\nSELECT requirement, verdict, rows FROM VERDICTS;",
			see:     []string{"EXIT CODES"},
		},
		{
			name: "DRAW", also: []string{"SHADED BY", "LIMITS", "SHOWING", "ALONG", "SEEN FROM", "COURSE", "HISTOGRAM", "PROFILE"},
			syntax: []string{
				"DRAW SECTION OF campaign AT z = height | THROUGH (x, y, z) NORMAL (nx, ny, nz) {clause}",
				"  SHADED BY column [LIMITS (low, high)] TO 'file' [OVERWRITE];",
				"DRAW CELLS OF campaign {clause} SHADED BY column [LIMITS (low, high)] [SEEN FROM (x, y, z)]",
				"  TO 'file.html' [OVERWRITE];",
				"DRAW COURSE OF (query) ALONG t SHOWING a, b [LIMITS (low, high)] TO 'file' [OVERWRITE];",
				"DRAW HISTOGRAM OF (query) SHOWING x [WEIGHTED BY w] [LIMITS (low, high)] TO 'file' [OVERWRITE];",
				"DRAW PROFILE OF campaign FOR column ALONG z [LIMITS (low, high)] TO 'file' [OVERWRITE];",
			},
			meaning: "Draws a picture into a file: .svg, or .png with 200 dots an inch, as wide as the text of an A4 sheet; CELLS also .html. Numbers in it are those of the tables.",
			more: []string{
				"SECTION cuts the cells by a plane and shades each by the value of its site; METHOD SIBSON and others shade by the estimate. Walls, sites near the plane, a scale of length and the shares of the area over and under the limits are in the picture. FOR EACH makes a panel for each value, up to 12. MEASURED IN shades the parts alone and says the shares of each.",
				"CELLS draws the cells in space. The page .html is one file that needs no network: the cells can be turned, cut by a plane across x, y or z, picked (identifier, value, volume, neighbours) and singled out, with mouse, fingers or keys, which it lists; on paper it is the still. The still, .svg or .png, shows them from outside and cut open in the middle, seen from a direction: SEEN FROM (-1, -2, 1.5) points from the cells to whoever looks, and holds where none is given. One partition is drawn, no FOR EACH; up to 100 000 cells. The solid is a BOX or a PRISM, also with HOLEs: a mesh, and what is put together with PLUS and MINUS, has no polyhedra to draw.",
				"COURSE draws lines over time, open where a value or a row is missing, with two axes where units differ. HISTOGRAM shows how values are distributed, PROFILE values by height with the mean of each layer, weighted by volume.",
				"LIMITS (8) is an upper limit, LIMITS (2, 8) a lower and an upper one. What is beyond a limit, or has no value, is hatched as well as coloured. The picture says where its colours were published.",
			},
			example: "DRAW SECTION OF hall AT z = 1.1 SHADED BY temp LIMITS (2, 8) TO 'floor.svg';",
			forms: []form{
				{"DRAW COURSE", "DRAW COURSE OF (SELECT t, AVG(temp) AS mean FROM log GROUP BY t)\n  ALONG t SHOWING mean LIMITS (2, 8) TO 'week.svg';"},
				{"DRAW HISTOGRAM", "DRAW HISTOGRAM OF (SELECT temp, volume FROM CELLS OF hall)\n  SHOWING temp WEIGHTED BY volume TO 'spread.svg';"},
				{"DRAW PROFILE", "DRAW PROFILE OF hall FOR temp ALONG z TO 'profile.svg';"},
				{"DRAW CELLS", "DRAW CELLS OF hall SHADED BY temp LIMITS (2, 8) TO 'hall.html';"},
				{"DRAW CELLS from a direction", "DRAW CELLS OF hall SHADED BY temp SEEN FROM (1, -1, 0.8) TO 'hall.png';"},
			},
			see: []string{"SHOW", "SECTION", "METHOD"},
		},
		{
			name:    "SHOW",
			syntax:  []string{"SHOW SECTION OF campaign AT z = height {clause} SHADED BY column [LIMITS (low, high)];"},
			meaning: "Draws the same map as DRAW SECTION in the terminal, with characters, as wide as the terminal: darker is higher, ^ is over the limit, v under it. Where the terminal has no UTF-8, in plain ASCII.",
			example: "SHOW SECTION OF hall AT z = 1.1 SHADED BY temp LIMITS (2, 8);",
			see:     []string{"DRAW"},
		},
	}
}

// sessionStatements are about the session, the script and the report.
func sessionStatements() []entry {
	return []entry{
		{
			name: "LIST", also: listTopicNames(),
			syntax:  []string{"LIST word;"},
			meaning: "Lists what there is, in the catalog and in the language. These are the words.",
			more:    listLines(),
			example: "LIST GEOMETRY;",
			see:     []string{"DESCRIBE"},
		},
		{
			name:    "DESCRIBE",
			syntax:  []string{"DESCRIBE name;", "DESCRIBE CELLS;", "DESCRIBE CELLS OF campaign;"},
			meaning: "Lists the columns of a campaign, a table, a view or a relation, with their types, units and meanings, and says where the data came from; of a solid its volume, surface and box.",
			example: "DESCRIBE hall;",
			see:     []string{"LIST", "DESCRIBE FILE"},
		},
		{
			name:    "DESCRIBE FILE",
			syntax:  []string{"DESCRIBE FILE 'file';"},
			meaning: "Looks at a file before it is imported: how it seems to be written, its first rows, and a CREATE statement ready to paste.",
			example: "DESCRIBE FILE 'log.csv';",
			see:     []string{"FILES"},
		},
		{
			name:    "RUN",
			syntax:  []string{"RUN 'file.ncell';"},
			meaning: "Runs the statements of another script, whose relative paths start at its own folder.",
			example: "RUN 'small.ncell';",
			see:     []string{"COMMAND LINE"},
		},
		{
			name: "SET", also: []string{"SETTING"},
			syntax:  settingSyntax(),
			meaning: "Changes a setting of the session, but for CACHE, which is the catalog's.",
			example: "SET DIGITS 8;",
			forms:   []form{{"SET CACHE", "SET CACHE '2GiB';"}},
			see:     []string{"SETTINGS", "LIST SETTINGS"},
		},
		{
			name:    "TITLE",
			syntax:  []string{"TITLE 'text';"},
			meaning: "Gives the report its title; a second TITLE begins a chapter. Between tables it is printed as a heading; formats for programs leave it out.",
			see:     []string{"REPORT", "TEXT"},
			example: "TITLE 'Hall 4, summer mapping';",
		},
		{
			name:    "TEXT",
			syntax:  []string{"TEXT 'text';"},
			meaning: "Writes a paragraph into the report, or between the tables; an empty line in the text begins a new paragraph. Formats for programs leave it out.",
			see:     []string{"REPORT", "TITLE"},
			example: "TEXT 'The door to the dock stood open at noon.';",
		},
		{
			name:    "HELP",
			syntax:  []string{"HELP [topic];", "HELP ERROR;"},
			meaning: "Explains a statement, a relation, a clause, a function, a setting, the code of an error, or a guide such as CAUTIONS. HELP ERROR explains the last error of the session.",
			example: "HELP WEIGHTED BY;",
		},
		{
			name: "QUIT", also: []string{"EXIT"},
			syntax:  []string{"QUIT;"},
			meaning: "Ends the prompt or the script.",
			example: "QUIT;",
		},
	}
}

// savedEndings are the endings that SAVE writes, in the order of the formats.
func savedEndings() []string {
	var list []string
	for _, f := range present.Formats {
		for ending, format := range savable {
			if format == f {
				list = append(list, ending)
			}
		}
	}
	return list
}
