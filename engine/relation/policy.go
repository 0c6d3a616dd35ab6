package relation

import (
	"fmt"
	"slices"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/problem"
)

// Policies for several sites at one place.
const (
	Split = "SPLIT"
	Mean  = "MEAN"
	First = "FIRST"
	Fail  = "FAIL"
)

// duplicates applies the policy for sites at one place and says how many there
// are. With SPLIT, nothing changes but the shares that place has set; with
// FIRST and MEAN the row with the smallest identifier stands for all (newSites
// averages its numbers and drops the other rows).
func duplicates(b *Bound, env *Env, input *column.Table, o *order, parts []*Part) error {
	var shared []int32 // rows that share a place, for the note
	for _, p := range parts {
		if p.Share == nil {
			continue
		}
		for k, row := range p.Rows {
			if p.Share[k] < 1 {
				shared = append(shared, row)
			}
		}
		if b.policy() == Fail {
			return failDuplicates(b, input, p)
		}
	}
	if len(shared) == 0 {
		return nil
	}
	names := o.names(shared)
	what := ""
	switch b.policy() {
	case Split:
		what = "the measures of their cell are split equally among them"
	case First:
		what = "only the first identifier of each place is kept"
	case Mean:
		what = "each place is one site under its first identifier, its numbers are their means" + b.otherMeans()
	}
	env.Notes.Add(note.Note, note.Sites, "%s of %s share a place with another (%s): %s (DUPLICATES %s)",
		count(len(names), "site"), b.Name, someOf(names), what, b.policy())
	return nil
}

// otherMeans says which columns have means that are not plain ones.
func (b *Bound) otherMeans() string {
	words := map[MeanKind]string{LevelMean: "by energy", DirectionMean: "by vectors", AcidMean: "by the acid"}
	var list []string
	for i, kind := range b.Clauses.Means {
		if kind != PlainMean && b.averaged(i) {
			list = append(list, b.Input[i].Name+" "+words[kind])
		}
	}
	if len(list) == 0 {
		return ""
	}
	return " (of " + strings.Join(list, ", ") + ")"
}

func (b *Bound) policy() string {
	if b.Clauses.Duplicates == "" {
		return Split
	}
	return b.Clauses.Duplicates
}

func failDuplicates(b *Bound, input *column.Table, p *Part) error {
	first := map[int32]int32{}
	for k, row := range p.Rows {
		s := p.Site[k]
		other, ok := first[s]
		if !ok {
			first[s] = row
			continue
		}
		at := p.Sites[s]
		id := &input.Cols[b.ID]
		return problem.New("duplicates", b.Place, "sites %s and %s of %s stand at one place (%s, %s, %s)%s, and DUPLICATES is FAIL",
			idText(id, int(other)), idText(id, int(row)), b.Name, column.FormatReal(at.X), column.FormatReal(at.Y),
			column.FormatReal(at.Z), inPart(b, input, row)).
			WithHint("OMITTING one of them, or CREATE the campaign with DUPLICATES SPLIT, MEAN or FIRST")
	}
	return nil
}

// keepFirst leaves of the rows of each site only the first.
func (p *Part) keepFirst() {
	if p.Share == nil {
		return
	}
	n := 0
	for k, s := range p.Site {
		if int(s) == n { // sites are numbered by their first rows
			p.Rows[n], p.Site[n] = p.Rows[k], s
			n++
		}
	}
	p.Rows, p.Site, p.Share = p.Rows[:n], p.Site[:n], nil
}

// someOf lists the first few names: 'L07', 'L08' and 12 more.
func someOf(names []string) string {
	const shown = 5
	if len(names) <= shown+1 {
		return strings.Join(names, ", ")
	}
	return fmt.Sprintf("%s and %d more", strings.Join(names[:shown], ", "), len(names)-shown)
}

// scattered refuses FOR EACH over stamps that are not common to the sites: 54
// loggers that each have their own seconds make thousands of partitions of one
// or two sites, each of which is given the whole room.
func scattered(b *Bound, env *Env, input *column.Table, o *order, parts [][]int32) error {
	if len(b.Clauses.Each) == 0 || len(parts) < 2 {
		return nil
	}
	var rows []int32
	sizes := make([]int, len(parts))
	for i, p := range parts {
		rows = append(rows, p...)
		sizes[i] = len(p)
	}
	slices.Sort(sizes)
	median := sizes[(len(sizes)-1)/2]
	total := len(o.distinct(rows))
	if 2*median >= total {
		return nil
	}
	name := b.Input[b.Clauses.Each[0]].Name
	text := fmt.Sprintf("FOR EACH %s makes %d partitions of %s, half of them with at most %d of the %d sites",
		name, len(parts), b.Name, median, total)
	if b.Input[b.Clauses.Each[0]].Type == column.Timestamp {
		return problem.New("scattered", b.EachPlace, "%s: each of these few would be given the whole space", text).
			WithHint("SERIES brings them to common instants: OF (SELECT id, x, y, z, %s, … FROM SERIES OF %s BY id ON %s EVERY INTERVAL '15' MINUTE AS s)",
				name, seriesSource(b.Name), name)
	}
	if total < len(rows) { // identifiers recur, so a part could have held them all
		env.Notes.Add(note.Warning, note.Sites, "%s; the space of the missing ones goes to their neighbours", text)
	}
	return nil
}

// seriesSource is what the hint puts behind SERIES OF.
func seriesSource(name string) string {
	if strings.HasPrefix(name, "(") {
		return "(SELECT …)"
	}
	return name
}
