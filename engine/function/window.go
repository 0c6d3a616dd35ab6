package function

import (
	"math"

	"nearcell/catalog/column"
)

// WindowKind says what a window function gives.
type WindowKind uint8

// The window functions beside the aggregates. PickFirst and the other picks give the
// value of a row, which Pick finds; the others are numbers.
const (
	RowNumber WindowKind = iota
	Rank
	DenseRank
	PercentRank
	CumeDist
	Ntile
	PickFirst // of the frame
	PickLast  // of the frame
	PickNth   // of the frame
	PickBefore
	PickAfter
)

// Window is a function of a row among those of its partition: of its place there,
// or of another row. It needs OVER (…).
type Window struct {
	Name      string // upper case
	Signature string
	Meaning   string
	Example   string // a select item over columns temp, volume, …
	Kind      WindowKind
	Framed    bool // looks at the frame; else the partition counts and no frame may stand
	Ordered   bool // needs ORDER BY inside OVER
	Check     func(args []Arg) (Result, error)
}

func windowFunctions() []*Window {
	count := func(name string) func([]Arg) (Result, error) {
		return func(args []Arg) (Result, error) { return Result{Type: column.Integer}, wantCount(name, args, 0, 0) }
	}
	share := func(name string) func([]Arg) (Result, error) {
		return func(args []Arg) (Result, error) { return Result{Type: column.Real}, wantCount(name, args, 0, 0) }
	}
	return []*Window{
		{Name: "CUME_DIST", Signature: "CUME_DIST() OVER (… ORDER BY …)", Meaning: "the share of the rows of the partition that do not come after this one",
			Example: "CUME_DIST() OVER (ORDER BY temp)", Kind: CumeDist, Ordered: true, Check: share("CUME_DIST")},
		{Name: "DENSE_RANK", Signature: "DENSE_RANK() OVER (… ORDER BY …)", Meaning: "the place among the different values, without gaps behind equals",
			Example: "DENSE_RANK() OVER (ORDER BY temp DESC)", Kind: DenseRank, Ordered: true, Check: count("DENSE_RANK")},
		{Name: "FIRST_VALUE", Signature: "FIRST_VALUE(x) OVER (…)", Meaning: "x in the first row of the frame", Example: "FIRST_VALUE(id) OVER (ORDER BY temp)",
			Kind: PickFirst, Framed: true, Check: checkPick("FIRST_VALUE", 1)},
		{Name: "LAG", Signature: "LAG(x [, rows [, otherwise]]) OVER (… ORDER BY …)", Meaning: "x so many rows before (1 if not said); where there is none, otherwise or NULL",
			Example: "temp - LAG(temp) OVER (ORDER BY z)", Kind: PickBefore, Ordered: true, Check: checkNeighbour("LAG")},
		{Name: "LAST_VALUE", Signature: "LAST_VALUE(x) OVER (…)",
			Meaning: "x in the last row of the frame (which ends with the current row and its equals unless it says more)",
			Example: "LAST_VALUE(id) OVER (ORDER BY z ROWS BETWEEN 1 PRECEDING AND 1 FOLLOWING)",
			Kind:    PickLast, Framed: true, Check: checkPick("LAST_VALUE", 1)},
		{Name: "LEAD", Signature: "LEAD(x [, rows [, otherwise]]) OVER (… ORDER BY …)", Meaning: "x so many rows after (1 if not said); where there is none, otherwise or NULL",
			Example: "LEAD(temp) OVER (ORDER BY z)", Kind: PickAfter, Ordered: true, Check: checkNeighbour("LEAD")},
		{Name: "NTH_VALUE", Signature: "NTH_VALUE(x, n) OVER (…)", Meaning: "x in the n-th row of the frame, NULL where it has fewer",
			Example: "NTH_VALUE(id, 2) OVER (ORDER BY temp)", Kind: PickNth, Framed: true, Check: checkPick("NTH_VALUE", 2)},
		{Name: "NTILE", Signature: "NTILE(n) OVER (… ORDER BY …)", Meaning: "the number of the part, of n parts as equal as may be, the larger ones first",
			Example: "NTILE(4) OVER (ORDER BY temp)", Kind: Ntile, Ordered: true, Check: checkTiles},
		{Name: "PERCENT_RANK", Signature: "PERCENT_RANK() OVER (… ORDER BY …)", Meaning: "(RANK - 1) / (rows - 1), from 0 to 1; 0 of one row",
			Example: "PERCENT_RANK() OVER (ORDER BY temp)", Kind: PercentRank, Ordered: true, Check: share("PERCENT_RANK")},
		{Name: "RANK", Signature: "RANK() OVER (… ORDER BY …)", Meaning: "the place in the order; equals have one, and the next place is left out",
			Example: "RANK() OVER (PARTITION BY level ORDER BY temp DESC)", Kind: Rank, Ordered: true, Check: count("RANK")},
		{Name: "ROW_NUMBER", Signature: "ROW_NUMBER() OVER (…)", Meaning: "the number of the row in the order of the partition, from 1; equals keep the order that they come in",
			Example: "ROW_NUMBER() OVER (PARTITION BY level ORDER BY temp)", Kind: RowNumber, Check: count("ROW_NUMBER")},
	}
}

