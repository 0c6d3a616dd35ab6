package plan

// Rule is one way to improve a plan. A rule gives a new tree and leaves the one
// that it was given as it is.
type Rule struct {
	Name  string
	Apply func(Node) (Node, error)
}

// Rules are all rules, in the order in which Optimise applies them: conditions
// are split and moved once they are folded, equalities become keys once they
// have arrived at their join, and columns are dropped last, when it is settled
// who reads them.
var Rules = []Rule{
	{"fold", fold},
	{"push down", pushDown},
	{"join keys", joinKeys},
	{"top", top},
	{"prune", prune},
}

// Optimise applies every rule once.
func Optimise(n Node) (Node, error) {
	var err error
	for _, r := range Rules {
		if n, err = r.Apply(n); err != nil {
			return nil, err
		}
	}
	return n, nil
}
