package catalogue

// ofFiles are the faults of files and of the clauses that say how they are read.
var ofFiles = []Entry{
	{
		Code:    "no-file",
		Meaning: "There is no file of that name.",
		WayOut:  "A relative path starts at the folder of the script, at the prompt at the working folder.",
		Example: "CREATE TABLE week FROM 'lgo.csv';",
	},
	{
		Code:    "file",
		Meaning: "A file could not be read or written; the message has the reason that the system gives.",
		WayOut:  "Check the folder, the rights and the room on the disk. What was to be written has not replaced anything.",
		Example: "SAVE SELECT id FROM hall TO 'hall.csv/sites.csv';",
	},
	{
		Code:    "file-changed",
		Meaning: "Another program changed a file while it was imported, so that what was read may be half of the old content and half of the new. Nothing was imported.",
		WayOut:  "Import it when nobody writes to it any more, or import a copy.",
		Unshown: "it takes another program that writes at the same time",
	},
	{
		Code:    "file-exists",
		Meaning: "SAVE or DRAW would write over a file.",
		WayOut:  "OVERWRITE replaces it.",
		Example: "SAVE SELECT id FROM hall TO 'hall.csv';",
	},
	{
		Code:    "file-kind",
		Meaning: "The ending of the file does not say how it is to be written.",
		WayOut:  "HELP SAVE and HELP DRAW list the endings.",
		Example: "SAVE SELECT id FROM hall TO 'sites.doc';",
	},
	{
		Code:    "import",
		Meaning: "The file has faults, and nothing of it was imported: a value that is no number in a column of numbers, a line with too many fields. Up to three of them are shown with their lines.",
		WayOut:  "Mend the file; or MISSING 'n/a' reads a mark as missing; or REFUSED TO 'refused.csv' sets the lines at fault aside, says how many, and imports the rest.",
		Example: "CREATE TABLE week FROM 'broken.csv';",
	},
	{
		Code:    "clause",
		Meaning: "A clause of CREATE or SAVE does not fit: it belongs to another kind of thing, or its value cannot be.",
		WayOut:  "HELP and the name of the clause tell what it takes.",
		Example: "CREATE TABLE week FROM 'log.csv' TOLERANCE 0.05;",
	},
}