// checkPick checks a function that gives x of a row of the frame.
func checkPick(name string, n int) func([]Arg) (Result, error) {
	return func(args []Arg) (Result, error) {
		if err := wantCount(name, args, n, n); err != nil {
			return Result{}, err
		}
		r := Result{Type: valueType(args[:1]), Unit: args[0].Unit}
		r.Args = []column.Type{r.Type}
		if n > 1 {
			r.Args = append(r.Args, column.Integer)
			if _, err := rowsArg(name, args, 1, 1); err != nil {
				return Result{}, err
			}
		}
		return r, nil
	}
}

func checkNeighbour(name string) func([]Arg) (Result, error) {
	return func(args []Arg) (Result, error) {
		if err := wantCount(name, args, 1, 3); err != nil {
			return Result{}, err
		}
		if len(args) > 1 {
			if _, err := rowsArg(name, args, 1, 0); err != nil {
				return Result{}, err
			}
		}
		values := args[:1:1]
		if len(args) == 3 {
			values = append(values, args[2])
		}
		t, err := commonType(name, values)
		if err != nil {
			err.(*ArgumentError).Arg = 2
			return Result{}, err
		}
		if t == column.Null {
			t = column.Real
		}
		unit, err := commonUnit(name, values)
		if err != nil {
			err.(*ArgumentError).Arg = 2
			return Result{}, err
		}
		return Result{t, unit, []column.Type{t, column.Integer, t}[:len(args)]}, nil
	}
}

func checkTiles(args []Arg) (Result, error) {
	if err := wantCount("NTILE", args, 1, 1); err != nil {
		return Result{}, err
	}
	_, err := rowsArg("NTILE", args, 0, 1)
	return Result{Type: column.Integer, Args: []column.Type{column.Integer}}, err
}

func valueType(args []Arg) column.Type {
	if args[0].Type == column.Null {
		return column.Real
	}
	return args[0].Type
}

// rowsArg is a constant number of rows.
func rowsArg(name string, args []Arg, i int, least int64) (int64, error) {
	c := args[i].Const
	if c == nil || c.Null || c.Type != column.Integer || c.I < least {
		return 0, wrong(i, "arguments", "%s needs a constant whole number of %d or more here", name, least)
	}
	return c.I, nil
}

// Place numbers the rows of one partition in its order: peers[k] is the first
// row, and ends[k] the row behind the last, of those that are equal to row k in the
// order. rows[k] is where the value of row k goes.
func (w *Window) Place(rows, peers, ends []int32, tiles int64, out *Slid) {
	n := int64(len(rows))
	dense := int64(0)
	for k, row := range rows {
		if int(peers[k]) == k {
			dense++
		}
		switch w.Kind {
		case RowNumber:
			out.I[row] = int64(k) + 1
		case Rank:
			out.I[row] = int64(peers[k]) + 1
		case DenseRank:
			out.I[row] = dense
		case PercentRank:
			out.F[row] = float64(peers[k]) / float64(max(1, n-1))
		case CumeDist:
			out.F[row] = float64(ends[k]) / float64(n)
		case Ntile:
			out.I[row] = tile(int64(k), n, tiles)
		}
	}
}

// tile is the part of row k of n, of so many parts, the first n % parts of which have
// one row more.
func tile(k, n, parts int64) int64 {
	if parts >= n {
		return k + 1
	}
	size, larger := n/parts, n%parts
	if k < larger*(size+1) {
		return k/(size+1) + 1
	}
	return (k-larger*(size+1))/size + larger + 1
}

// Pick finds the row whose value each row takes: by the frame lo..hi-1 of each, or
// so many rows before or after; -1 where there is none.
func (w *Window) Pick(rows, lo, hi []int32, by int64, out *Slid) {
	n := int64(len(rows))
	by = min(by, math.MaxInt32)
	for k, row := range rows {
		at := int64(-1)
		switch w.Kind {
		case PickBefore:
			at = int64(k) - by
		case PickAfter:
			at = int64(k) + by
		case PickFirst, PickLast, PickNth:
			if lo[k] >= hi[k] {
				break
			}
			at = int64(lo[k])
			if w.Kind == PickLast {
				at = int64(hi[k]) - 1
			} else if w.Kind == PickNth {
				if at += by - 1; at >= int64(hi[k]) {
					at = -1
				}
			}
		}
		out.Pick[row] = -1
		if at >= 0 && at < n {
			out.Pick[row] = rows[at]
		}
	}
}
