package function

import "nearcell/catalog/column"

func countAggregates() []*Aggregate {
	return []*Aggregate{
		{Name: "COUNT", Signature: "COUNT(*), COUNT([DISTINCT] x)", Meaning: "the number of rows, or of rows where x is not NULL",
			Example: "COUNT(*)", Star: true, Check: checkCount, New: func(Setup) Accumulator { return &counter{} }, Slide: slideCount},
		{Name: "SHARE", Signature: "SHARE(condition)", Meaning: "the fraction of the rows, or of their weight, for which a condition holds",
			Example: "SHARE(temp > 8) WEIGHTED BY volume", Weighted: true, Check: checkShare,
			New: func(s Setup) Accumulator { return &share{tally: tally{weighted: s.Weighted}} }, Slide: slideShare},
	}
}

func checkCount(args []Arg, _ *Arg) (Result, error) {
	if err := wantCount("COUNT", args, 0, 1); err != nil {
		return Result{}, err
	}
	r := Result{Type: column.Integer}
	for _, a := range args {
		r.Args = append(r.Args, a.Type)
	}
	return r, nil
}

type counter struct {
	tally
	n []int64
}

func (c *counter) Add(groups []int32, on []uint64, n int, args []column.Vector, _ *column.Vector) error {
	rows, _, err := c.begin(groups, on, n, args, nil)
	for _, i := range rows {
		g := groups[i]
		c.n = grow(c.n, g)
		c.n[g]++
	}
	return err
}

func (c *counter) Merge(other Accumulator, to []int32) error {
	for g, n := range other.(*counter).n {
		c.n = grow(c.n, to[g])
		c.n[to[g]] += n
	}
	return nil
}

func (c *counter) Result(groups int) (column.Vector, error) {
	v := column.New(column.Integer, nil, groups)
	copy(v.I, c.n)
	return v, nil
}

// checkWeight checks the type of a weight.
func checkWeight(w *Arg) error {
	if w == nil || w.Type.Numeric() || w.Type == column.Null {
		return nil
	}
	e := wrong(WeightArg, "types", "a weight is a number, not %s", w.Type)
	if w.Type == column.Interval {
		return e.hint("HOURS(…) makes a number of an interval")
	}
	return e
}

func checkShare(args []Arg, weight *Arg) (Result, error) {
	if err := wantCount("SHARE", args, 1, 1); err != nil {
		return Result{}, err
	}
	if err := wantType("SHARE", args, 0, column.Boolean); err != nil {
		return Result{}, err.(*ArgumentError).hint("write a condition, such as SHARE(temp > 8)")
	}
	return Result{column.Real, nil, repeatType(column.Boolean, 1)}, checkWeight(weight)
}

// share adds the weights of the rows that hold; their total is in the tally or,
// without weights, in all.
type share struct {
	tally
	holds  []dd
	counts []shareCount
}

type shareCount struct{ holds, all int64 }

func (s *share) Add(groups []int32, on []uint64, n int, args []column.Vector, weight *column.Vector) error {
	rows, weights, err := s.begin(groups, on, n, args, weight)
	if err != nil {
		return err
	}
	for _, i := range rows {
		g, yes := groups[i], column.Bit(args[0].Bits, int(i))
		if weights != nil {
			s.holds = grow(s.holds, g)
			if yes {
				s.holds[g] = s.holds[g].plus(weights[i])
			}
			continue
		}
		s.counts = grow(s.counts, g)
		s.counts[g].all++
		if yes {
			s.counts[g].holds++
		}
	}
	return nil
}

func (s *share) Merge(other Accumulator, to []int32) error {
	o := other.(*share)
	s.mergeFacts(&o.tally, to)
	for g, w := range o.holds {
		s.holds = grow(s.holds, to[g])
		s.holds[to[g]] = s.holds[to[g]].add(w)
	}
	for g, c := range o.counts {
		s.counts = grow(s.counts, to[g])
		s.counts[to[g]].holds += c.holds
		s.counts[to[g]].all += c.all
	}
	return nil
}

func (s *share) Result(groups int) (column.Vector, error) {
	v := column.New(column.Real, nil, groups)
	for g := range groups {
		switch {
		case s.weighted && s.fact(g).sum.hi > 0:
			v.F[g] = min(1, s.holds[g].over(s.fact(g).sum).value())
		case !s.weighted && g < len(s.counts) && s.counts[g].all > 0:
			v.F[g] = float64(s.counts[g].holds) / float64(s.counts[g].all)
		default:
			v.SetNull(g)
		}
	}
	return v, nil
}
