package catalogue

// ofNames are the slips with names that the language or a query gives.
var ofNames = []Entry{
	{
		Code:    "no-column",
		Meaning: "None of the sources of the query has a column of that name, or the name is an item of SELECT that the clause does not know yet.",
		WayOut:  "DESCRIBE hall lists the columns of a thing, DESCRIBE CELLS those of a relation. A text stands between single quotes, a value set by LET behind a colon.",
		Example: "SELECT id, tmep FROM CELLS OF hall;",
	},
	{
		Code:    "ambiguous",
		Meaning: "More than one source of the query has a column of that name.",
		WayOut:  "Name the source before the column: h.temp.",
		Example: "SELECT temp FROM hall JOIN log ON logger = id;",
	},
	{
		Code:    "no-source",
		Meaning: "What stands before the point is neither a source of the query nor its alias.",
		WayOut:  "A source with an alias is called by it alone: FROM hall h, then h.temp.",
		Example: "SELECT s.id FROM hall h;",
	},
	{
		Code:    "same-name",
		Meaning: "Two things of one query have the same name: two sources, two names of WITH, or a column that FOR EACH names twice.",
		WayOut:  "Give one of them another name with AS.",
		Example: "SELECT a.id FROM hall AS a CROSS JOIN log AS a;",
	},
	{
		Code:    "column-names",
		Meaning: "A list of new column names has more or fewer names than the source has columns.",
		WayOut:  "Name all of them, or none and use AS in SELECT.",
		Example: "SELECT * FROM (SELECT id, temp FROM hall) AS h (logger);",
	},
	{
		Code:    "no-relation",
		Meaning: "There is no geometric relation of that name.",
		WayOut:  "LIST GEOMETRY shows the relations that there are.",
		Example: "SELECT * FROM CELS OF hall;",
	},
	{
		Code:    "no-function",
		Meaning: "There is neither a function nor an aggregate of that name.",
		WayOut:  "LIST FUNCTIONS shows those that there are.",
		Example: "SELECT MEDAIN(temp) FROM hall;",
	},
	{
		Code:    "no-type",
		Meaning: "There is no type of that name, or a column that is to be kept holds nothing but NULL and so has no type.",
		WayOut:  "The types are INTEGER, REAL, TEXT, BOOLEAN, TIMESTAMP, INTERVAL and POINT. CAST(NULL AS REAL) has a type.",
		Example: "SELECT CAST(level AS NUMERIC) FROM hall;",
	},
	{
		Code:    "no-parameter",
		Meaning: "The value behind the colon was set neither by LET nor by --let.",
		WayOut:  "LET upper = 8; or --let upper=8. LIST VALUES shows those that are set.",
		Example: "SELECT id FROM hall WHERE temp > :limit;",
	},
	{
		Code:    "no-clause",
		Meaning: "The relation does not take this clause.",
		WayOut:  "LIST GEOMETRY says which clauses a relation takes, HELP tells what a clause does.",
		Example: "SELECT * FROM CELLS OF hall NUMBER 5;",
	},
	{
		Code:    "setting",
		Meaning: "SET was given a word that is no setting, or a value that the setting does not take.",
		WayOut:  "LIST SETTINGS shows them with their values.",
		Example: "SET DIGITS 0;",
	},
	{
		Code:    "list",
		Meaning: "LIST does not know what to list.",
		WayOut:  "HELP LIST says what there is.",
		Example: "LIST CAMPAINS;",
	},
	{
		Code:    "no-topic",
		Meaning: "HELP knows nothing under these words.",
		WayOut:  "HELP alone lists what it knows. Names of your own are described by DESCRIBE.",
		Example: "HELP WITHN;",
	},
}
