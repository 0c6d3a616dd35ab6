package catalogue

// ofQueries are the slips in the build of a query.
var ofQueries = []Entry{
	{
		Code:    "no-picture",
		Meaning: "There is no picture of that, or the terminal has none.",
		WayOut:  "DRAW makes pictures of SECTION, COURSE, HISTOGRAM and PROFILE; SHOW draws SECTION in the terminal.",
		Example: "DRAW HULL OF hall TO 'hull.svg';",
	},
	{
		Code:    "no-rows",
		Meaning: "The query of a picture gives no row with a value: there is nothing to draw.",
		WayOut:  "Run the query alone to see why it is empty.",
		Example: "DRAW HISTOGRAM OF (SELECT temp FROM hall WHERE temp > 99) SHOWING temp TO 'none.svg';",
	},
	{
		Code:    "limits",
		Meaning: "LIMITS of a picture has more than two values, or a lower one that is not below the upper one.",
		WayOut:  "LIMITS (8) is an upper limit, LIMITS (2, 8) a lower and an upper one.",
		Example: "DRAW SECTION OF hall AT z = 1.1 SHADED BY temp LIMITS (8, 2) TO 'floor.svg';",
	},
	{
		Code:    "plane",
		Meaning: "The plane of a section misses the solid, or is none: its normal has no length, its axis is not x, y or z.",
		WayOut:  "The message says between which coordinates the solid lies.",
		Example: "DRAW SECTION OF hall AT z = 9 SHADED BY temp TO 'floor.svg';",
	},
	{
		Code:    "syntax",
		Meaning: "The text is no statement of the language. Nothing of a script runs before all of it can be read.",
		WayOut:  "The mark stands where reading stopped; HELP and the first word of the statement show how it is written.",
		Example: "SELECT id, temp FORM hall;",
	},
	{
		Code:    "types",
		Meaning: "An operator, a function or a clause was given a value of a type that it does not take.",
		WayOut:  "CAST(x AS REAL) brings a value to another type; HELP TYPES tells of them.",
		Example: "SELECT id FROM hall WHERE level > 3;",
	},
	{
		Code:    "units",
		Meaning: "Values in different units were added, compared or put into one column.",
		WayOut:  "Convert one of them, and CAST(… AS REAL) drops the unit that is no longer true. HELP UNITS tells more.",
		Example: "SELECT id FROM CELLS OF hall WHERE volume > area;",
	},
	{
		Code:    "arguments",
		Meaning: "A function was called in a way in which it cannot be: too many or too few arguments, one that must be constant, or a clause that it does not take.",
		WayOut:  "HELP and the name of the function show how it is written.",
		Example: "SELECT QUANTILE(temp) FROM hall;",
	},
	{
		Code:    "needs-clause",
		Meaning: "A relation stands without a clause that it cannot do without.",
		WayOut:  "The message has an example; HELP and the name of the relation show all of its clauses.",
		Example: "SELECT * FROM SERIES OF log BY logger ON t;",
	},
	{
		Code:    "aggregate",
		Meaning: "A function of many rows stands where each row is still single, or where there are no rows at all.",
		WayOut:  "Conditions on groups stand in HAVING. To compare rows with a mean, compute it in a query of its own and join it.",
		Example: "SELECT id FROM hall WHERE temp > AVG(temp);",
	},
	{
		Code:    "window",
		Meaning: "A function with OVER stands where windows are not computed yet, or inside another one; or a function that needs OVER has none.",
		WayOut:  "Windows stand in SELECT and ORDER BY. Elsewhere name it in a query of its own: SELECT id FROM (SELECT id, RANK() OVER (ORDER BY temp) AS place FROM hall) AS r WHERE place = 1.",
		Example: "SELECT id FROM hall WHERE RANK() OVER (ORDER BY temp) = 1;",
	},
	{
		Code:    "frame",
		Meaning: "The frame of a window has no meaning: it ends before it begins, its offset does not fit, or the function takes none.",
		WayOut:  "ROWS counts rows, with whole numbers; RANGE goes by differences of the one key of ORDER BY, which is a number or a time.",
		Example: "SELECT id, AVG(temp) OVER (ORDER BY z ROWS 0.5 PRECEDING) FROM hall;",
	},
	{
		Code:    "nested-aggregate",
		Meaning: "An aggregate stands inside another.",
		WayOut:  "Compute the inner one in a query of its own: SELECT AVG(highest) FROM (SELECT MAX(temp) AS highest FROM hall GROUP BY level).",
		Example: "SELECT AVG(MAX(temp)) FROM hall;",
	},
	{
		Code:    "not-grouped",
		Meaning: "A column that has many values in a group is asked for as if it had one.",
		WayOut:  "Add it to GROUP BY, or say which value is meant: MIN, MAX, AVG, FIRST.",
		Example: "SELECT level, AVG(temp) FROM hall;",
	},
	{
		Code:    "no-groups",
		Meaning: "HAVING stands in a query that makes no groups.",
		WayOut:  "Conditions on single rows stand in WHERE.",
		Example: "SELECT id FROM hall HAVING temp > 8;",
	},
	{
		Code:    "position",
		Meaning: "The number after ORDER BY or GROUP BY is not the position of a column of SELECT.",
		WayOut:  "Positions count from 1; a name says more.",
		Example: "SELECT id FROM hall ORDER BY 2;",
	},
	{
		Code:    "order-distinct",
		Meaning: "With DISTINCT, rows are ordered by something that is not shown, and of which equal rows may have different values.",
		WayOut:  "Show what is ordered by.",
		Example: "SELECT DISTINCT level FROM hall ORDER BY temp;",
	},
	{
		Code:    "columns",
		Meaning: "The sides of a UNION, or the rows of VALUES, have different numbers of columns.",
		WayOut:  "Give both the same columns; CAST(NULL AS REAL) fills one that is missing.",
		Example: "SELECT id FROM hall UNION ALL SELECT logger, temp FROM log;",
	},
	{
		Code:    "many-rows",
		Meaning: "A query in brackets stands where one value is needed, and gives more than one row.",
		WayOut:  "An aggregate, a WHERE that leaves one row, or LIMIT 1 with ORDER BY makes one of them; x IN (query) compares with all.",
		Example: "SELECT id FROM hall WHERE temp > (SELECT temp FROM log);",
	},
	{
		Code:    "query-here",
		Meaning: "A query in brackets stands where no query can be computed.",
		WayOut:  "Write its value out. A campaign can be made AS (SELECT …), which may compute anything.",
		Example: "CREATE CAMPAIGN up FROM 'hall.csv' POSITION (x, y, z + (SELECT MIN(z) FROM hall));",
	},
	{
		Code:    "distinct-weight",
		Meaning: "An aggregate is to take each value once and to weigh it by its rows, which may differ in weight.",
		WayOut:  "Leave DISTINCT out, or weigh in a query of its own.",
		Unshown: "the same slip is found earlier, under the code arguments",
	},
	{
		Code:    "clauses",
		Meaning: "Two clauses of a relation contradict each other.",
		WayOut:  "Leave one of them out.",
		Example: "SELECT id, volume FROM CELLS OF hall WITHIN air UNCLIPPED;",
	},
	{
		Code:    "for-each",
		Meaning: "FOR EACH names the identifier, so that every site would have the whole space for itself.",
		WayOut:  "FOR EACH takes an instant or a pass: what the sites have in common.",
		Example: "SELECT id, volume FROM CELLS OF hall FOR EACH id;",
	},
	{
		Code:    "not-yet",
		Meaning: "The language has this, and this version of the program does not. It is refused by name, never passed over.",
		WayOut:  "HELP marks what is not there yet; where there is another way, the message names it.",
		Example: "DRAW CELLS OF hall SHADED BY temp TO 'hall.html';",
	},
}
