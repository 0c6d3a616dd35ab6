package plan

// Smoothed is a MAX or MIN over values of a SERIES that were computed between
// readings: the highest and the lowest reading are no more among them.
type Smoothed struct {
	Call     int
	Relation *Relation
}

// SmoothedExtremes are those of an aggregate.
func SmoothedExtremes(n *Aggregate) []Smoothed {
	var found []Smoothed
	var input []Origin
	for i := range n.Calls {
		c := &n.Calls[i]
		if c.Fn.Name != "MAX" && c.Fn.Name != "MIN" {
			continue
		}
		if input == nil {
			input = Lineage(n.Input)
		}
		for _, o := range reads(c.Args[0], input) {
			if r := o.smoothed(); r != nil {
				found = append(found, Smoothed{i, r})
				break
			}
		}
	}
	return found
}

// smoothed follows a column down to the SERIES that computed it, through relations
// that only hand it on; nil where there is none.
func (o Origin) smoothed() *Relation {
	for o.Relation != nil {
		b := o.Relation.Bound
		if b.Smooths(o.Column) {
			return o.Relation
		}
		site := b.Columns[o.Column].Site
		if site < 0 {
			return nil
		}
		o = Lineage(o.Relation.Input)[site]
	}
	return nil
}
