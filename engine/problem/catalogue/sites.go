package catalogue

// ofSites are the faults of sites and of the solids around them.
var ofSites = []Entry{
	{
		Code:    "no-position",
		Meaning: "Something has no position: a column x, y or z is not there, or a site has NULL or an infinite value in one.",
		WayOut:  "A relation is made of rows with id, x, y, z: join the readings with their sites, or name the columns with POSITION (…) in CREATE.",
		Example: "SELECT * FROM CELLS OF log;",
	},
	{
		Code:    "overlap",
		Meaning: "Two zones of WITHIN (a, b) share space, which would be divided twice.",
		WayOut:  "Take one out of the other with MINUS, or make them one room with PLUS.",
		Example: "SELECT id, zone FROM CELLS OF hall WITHIN (air, BOX (20,0,0) TO (40,10,5));",
	},
	{
		Code:    "stretched",
		Meaning: "A factor of STRETCHED is not a number greater than 0, or sites or solid cannot be stretched by it.",
		WayOut:  "STRETCHED (1, 1, 5) has a metre up count as five; 1 leaves an axis as it is.",
		Example: "SELECT id FROM CELLS OF hall STRETCHED (1, 1, 0);",
	},
	{
		Code:    "not-finite",
		Meaning: "A reading is infinite, and nothing can be estimated from it.",
		WayOut:  "Leave the site out with OF (SELECT … WHERE …), or make the reading NULL.",
		Example: "SELECT * FROM RESIDUALS OF\n  (SELECT id, x, y, z, CAST('Infinity' AS REAL) AS temp FROM hall) FOR temp;",
	},
	{
		Code:    "no-solid",
		Meaning: "What is asked for needs a space with an end, and there is no solid.",
		WayOut:  "WITHIN a solid, or a campaign that was made WITHIN one.",
		Example: "DRAW CELLS OF (SELECT * FROM hall) SHADED BY temp TO 'cells.html';",
	},
	{
		Code:    "control-points",
		Meaning: "A frame cannot be made of these pairs of points, or a solid cannot be brought over by it.",
		WayOut:  "Three pairs or more that are not on one line, with the columns px, py of the drawing and x, y of the site (or px, py, pz and x, y, z).",
		Example: "CREATE FRAME plan MATCHING 'log.csv';",
	},
	{
		Code:    "geographic",
		Meaning: "A latitude or a longitude cannot be: beyond 90 or 360 degrees.",
		WayOut:  "POSITION (latitude, longitude, height) GEOGRAPHIC takes degrees, the latitude first.",
		Example: "CREATE TABLE places AS (VALUES (200, 10, 5)) POSITION (column1, column2, column3) GEOGRAPHIC;",
	},
	{
		Code:    "systems",
		Meaning: "Two campaigns are to share space and their coordinates have nothing to do with each other, such as local metres about two different middles.",
		WayOut:  "Import both together, in one file, so that they have one middle, or bring both into one FRAME.",
		Example: "CREATE CAMPAIGN far AS (VALUES ('A', 47.1, 8.2, 400), ('B', 47.2, 8.2, 400))\n  ID column1 POSITION (column2, column3, column4) GEOGRAPHIC;\nSELECT * FROM OVERLAY OF hall AGAINST far;",
	},
	{
		Code:    "no-place",
		Meaning: "A site of a new campaign has no coordinate.",
		WayOut:  "Mend the file, or leave the row out: REFUSED TO for a file, WHERE … IS NOT NULL for a query.",
		Example: "CREATE CAMPAIGN part AS (SELECT id, NULLIF(x, 1.5) AS x, y, z FROM hall);",
	},
	{
		Code:    "position-type",
		Meaning: "What POSITION names is not a number.",
		WayOut:  "MISSING reads a mark as missing, DECIMAL MARK ',' reads decimal commas, CAST(x AS REAL) a text of digits.",
		Example: "CREATE CAMPAIGN part AS (SELECT id, level AS x, y, z FROM hall);",
	},
	{
		Code:    "length-unit",
		Meaning: "The coordinates do not all come in one unit.",
		WayOut:  "Bring them to one in POSITION (x / 1000, y, z), or correct COORDINATES IN.",
		Example: "CREATE CAMPAIGN part AS (SELECT id, x, y, z FROM hall) UNITS (x 'mm');",
	},
	{
		Code:    "id-type",
		Meaning: "The identifier of a campaign is neither a text nor a whole number.",
		WayOut:  "ID names the column that tells the sites apart; without a column id, the number of the row serves.",
		Example: "CREATE CAMPAIGN part AS (SELECT temp AS id, x, y, z FROM hall);",
	},
	{
		Code:    "id-missing",
		Meaning: "A row of a new campaign has no identifier.",
		WayOut:  "Mend the file, or leave the row out with AS (SELECT … WHERE id IS NOT NULL).",
		Example: "CREATE CAMPAIGN part AS (SELECT NULLIF(id, 'L01') AS id, x, y, z FROM hall);",
	},
	{
		Code:    "id-twice",
		Meaning: "Two rows of a new campaign have the same identifier. A campaign is a set of sites, with one row each.",
		WayOut:  "Readings over time belong to a TABLE, which a query joins with the sites by their identifier.",
		Example: "CREATE CAMPAIGN part AS (SELECT logger AS id, temp AS x, temp AS y, temp AS z FROM log);",
	},
	{
		Code:    "no-id",
		Meaning: "A row from which a relation is made has no identifier.",
		WayOut:  "Leave such rows out: OF (SELECT … WHERE id IS NOT NULL).",
		Example: "SELECT id, volume FROM CELLS OF (SELECT NULLIF(id, 'L01') AS id, x, y, z FROM hall) WITHIN air;",
	},
	{
		Code:    "repeated-id",
		Meaning: "A site stands more than once in a partition, where it can have only one place and one cell.",
		WayOut:  "FOR EACH t makes a partition of every instant; if a site has two readings at one, GROUP BY brings them together.",
		Example: "SELECT id, volume FROM CELLS OF readings WITHIN air;",
	},
	{
		Code:    "no-site",
		Meaning: "OMITTING names a site that is not there. It is refused, since a slip of the pen would leave in what was to be left out.",
		WayOut:  "SELECT id FROM hall lists the sites.",
		Example: "SELECT id, volume FROM CELLS OF hall OMITTING ('L71') BECAUSE 'moved';",
	},
	{
		Code:    "no-sites",
		Meaning: "No site lies in the solid, so that its space would belong to nobody; or what a campaign is to be made of has no rows.",
		WayOut:  "Mostly the coordinates and the solid differ in their origin or their unit: the message says how far away the nearest site is.",
		Example: "SELECT id, volume FROM CELLS OF hall WITHIN BOX (100, 100, 0) TO (130, 118, 7.5);",
	},
	{
		Code:    "duplicates",
		Meaning: "Two sites stand at one place, and the campaign's policy for that is DUPLICATES FAIL.",
		WayOut:  "OMITTING leaves one out; DUPLICATES SPLIT, MEAN and FIRST say what else may be done (HELP DUPLICATES).",
		Example: `CREATE CAMPAIGN stack AS (SELECT id, 5.0 AS x, 5.0 AS y, 1.5 AS z FROM hall) DUPLICATES FAIL;
SELECT id, volume FROM CELLS OF stack;`,
	},
	{
		Code:    "scattered",
		Meaning: "FOR EACH over time makes partitions of few sites each, since the sites were not read at the same instants. Each of those few would be given the whole space.",
		WayOut:  "SERIES OF log BY logger ON t EVERY INTERVAL '15' MINUTE brings the stamps to common instants.",
		Example: `SELECT id, volume FROM CELLS OF (
  SELECT id, x, y, z, TIMESTAMP '2031-04-07 00:00:00' + x * INTERVAL '1' SECOND AS t FROM hall)
FOR EACH t WITHIN air;`,
	},
	{
		Code:    "solid",
		Meaning: "The solid cannot be: its plan crosses itself, a hole lies outside, or it has no extent.",
		WayOut:  "Write the corners of a plan in order around it, each once; DESCRIBE shows the volume of a solid.",
		Example: "CREATE SOLID bow AS PRISM ((0, 0), (4, 4), (4, 0), (0, 3)) FROM 0 TO 3;",
	},
	{
		Code:    "leak",
		Meaning: "The triangles of a mesh leave a gap: along some edges they do not meet a neighbour. No inside can be told from an outside, and every volume would be a guess.",
		WayOut:  "The message lists the open edges. Close them where the mesh was drawn; where corners differ by rounding only, WELD 0.001 joins those within a millimetre.",
		Example: "CREATE SOLID body AS MESH 'open.obj';",
	},
	{
		Code:    "mesh",
		Meaning: "The triangles of a mesh, or the points of a survey, bound no solid: pieces cross or cover one another, or lie in each other.",
		WayOut:  "Export the pieces one by one and join them with PLUS, or take them away with MINUS.",
		Example: "CREATE SOLID body AS MESH 'crossed.obj';",
	},
	{
		Code:    "mesh-file",
		Meaning: "A file holds no triangles that can be read: it is neither STL nor PLY nor OBJ, or it is damaged.",
		WayOut:  "The message says where the file stops making sense. Export it again, as triangles.",
		Example: "CREATE SOLID body AS MESH 'hall.csv';",
	},
	{
		Code:    "no-pieces",
		Meaning: "Cells were wanted as polyhedra, for a file of them, and there are none: without a solid some run to infinity; in a mesh, and in what MINUS and PLUS make, they can be measured but are not known as convex pieces.",
		WayOut:  "WITHIN a solid closes the cells; a BOX and a PRISM with its HOLEs have convex pieces.",
		Example: "SAVE SELECT id FROM CELLS OF (SELECT * FROM hall) UNCLIPPED TO 'cells.vtu';",
	},
	{
		Code:    "not-cells",
		Meaning: "A file of cells as polyhedra needs rows that are cells: those of one CELLS, as they are, without joins, groups and MEASURED IN.",
		WayOut:  "SELECT … FROM CELLS OF … [WHERE …] [ORDER BY …] [LIMIT …].",
		Example: "SAVE SELECT COUNT(*) AS n FROM CELLS OF hall TO 'cells.vtu';",
	},
	{
		Code:    "no-volume",
		Meaning: "A solid has no volume.",
		WayOut:  "ENVELOPE OF campaign MARGIN 1 widens a box around sites that all lie at one height.",
		Example: `CREATE CAMPAIGN floor AS (SELECT id, x, y, 1.5 AS z FROM hall);
SELECT id, volume FROM CELLS OF floor WITHIN ENVELOPE OF floor;`,
	},
}
