package function

import (
	"strings"
	"time"

	"nearcell/catalog/column"
)

// timeScalars are the functions of time stamps, in UTC, and of intervals.
func timeScalars() []*Scalar {
	return []*Scalar{
		{Name: "EXTRACT", Signature: "EXTRACT(field FROM t)",
			Meaning: "YEAR, MONTH, DAY, HOUR, MINUTE, SECOND (with its fraction) or WEEKDAY (1 Monday to 7 Sunday) of a time stamp, in UTC",
			Example: "EXTRACT(HOUR FROM TIMESTAMP '2031-04-07 08:15:00') = 8", Check: checkExtract, Eval: evalExtract},
		{Name: "HOURS", Signature: "HOURS(interval)", Meaning: "the length of an interval in hours",
			Example: "HOURS(INTERVAL '15' MINUTE) = 0.25", Check: checkHours, Eval: evalHours},
	}
}

var extractFields = []string{"YEAR", "MONTH", "DAY", "HOUR", "MINUTE", "SECOND", "WEEKDAY"}

// ExtractFields are the fields that EXTRACT knows, for messages and completion.
func ExtractFields() []string { return append([]string(nil), extractFields...) }

func checkExtract(args []Arg) (Result, error) {
	if err := wantCount("EXTRACT", args, 2, 2); err != nil {
		return Result{}, err
	}
	if args[0].Type != column.Text || args[0].Const == nil || args[0].Const.Null {
		return Result{}, wrong(0, "arguments", "EXTRACT needs the name of a field").
			hint("write EXTRACT(HOUR FROM t)")
	}
	field := strings.ToUpper(args[0].Const.S)
	known := false
	for _, f := range extractFields {
		known = known || f == field
	}
	if !known {
		return Result{}, wrong(0, "arguments", "EXTRACT knows no field %s", field).
			hint("the fields are %s", strings.Join(extractFields, ", "))
	}
	if args[1].Type == column.Interval {
		return Result{}, wrong(1, "types", "EXTRACT needs a TIMESTAMP, not INTERVAL").hint("HOURS(…) gives the length of an interval")
	}
	t := column.Integer
	if field == "SECOND" {
		t = column.Real
	}
	return Result{t, nil, []column.Type{column.Text, column.Timestamp}}, wantType("EXTRACT", args, 1, column.Timestamp)
}

// evalExtract reads the field once: Check has seen to it that it is constant.
func evalExtract(_ *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	const day, hour, minute = 86400e6, 3600e6, 60e6
	if n == 0 {
		return nil
	}
	field := strings.ToUpper(args[0].Dict.Texts[args[0].C[0]])
	t := args[1].I
	FirstRow(on, n, func(i int) bool {
		ofDay := t[i] % day
		if ofDay < 0 {
			ofDay += day
		}
		switch field {
		case "SECOND":
			out.F[i] = float64(ofDay%minute) / 1e6
		case "MINUTE":
			out.I[i] = ofDay % hour / minute
		case "HOUR":
			out.I[i] = ofDay / hour
		default:
			out.I[i] = calendar(field, t[i])
		}
		return false
	})
	return nil
}

func calendar(field string, us int64) int64 {
	date := time.UnixMicro(us).UTC()
	switch field {
	case "YEAR":
		return int64(date.Year())
	case "MONTH":
		return int64(date.Month())
	case "DAY":
		return int64(date.Day())
	}
	return (int64(date.Weekday())+6)%7 + 1
}

func checkHours(args []Arg) (Result, error) {
	if err := wantCount("HOURS", args, 1, 1); err != nil {
		return Result{}, err
	}
	r := Result{column.Real, column.Symbol("h"), repeatType(column.Interval, 1)}
	if err := wantType("HOURS", args, 0, column.Interval); err != nil {
		return r, err.(*ArgumentError).hint("the difference of two time stamps is an interval")
	}
	return r, nil
}

func evalHours(_ *Arena, args []column.Vector, _ []uint64, n int, out *column.Vector) error {
	for i, us := range args[0].I[:n] {
		out.F[i] = float64(us) / 3600e6
	}
	return nil
}
