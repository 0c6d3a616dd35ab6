package function

import (
	"fmt"
	"math"

	"nearcell/catalog/column"
)

// numberScalars are the functions that keep an INTEGER an INTEGER.
func numberScalars() []*Scalar {
	return []*Scalar{
		{Name: "ABS", Signature: "ABS(x)", Meaning: "x without its sign, of a number or an interval",
			Example: "ABS(-2.5) = 2.5", CanFail: true, Check: checkAbs, Eval: evalAbs},
		{Name: "SIGN", Signature: "SIGN(x)", Meaning: "-1, 0 or 1 as x is below, at or above 0",
			Example: "SIGN(-2.5) = -1", Check: checkSign, Eval: evalSign},
		{Name: "FLOOR", Signature: "FLOOR(x)", Meaning: "the largest whole number not above x",
			Example: "FLOOR(-2.5) = -3", Check: checkWhole("FLOOR"), Eval: evalFloor},
		{Name: "CEILING", Aliases: []string{"CEIL"}, Signature: "CEILING(x)", Meaning: "the smallest whole number not below x",
			Example: "CEILING(2.1) = 3", Check: checkWhole("CEILING"), Eval: evalCeiling},
		{Name: "MOD", Signature: "MOD(x, y)", Meaning: "the rest of x divided by y, with the sign of x; the operator % does the same",
			Example: "MOD(-7, 3) = -1", CanFail: true, Check: checkMod, Eval: evalMod},
		{Name: "ROUND", Signature: "ROUND(x [, digits])",
			Meaning: "x to so many decimal places (0 if not given; negative: tens, hundreds), halves away from 0, computed on the decimal digits of x",
			Example: "ROUND(2.675, 2) = 2.68", CanFail: true, Check: checkRound, Eval: evalRound},
		{Name: "FLOOR_TO", Signature: "FLOOR_TO(x, step)",
			Meaning: "the largest multiple of step not above x: numbers, intervals, and time stamps (counted from 1970-01-01 00:00 UTC)",
			Example: "FLOOR_TO(7.3, 0.5) = 7.0", CanFail: true, Check: checkFloorTo, Eval: evalFloorTo},
	}
}

func checkAbs(args []Arg) (Result, error) {
	if err := wantCount("ABS", args, 1, 1); err != nil {
		return Result{}, err
	}
	if args[0].Type == column.Interval {
		return Result{column.Interval, nil, repeatType(column.Interval, 1)}, nil
	}
	t := numberType(args)
	return Result{t, args[0].Unit, repeatType(t, 1)}, wantNumber("ABS", args, 0)
}

func evalAbs(_ *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	if out.Type == column.Real {
		for i, x := range args[0].F[:n] {
			out.F[i] = math.Abs(x)
		}
		return nil
	}
	suspicious := false
	for i, x := range args[0].I[:n] {
		if x < 0 {
			x = -x
		}
		suspicious = suspicious || x < 0
		out.I[i] = x
	}
	if suspicious {
		if row := FirstRow(on, n, func(i int) bool { return out.I[i] < 0 }); row >= 0 {
			return &RowFault{Row: row, Code: "overflow", Message: fmt.Sprintf("ABS(%s) is beyond the 64 bits of an %s", args[0].Value(row), out.Type)}
		}
	}
	return nil
}

func checkSign(args []Arg) (Result, error) {
	if err := wantCount("SIGN", args, 1, 1); err != nil {
		return Result{}, err
	}
	return Result{column.Integer, nil, []column.Type{numberType(args)}}, wantNumber("SIGN", args, 0)
}

func evalSign(_ *Arena, args []column.Vector, _ []uint64, n int, out *column.Vector) error {
	if args[0].Type == column.Integer {
		signs(args[0].I[:n], out.I)
	} else {
		signs(args[0].F[:n], out.I)
	}
	return nil
}

func signs[T int64 | float64](in []T, out []int64) {
	for i, x := range in {
		switch {
		case x > 0:
			out[i] = 1
		case x < 0:
			out[i] = -1
		default:
			out[i] = 0
		}
	}
}

func checkWhole(name string) func(args []Arg) (Result, error) {
	return func(args []Arg) (Result, error) {
		if err := wantCount(name, args, 1, 1); err != nil {
			return Result{}, err
		}
		t := numberType(args)
		return Result{t, args[0].Unit, repeatType(t, 1)}, wantNumber(name, args, 0)
	}
}

