package function

import (
	"strings"
	"sync"
	"time"
	_ "time/tzdata" // machines without the database of zones have this one

	"nearcell/catalog/column"
)

// Zoned is t AT TIME ZONE zone. It has its own syntax and cannot be called by
// name, so that it is not among the registered functions.
var Zoned = &Scalar{Name: zoned, Signature: "t AT TIME ZONE zone",
	Meaning: "what the clocks of a zone ('Europe/Zurich', '+01:00') or at an interval from UTC show at a time stamp",
	Example: "TIMESTAMP '2031-07-01 12:00:00' AT TIME ZONE 'Europe/Zurich' = TIMESTAMP '2031-07-01 14:00:00'",
	CanFail: true, Check: checkZone, Eval: evalZone}

const zoned = "AT TIME ZONE"

func checkZone(args []Arg) (Result, error) {
	if err := wantCount(zoned, args, 2, 2); err != nil {
		return Result{}, err
	}
	zone := column.Text
	if args[1].Type == column.Interval {
		zone = column.Interval
	}
	r := Result{column.Timestamp, nil, []column.Type{column.Timestamp, zone}}
	if err := wantType(zoned, args, 0, column.Timestamp); err != nil {
		return r, err
	}
	if zone == column.Text {
		if err := wantType(zoned, args, 1, column.Text); err != nil {
			return r, err.(*ArgumentError).hint("write a zone such as 'Europe/Zurich', or an INTERVAL")
		}
		if c := args[1].Const; c != nil && !c.Null {
			if _, ok := zoneNamed(c.S); !ok {
				return r, wrong(1, "arguments", "there is no time zone '%s'", c.S).
					hint("zones are called as in 'Europe/Zurich', or '+01:00' and the like")
			}
		}
	}
	return r, nil
}

// zones are those that were asked for, under their names; nil: there is none.
var zones sync.Map

// zoneNamed finds a zone of the database or a fixed one, ±hh:mm. The zone of
// this machine is none: a query means the same everywhere.
func zoneNamed(name string) (*time.Location, bool) {
	if known, ok := zones.Load(name); ok {
		z := known.(*time.Location)
		return z, z != nil
	}
	var z *time.Location
	if t, err := time.Parse("-07:00", name); err == nil {
		z = t.Location()
	} else if name != "" && !strings.EqualFold(name, "Local") {
		if z, err = time.LoadLocation(name); err != nil {
			z = nil
		}
	}
	zones.Store(name, z)
	return z, z != nil
}

// Time stamps stay within the years 1 to 9999, as everywhere.
var firstTime, lastTime = time.Date(1, 1, 1, 0, 0, 0, 0, time.UTC).UnixMicro(), time.Date(10000, 1, 1, 0, 0, 0, 0, time.UTC).UnixMicro() - 1

func evalZone(_ *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	t := args[0].I
	fault := ""
	row := FirstRow(on, n, func(i int) bool {
		shift := int64(0)
		if args[1].Type == column.Interval {
			shift = args[1].I[i]
		} else {
			z, ok := zoneNamed(args[1].Text(i))
			if !ok {
				fault = "there is no time zone '" + args[1].Text(i) + "'"
				return true
			}
			_, seconds := time.UnixMicro(t[i]).In(z).Zone()
			shift = int64(seconds) * 1e6
		}
		out.I[i] = t[i] + shift
		if shift > 0 && out.I[i] < t[i] || shift < 0 && out.I[i] > t[i] || out.I[i] < firstTime || out.I[i] > lastTime {
			fault = "the time at that zone is beyond the years 1 to 9999"
			return true
		}
		return false
	})
	if row < 0 {
		return nil
	}
	return &RowFault{Row: row, Code: "no-value", Message: fault}
}
