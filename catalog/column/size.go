package column

// SizeOf is how many bytes the values of a table take, each dictionary once.
func SizeOf(t *Table) int64 {
	total := int64(0)
	seen := map[*Dict]bool{}
	for i := range t.Cols {
		v := &t.Cols[i]
		total += int64(8*(len(v.I)+len(v.F)+len(v.Bits)+len(v.Valid)) + 4*len(v.C))
		if v.Dict == nil || seen[v.Dict] {
			continue
		}
		seen[v.Dict] = true
		const header = 16 // of a Go string
		for _, text := range v.Dict.Texts {
			total += int64(header + len(text))
		}
	}
	return total
}
