package function

import (
	"nearcell/catalog/column"
)

// choiceScalars choose among their arguments.
func choiceScalars() []*Scalar {
	return []*Scalar{
		{Name: "COALESCE", Signature: "COALESCE(x, y, …)", Meaning: "the first argument that is not NULL; those after it are not computed",
			Example: "COALESCE(NULL, 2, 3) = 2", Lazy: true, Check: checkAlike("COALESCE", 1, -1)},
		{Name: "NULLIF", Signature: "NULLIF(x, y)", Meaning: "NULL where x equals y, else x",
			Example: "NULLIF(-99, -99) IS NULL", Lazy: true, Check: checkAlike("NULLIF", 2, 2)},
		{Name: "GREATEST", Signature: "GREATEST(x, y, …)", Meaning: "the largest argument; NULL if one of them is",
			Example: "GREATEST(1, 3, 2) = 3", Check: checkOrdered("GREATEST"), Eval: evalGreatest},
		{Name: "LEAST", Signature: "LEAST(x, y, …)", Meaning: "the smallest argument; NULL if one of them is",
			Example: "LEAST(1, 3, 2) = 1", Check: checkOrdered("LEAST"), Eval: evalLeast},
	}
}

func checkAlike(name string, least, most int) func([]Arg) (Result, error) {
	return func(args []Arg) (Result, error) {
		if err := wantCount(name, args, least, most); err != nil {
			return Result{}, err
		}
		t, err := commonType(name, args)
		if err != nil {
			return Result{}, err
		}
		unit, err := commonUnit(name, args)
		return Result{t, unit, repeatType(t, len(args))}, err
	}
}

func checkOrdered(name string) func([]Arg) (Result, error) {
	alike := checkAlike(name, 1, -1)
	return func(args []Arg) (Result, error) {
		r, err := alike(args)
		if err == nil && (r.Type == column.Point || r.Type == column.Boolean) {
			return r, wrong(0, "types", "%s needs something that has an order, not %s", name, r.Type)
		}
		return r, err
	}
}

func evalGreatest(a *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	return evalExtreme(a, args, on, n, out, 1)
}

func evalLeast(a *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	return evalExtreme(a, args, on, n, out, -1)
}

// evalExtreme keeps the largest (sign 1) or smallest (sign -1) argument.
func evalExtreme(a *Arena, args []column.Vector, on []uint64, n int, out *column.Vector, sign int) error {
	switch out.Type {
	case column.Real:
		copy(out.F, args[0].F[:n])
		for _, v := range args[1:] {
			extremes(out.F[:n], v.F[:n], sign > 0)
		}
	case column.Text:
		texts := a.Texts()
		FirstRow(on, n, func(i int) bool {
			best := args[0].Text(i)
			for k := range args[1:] {
				if s := args[k+1].Text(i); sign > 0 && s > best || sign < 0 && s < best {
					best = s
				}
			}
			out.C[i] = texts.Code(best)
			return false
		})
		out.Dict = texts.Finish()
	default:
		copy(out.I, args[0].I[:n])
		for _, v := range args[1:] {
			extremes(out.I[:n], v.I[:n], sign > 0)
		}
	}
	return nil
}

func extremes[T int64 | float64](best, other []T, greatest bool) {
	for i, x := range other {
		if (x > best[i]) == greatest && x != best[i] {
			best[i] = x
		}
	}
}
