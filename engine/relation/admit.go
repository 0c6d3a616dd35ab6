package relation

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
	"nearcell/voronoi/delaunay"
)

// admitted are the rows of the input that may partition: those that OMITTING
// does not name and that have a value of FOR EACH.
func admitted(b *Bound, env *Env, input *column.Table) ([]int32, error) {
	if err := present(b, input); err != nil {
		return nil, err
	}
	omit, err := omitted(b, env, input)
	if err != nil {
		return nil, err
	}
	rows := make([]int32, input.N)
	delaunay.AdviseHugePages(rows)
	rows = rows[:0]
	missing := make([]int, len(b.Clauses.Each))
next:
	for row := range int32(input.N) {
		if omit != nil && column.Bit(omit, int(row)) {
			continue
		}
		for i, c := range b.Clauses.Each {
			if input.Cols[c].IsNull(int(row)) {
				missing[i]++
				continue next
			}
		}
		rows = append(rows, row)
	}
	for i, n := range missing {
		if n > 0 {
			name := b.Input[b.Clauses.Each[i]].Name
			env.Notes.Add(note.Note, note.Sites, "%s without a value of %s %s in no partition of FOR EACH %s and left out",
				count(n, "row"), name, are(n), name)
		}
	}
	return rows, nil
}

// present checks that every row has an identifier and a finite position. The
// first faulty row in the order of the input is named.
func present(b *Bound, input *column.Table) error {
	id := &input.Cols[b.ID]
	for row := range input.N {
		if id.IsNull(row) {
			return problem.New("no-id", b.Place, "row %d of %s has no %s", row+1, b.Name, b.Input[b.ID].Name).
				WithHint("each site needs an identifier; leave such rows out with OF (SELECT … WHERE id IS NOT NULL)")
		}
		for _, c := range [3]int{b.X, b.Y, b.Z} {
			v := &input.Cols[c]
			if v.IsNull(row) {
				return problem.New("no-position", b.Place, "site %s of %s has no %s", idText(id, row), b.Name, b.Input[c].Name).
					WithHint("a site needs a position; leave such rows out with OF (SELECT … WHERE %s IS NOT NULL)", b.Input[c].Name)
			}
			if v.Type == column.Real && (math.IsInf(v.F[row], 0) || math.IsNaN(v.F[row])) {
				return problem.New("no-position", b.Place, "%s of site %s of %s is %s, no coordinate", b.Input[c].Name,
					idText(id, row), b.Name, column.FormatReal(v.F[row]))
			}
		}
	}
	return nil
}

// omitted marks the rows that OMITTING names. An identifier that no row has is
// an error: a typing mistake would leave the site in.
func omitted(b *Bound, env *Env, input *column.Table) ([]uint64, error) {
	if len(b.Clauses.Omitting) == 0 {
		return nil, nil
	}
	id := &input.Cols[b.ID]
	omit := make([]uint64, column.Words(input.N))
	for i, want := range b.Clauses.Omitting {
		found := false
		for row := range input.N {
			if plainID(id, row) == want {
				column.SetBit(omit, row)
				found = true
			}
		}
		if found {
			because := ""
			if b.Clauses.Because != "" {
				because = ": " + b.Clauses.Because
			}
			env.Notes.Add(note.Note, note.Sites, "'%s' was left out before the partition (OMITTING%s)", want, because)
			continue
		}
		at := b.Place
		if i < len(b.Clauses.OmitPlaces) {
			at = b.Clauses.OmitPlaces[i]
		}
		p := problem.New("no-site", at, "there is no site '%s' in %s to leave out", want, b.Name)
		if near := lang.Nearest(want, identifiers(id)); near != "" {
			p.WithHint("did you mean '%s'?", near)
		}
		return nil, p
	}
	return omit, nil
}

// identifiers are the distinct identifiers, for the nearest name.
func identifiers(id *column.Vector) []string {
	var all []string
	for row := range id.N {
		all = append(all, plainID(id, row))
	}
	slices.Sort(all)
	return slices.Compact(all)
}

// distinct checks that no identifier stands twice in a part, whose rows are
// sorted.
func distinct(b *Bound, input *column.Table, o *order, rows []int32) error {
	id := &input.Cols[b.ID]
	repeated, first := 0, int32(-1)
	for k := 1; k < len(rows); k++ {
		if o.sameID(rows[k-1], rows[k]) {
			repeated++
			if first < 0 {
				first = rows[k]
			}
		}
	}
	if repeated == 0 {
		return nil
	}
	times := 0
	for _, r := range rows {
		if o.sameID(r, first) {
			times++
		}
	}
	p := problem.New("repeated-id", b.Place, "%s %s stands %d times in %s%s: identifiers of sites must differ",
		b.Input[b.ID].Name, idText(id, int(first)), times, b.Name, inPart(b, input, first))
	if len(b.Clauses.Each) == 0 {
		return p.WithHint("FOR EACH makes one partition for each instant or pass")
	}
	return p.WithHint("one row for each site and partition: GROUP BY them in OF (SELECT …)")
}

// inPart says of which part a row is: " at t = 2031-04-07 08:15:00".
func inPart(b *Bound, input *column.Table, row int32) string {
	if len(b.Clauses.Each) == 0 {
		return ""
	}
	var s []string
	for _, c := range b.Clauses.Each {
		s = append(s, b.Input[c].Name+" = "+input.Cols[c].Value(int(row)).String())
	}
	return " at " + strings.Join(s, ", ")
}

// idText writes an identifier for messages: 'L17' or 17.
func idText(id *column.Vector, row int) string {
	if id.Type == column.Text {
		return "'" + id.Text(row) + "'"
	}
	return plainID(id, row)
}

// plainID is the identifier as OMITTING writes it inside its quotes.
func plainID(id *column.Vector, row int) string {
	switch {
	case id.IsNull(row):
		return ""
	case id.Type == column.Text:
		return id.Text(row)
	case id.Type == column.Integer:
		return strconv.FormatInt(id.I[row], 10)
	}
	return id.Value(row).String()
}

// count writes a number with its noun: 1 row, 12 rows.
func count(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}

func are(n int) string {
	if n == 1 {
		return "is"
	}
	return "are"
}
