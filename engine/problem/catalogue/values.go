package catalogue

// ofValues are the faults of single values.
var ofValues = []Entry{
	{
		Code:    "no-value",
		Meaning: "A calculation has no value in a row: a division of 0 by 0, the logarithm of a negative number. It is never a silent gap, since a mean over the rest would look like one over all.",
		WayOut:  "Leave such rows out with WHERE, or say what they shall be: CASE WHEN x > 0 THEN LN(x) END, NULLIF(x, 0).",
		Example: "SELECT id, LN(temp - 5) FROM hall;",
	},
	{
		Code:    "overflow",
		Meaning: "A result is beyond the range of its type.",
		WayOut:  "INTEGER has 64 bits; CAST(n AS REAL) computes with REAL, rounded to about 16 digits.",
		Example: "SELECT 9223372036854775807 + 1;",
	},
	{
		Code:    "cast",
		Meaning: "A text does not read as a value of the type that it is cast to.",
		WayOut:  "CASE leaves such rows out or gives them a value; MISSING 'n/a' on import reads a mark as NULL.",
		Example: "SELECT id, CAST(level AS REAL) FROM hall;",
	},
	{
		Code:    "timestamp",
		Meaning: "The text behind TIMESTAMP is no date and time.",
		WayOut:  "Write TIMESTAMP '2031-04-07 08:15:00', in UTC, or with a zone: '2031-04-07 08:15:00+02:00'.",
		Example: "SELECT * FROM log WHERE t > TIMESTAMP '7.4.2031 08:15';",
	},
	{
		Code:    "interval",
		Meaning: "INTERVAL is not followed by a number and a unit, or has a unit without a fixed length.",
		WayOut:  "Write INTERVAL '15' MINUTE; units are SECOND, MINUTE, HOUR, DAY and WEEK. A month has no fixed length.",
		Example: "SELECT MAX(t) - INTERVAL '1' MONTH FROM log;",
	},
	{
		Code:    "weight",
		Meaning: "A weight is negative, infinite or NULL. A weight is a share of space or time, and such a one would falsify the whole mean.",
		WayOut:  "Cells are unbounded where no solid closes them: put the campaign WITHIN one, such as ENVELOPE OF hall MARGIN 1, or leave them out with WHERE bounded, which makes the answer one of the inner cells.",
		Example: "SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF hall UNCLIPPED;",
	},
	{
		Code:    "mean",
		Meaning: "AVG of a column whose unit is dB, ° or pH. Levels and pH are logarithms and directions go round in a circle: adding them up and dividing gives a number that is the mean of nothing.",
		WayOut:  "LEVEL_AVG is the mean of levels by their energy, DIRECTION_AVG that of directions by vectors. -LOG10(AVG(POWER(10, -CAST(ph AS REAL)))) is the pH of the mean acid. CAST(x AS REAL) drops the unit where the plain mean is meant all the same, as of slopes.",
		Example: "CREATE TABLE noise AS (SELECT 80.0 AS level) UNITS (level 'dB');\nSELECT AVG(level) FROM noise;",
	},
	{
		Code:    "censored",
		Meaning: "A column that CENSORED has read holds values that are only bounds, such as <0.1: an aggregate has to say whether the least or the most that they can be is meant. Or a value of it is neither a number nor a bound.",
		WayOut:  "AVG(dust_low) and AVG(dust_high) are what the mean can be at least and at most. QUANTILE(dust, p) and MEDIAN(dust) answer where both bounds agree. MISSING 'n/a' reads a mark as a missing value.",
		Example: "CREATE TABLE again FROM 'dust.csv' CENSORED (dust);\nSELECT AVG(dust) FROM again;",
	},
}
