package catalogue

// ofTheProgram are the limits of the program itself.
var ofTheProgram = []Entry{
	{
		Code:    "strict",
		Meaning: "A statement gave a warning, and the program was called with --strict. Its result has been printed.",
		WayOut:  "Do away with the cause of the warning, or call without --strict.",
		Example: `CREATE CAMPAIGN far AS (
  SELECT id, CASE WHEN id = 'L01' THEN 31.5 ELSE x END AS x, y, z FROM hall) WITHIN air;`,
		Strict: true,
	},
	{
		Code:    "memory",
		Meaning: "The intermediate results of a query, what a relation holds of its rows, the tetrahedralisation of its sites or the table that a file becomes would take more memory than it may have.",
		WayOut:  "Ask for fewer columns or rows, or give more with --memory.",
		Unshown: "it takes more rows than a small script makes",
	},
	{
		Code:    "too-many-rows",
		Meaning: "An intermediate result has more than 2 147 483 647 rows.",
		WayOut:  "Narrow the sources with WHERE, or join on more columns.",
		Unshown: "it takes more rows than a small script makes",
	},
	{
		Code:    "failed",
		Meaning: "Something went wrong for which the program has no better word.",
		WayOut:  "The message is that of the part in which it went wrong. Please report it with the statement: it should have a code of its own.",
		Unshown: "no statement is known that gives it",
	},
}
