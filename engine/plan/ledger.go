package plan

// Weighing is a call of an aggregate that weighs its rows by the volume of cells, or adds
// volumes up: Column is where the volume stands in the aggregate's input.
type Weighing struct {
	Call     int
	Relation *Relation
	Column   int
	Sum      bool // it adds up
	// Plain: the rows are those of the relation, less some; else a join or a group
	// stands between, which may repeat or lose cells.
	Plain bool
}

// Weighings are the calls whose answers speak of a space that solids close: what of
// it they speak for can be said, and what is missing.
func Weighings(n *Aggregate) []Weighing {
	input := Lineage(n.Input)
	var found []Weighing
	for i := range n.Calls {
		var of *Weighing
		c := &n.Calls[i]
		measured, sum := c.Weight, c.Weight == nil && isSum(c) && !c.Distinct
		if sum {
			measured = c.Args[0]
		}
		for _, o := range reads(measured, input) {
			if !o.volume() {
				continue
			}
			if of != nil && of.Relation != o.Relation {
				of = nil // two spaces in one weight
				break
			}
			for at, from := range input {
				if from == o {
					of = &Weighing{i, o.Relation, at, sum, cellsOf(n.Input) == o.Relation}
				}
			}
		}
		if of != nil {
			found = append(found, *of)
		}
	}
	return found
}

// volume reports whether the column is the volume of the cells that divide a closed
// space among the rows.
func (o Origin) volume() bool {
	if !o.extensive() {
		return false
	}
	b := o.Relation.Bound
	c := b.Columns[o.Column]
	return (b.Def.Own || b.Def.Pairs) && c.Power == 3 && c.Name == "volume" && b.Closed()
}
