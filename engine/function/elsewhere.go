package function

import "strings"

// elsewhere says what does here what functions of other languages do, by the
// names under which people look for them.
var elsewhere = map[string]string{
	"AVERAGE": "AVG(x)", "MEAN": "AVG(x)",
	"STDDEV": "STDDEV_SAMP(x), or STDDEV_POP(x) of all there is", "STDEV": "STDDEV_SAMP(x), or STDDEV_POP(x) of all there is",
	"STD": "STDDEV_SAMP(x), or STDDEV_POP(x) of all there is", "SD": "STDDEV_SAMP(x), or STDDEV_POP(x) of all there is",
	"VAR": "VAR_SAMP(x), or VAR_POP(x) of all there is", "VARIANCE": "VAR_SAMP(x), or VAR_POP(x) of all there is",
	"PERCENTILE": "QUANTILE(x, 0.95)", "PERCENTILE_CONT": "QUANTILE(x, 0.95)", "PERCENTILE_DISC": "QUANTILE(x, 0.95)",
	"PCT": "SHARE(x > 8)", "FRACTION": "SHARE(x > 8)", "COUNT_IF": "COUNT(*) FILTER (WHERE x > 8)", "COUNTIF": "COUNT(*) FILTER (WHERE x > 8)",
	"SUM_IF": "SUM(x) FILTER (WHERE y > 8)", "SUMIF": "SUM(x) FILTER (WHERE y > 8)",
	"LENGTH": "CHAR_LENGTH(text)", "LEN": "CHAR_LENGTH(text)", "SUBSTR": "SUBSTRING(text FROM start FOR length)",
	"CONCAT": "a || b", "STRING": "CAST(x AS TEXT)", "TO_CHAR": "CAST(x AS TEXT)",
	"POW": "POWER(x, y) or x ^ y", "LOG": "LN(x) or LOG10(x)", "TRUNC": "FLOOR(x)", "TRUNCATE": "FLOOR(x)", "INT": "CAST(x AS INTEGER)",
	"SQR": "x ^ 2", "RADIANS": "x * PI() / 180", "DEGREES": "x * 180 / PI()",
	"IF": "CASE WHEN x > 8 THEN a ELSE b END", "IIF": "CASE WHEN x > 8 THEN a ELSE b END",
	"IFNULL": "COALESCE(x, y)", "NVL": "COALESCE(x, y)", "ISNULL": "x IS NULL, or COALESCE(x, y)",
	"DATE_TRUNC": "FLOOR_TO(t, INTERVAL '1' HOUR)", "TIME_BUCKET": "FLOOR_TO(t, INTERVAL '15' MINUTE)", "DATE": "FLOOR_TO(t, INTERVAL '1' DAY)",
	"YEAR": "EXTRACT(YEAR FROM t)", "MONTH": "EXTRACT(MONTH FROM t)", "DAY": "EXTRACT(DAY FROM t)",
	"HOUR": "EXTRACT(HOUR FROM t)", "MINUTE": "EXTRACT(MINUTE FROM t)", "WEEKDAY": "EXTRACT(WEEKDAY FROM t)",
	"DATEDIFF": "t2 - t1, and HOURS(t2 - t1) as a number", "DATE_PART": "EXTRACT(HOUR FROM t)",
	"NOW": "TIMESTAMP '2031-04-07 08:15:00': what depends on the hour could not be run again", "TODAY": "TIMESTAMP '2031-04-07 00:00:00'",
}

// Elsewhere tells what does here what a function of that name does elsewhere, ""
// where nothing is known.
func Elsewhere(name string) string { return elsewhere[strings.ToUpper(name)] }
