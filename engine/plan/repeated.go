package plan

// Repeated is, by call, the relation with FOR EACH whose sites an aggregate weighs in
// several partitions at once: no key of its groups is one of FOR EACH. Its values are pairs
// of a site and a partition, and those of one site depend on each other.
func Repeated(n *Aggregate) map[int]*Relation {
	input := Lineage(n.Input)
	for _, k := range n.Keys {
		for _, o := range reads(k, input) {
			if o.isEach() {
				return nil
			}
		}
	}
	found := map[int]*Relation{}
	for i := range n.Calls {
		for _, o := range reads(n.Calls[i].Weight, input) {
			if o.extensive() && len(o.Relation.Bound.Clauses.Each) > 0 {
				found[i] = o.Relation
			}
		}
	}
	return found
}
