package relation

// Holds is about how many bytes the relation holds beside its input of so many rows
// while it runs: the order of a log by logger and instant, or the coordinates and the
// measures of cells. need says which columns are asked for.
func (b *Bound) Holds(rows int, need []bool) int64 {
	if b.Def.Over == OverRows {
		const order = 8 // twice a number of a row
		return int64(rows) * int64(order+8*len(b.Clauses.By))
	}
	const place = 3 * 8
	measures := 0
	for i, c := range b.Columns {
		if c.Site < 0 && (need == nil || need[i]) {
			measures++
		}
	}
	return int64(rows) * int64(place+8*measures)
}
