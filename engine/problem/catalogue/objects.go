package catalogue

// ofObjects are the slips with what the catalog keeps.
var ofObjects = []Entry{
	{
		Code:    "no-object",
		Meaning: "The catalog has nothing of that name, or nothing of that kind.",
		WayOut:  "LIST CAMPAIGNS, TABLES, SOLIDS or VIEWS shows what there is; CREATE makes it. Another folder may have another catalog: --catalog.",
		Example: "SELECT * FROM hal;",
	},
	{
		Code:    "wrong-kind",
		Meaning: "The name is there, and stands for a thing of another kind than the place needs.",
		WayOut:  "A campaign, a table or a view stands after FROM, a solid after WITHIN; DROP names the kind.",
		Example: "DROP TABLE hall;",
	},
	{
		Code:    "name-taken",
		Meaning: "Something in the catalog has that name already; campaigns, tables, solids, views and frames share their names.",
		WayOut:  "CREATE OR REPLACE replaces a thing of the same kind; else DROP it, or take another name.",
		Example: "CREATE SOLID hall AS BOX (0, 0, 0) TO (30, 18, 7.5);",
	},
	{
		Code:    "column-twice",
		Meaning: "A query whose rows are to be kept has two columns of one name, so that the name would mean two things.",
		WayOut:  "Give one of them another name with AS.",
		Example: "CREATE TABLE pairs AS (SELECT a.id, b.id FROM hall a CROSS JOIN hall b);",
	},
	{
		Code:    "view-cycle",
		Meaning: "A view uses itself, mostly by way of another one that was replaced later.",
		WayOut:  "DROP one of the views and make it anew.",
		Example: `CREATE VIEW a AS (SELECT * FROM hall);
CREATE VIEW b AS (SELECT * FROM a);
CREATE OR REPLACE VIEW a AS (SELECT * FROM b);
SELECT * FROM a;`,
	},
	{
		Code:    "solid-cycle",
		Meaning: "A solid is made of itself, mostly by way of another one that was replaced later.",
		WayOut:  "CREATE OR REPLACE one of the solids from its measures.",
		Example: `CREATE SOLID a AS BOX (0, 0, 0) TO (30, 18, 7.5);
CREATE SOLID b AS a;
CREATE OR REPLACE SOLID a AS b;
DESCRIBE a;`,
	},
	{
		Code:    "too-large",
		Meaning: "The views and names of WITH in a query, each written out where it is used, have too many sources.",
		WayOut:  "CREATE TABLE … AS (query) keeps the rows of a step, so that later steps read them instead.",
		Example: `CREATE VIEW v1 AS (
  SELECT 1 AS n FROM log a, log b, log c, log d, log e, log f, log g, log h, log i);
CREATE VIEW v2 AS (
  SELECT 1 AS n FROM v1 a, v1 b, v1 c, v1 d, v1 e, v1 f, v1 g, v1 h, v1 i);
CREATE VIEW v3 AS (
  SELECT 1 AS n FROM v2 a, v2 b, v2 c, v2 d, v2 e, v2 f, v2 g, v2 h, v2 i);
SELECT COUNT(*) FROM v3 a, v3 b, v3 c, v3 d, v3 e, v3 f, v3 g, v3 h, v3 i;`,
	},
	{
		Code:    "run-cycle",
		Meaning: "A script runs itself, mostly by way of another one.",
		WayOut:  "Take the RUN out of one of them.",
		Example: "RUN 'again.ncell';",
	},
	{
		Code:    "catalog",
		Meaning: "The folder of the catalog could not be read or written: a file in it is damaged, was written by a later version of the program, or is being changed by another process.",
		WayOut:  "The message says which. A damaged thing is made again with CREATE OR REPLACE from its source.",
		Unshown: "it takes a damaged folder, not a statement",
	},
}
