package plan

// Apart is a copy of a plan in which no node stands twice, so that what is
// counted for a node is that of one place in the tree. Views share their plans.
// Single rows without columns stay shared: Go gives things without size no
// address of their own.
func Apart(n Node) Node {
	in := n.Inputs()
	out := make([]Node, len(in))
	for i, child := range in {
		out[i] = Apart(child)
	}
	switch n := n.(type) {
	case *Values:
		c := *n
		return &c
	case *Scan:
		c := *n
		return &c
	}
	return withInputs(n, out)
}