func evalFloor(_ *Arena, args []column.Vector, _ []uint64, n int, out *column.Vector) error {
	if out.Type == column.Integer {
		copy(out.I, args[0].I[:n])
		return nil
	}
	for i, x := range args[0].F[:n] {
		out.F[i] = math.Floor(x) + 0
	}
	return nil
}

func evalCeiling(_ *Arena, args []column.Vector, _ []uint64, n int, out *column.Vector) error {
	if out.Type == column.Integer {
		copy(out.I, args[0].I[:n])
		return nil
	}
	for i, x := range args[0].F[:n] {
		out.F[i] = math.Ceil(x) + 0 // no negative zero
	}
	return nil
}

func checkMod(args []Arg) (Result, error) {
	if err := wantCount("MOD", args, 2, 2); err != nil {
		return Result{}, err
	}
	if err := firstError(wantNumber("MOD", args, 0), wantNumber("MOD", args, 1)); err != nil {
		return Result{}, err
	}
	unit, err := commonUnit("MOD", args)
	t := numberType(args)
	return Result{t, unit, repeatType(t, 2)}, err
}

func evalMod(_ *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	x, y := &args[0], &args[1]
	if out.Type == column.Integer {
		row := FirstRow(on, n, func(i int) bool {
			if y.I[i] == 0 {
				return true
			}
			out.I[i] = x.I[i] % y.I[i]
			return false
		})
		return noValue(row, "MOD(%s, %s) has no value", x, y)
	}
	row := FirstRow(on, n, func(i int) bool {
		out.F[i] = math.Mod(x.F[i], y.F[i]) + 0
		return out.F[i] != out.F[i]
	})
	return noValue(row, "MOD(%s, %s) has no value", x, y)
}

// noValue is the fault of a row, with its arguments in the message; nil for
// row -1.
func noValue(row int, format string, args ...*column.Vector) error {
	return rowFault(row, "no-value", format, args...)
}

func rowFault(row int, code, format string, args ...*column.Vector) error {
	if row < 0 {
		return nil
	}
	values := make([]any, len(args))
	for i, a := range args {
		values[i] = a.Value(row).String()
	}
	return &RowFault{Row: row, Code: code, Message: fmt.Sprintf(format, values...)}
}

func checkFloorTo(args []Arg) (Result, error) {
	if err := wantCount("FLOOR_TO", args, 2, 2); err != nil {
		return Result{}, err
	}
	switch t := args[0].Type; t {
	case column.Timestamp, column.Interval:
		if args[1].Type != column.Interval && args[1].Type != column.Null {
			return Result{}, wrong(1, "types", "FLOOR_TO of %s needs an INTERVAL as its step, not %s", t, args[1].Type).
				hint("write INTERVAL '1' HOUR")
		}
		return Result{t, nil, []column.Type{t, column.Interval}}, nil
	}
	if err := firstError(wantNumber("FLOOR_TO", args, 0), wantNumber("FLOOR_TO", args, 1)); err != nil {
		return Result{}, err
	}
	unit, err := commonUnit("FLOOR_TO", args)
	t := numberType(args)
	return Result{t, unit, repeatType(t, 2)}, err
}

func evalFloorTo(_ *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	x, step := &args[0], &args[1]
	if out.Type == column.Real {
		return floorReals(x, step, on, n, out)
	}
	over := false
	row := FirstRow(on, n, func(i int) bool {
		s := step.I[i]
		if s <= 0 {
			return true
		}
		rest := x.I[i] % s
		if rest < 0 {
			rest += s
		}
		out.I[i] = x.I[i] - rest
		over = out.I[i] > x.I[i]
		return over
	})
	if over {
		return rowFault(row, "overflow", "FLOOR_TO(%s, %s) is beyond 64 bits", x, step)
	}
	return rowFault(row, "no-value", "FLOOR_TO(%s, %s) has no value: the step must be above 0", x, step)
}

func floorReals(x, step *column.Vector, on []uint64, n int, out *column.Vector) error {
	var m multiples
	row := FirstRow(on, n, func(i int) bool {
		s := step.F[i]
		if s <= 0 || math.IsInf(s, 1) || math.IsInf(x.F[i], 0) {
			return true
		}
		if s != m.step {
			m = multiplesOf(s)
		}
		out.F[i] = m.floor(x.F[i])
		return math.IsInf(out.F[i], 0)
	})
	return noValue(row, "FLOOR_TO(%s, %s) has no value", x, step)
}
