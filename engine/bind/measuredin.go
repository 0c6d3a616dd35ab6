package bind

import (
	"fmt"
	"strings"

	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
	"nearcell/voronoi/solid"
)

// measuredIn takes the parts of MEASURED IN over. A solid with named pieces is one part
// for each. Binding says which parts overlap and which reach out of the space that the
// sites divide: sums over the parts are not what they seem there.
func (b *binder) measuredIn(rel *relation.Bound, c *lang.MeasuredInClause) error {
	var trees []lang.Solid
	for i := range c.Parts {
		trees = append(trees, &lang.SolidName{At: c.Parts[i].At, Name: c.Parts[i]})
	}
	solids, err := b.regions(trees, "part")
	if err != nil {
		return err
	}
	var list []relation.Region
	taken := map[string]bool{}
	for i, s := range solids {
		for _, part := range pieces(s) {
			if _, ok := part.Solid.(solid.Divided); !ok && rel.Def.Pairs {
				return b.notYet(trees[i], rel.Def.Noun+" MEASURED IN "+part.Name+", which has no convex pieces,").
					WithHint("a part of %s is a BOX, a PRISM, or each box of BOXES with a name of its own", rel.Def.Noun)
			}
			if taken[lang.Fold(part.Name)] { // two lists of boxes have a box of one name
				part.Name = s.Name + " " + part.Name
			}
			if taken[lang.Fold(part.Name)] {
				return problem.New("same-name", b.at(trees[i]), "two of these parts are called '%s': rows could not tell one from the other", part.Name)
			}
			taken[lang.Fold(part.Name)] = true
			list = append(list, part)
		}
	}
	rel.Clauses.Measured = list
	if err := b.sharedParts(rel, list); err != nil {
		return problem.At(err, b.at(c))
	}
	if err := b.sayOverlaps(list); err != nil {
		return problem.At(err, b.at(c))
	}
	return problem.At(b.sayOutside(rel, list), b.at(c))
}

// pieces are the parts that a solid is: itself, or its pieces with names.
func pieces(s relation.Region) []relation.Region {
	n, ok := s.Solid.(solid.Parted)
	if !ok {
		return []relation.Region{s}
	}
	var list []relation.Region
	for _, p := range n.Parts() {
		list = append(list, relation.Region{Name: p.Name, Solid: p.Solid})
	}
	return list
}

// namedPairs is how many overlaps a note names.
const namedPairs = 3

// sayOverlaps warns of space that lies in two parts: it counts in both.
func (b *binder) sayOverlaps(list []relation.Region) error {
	var pairs []string
	more, total := 0, 0.0
	for i, p := range list {
		for _, q := range list[:i] {
			volume, err := b.shared(p.Solid, q.Solid)
			if err != nil {
				return err
			}
			if volume <= sharedVolume*min(p.Solid.Volume(), q.Solid.Volume()) {
				continue
			}
			total += volume
			if len(pairs) == namedPairs {
				more++
				continue
			}
			pairs = append(pairs, q.Name+" and "+p.Name)
		}
	}
	if len(pairs) == 0 {
		return nil
	}
	text := strings.Join(pairs, ", ")
	if more > 0 {
		text += fmt.Sprintf(" and %d more pairs", more)
	}
	b.say(note.Warning, note.Sites, "parts overlap (%s): %.4g m³ count in more than one of them, and a sum over the parts has them more than once", text, total)
	return nil
}

// sayOutside says how much of the parts lies outside the space that the sites divide.
func (b *binder) sayOutside(rel *relation.Bound, list []relation.Region) error {
	spaces := rel.Clauses.Zones
	if rel.Clauses.Solid != nil {
		spaces = []relation.Region{{Name: rel.Clauses.SolidName, Solid: rel.Clauses.Solid}}
	}
	rel.Clauses.Inside = make([]float64, len(spaces))
	if len(spaces) == 0 {
		return nil
	}
	var partly, wholly []string
	out, of := 0.0, 0.0
	for _, p := range list {
		inside := 0.0
		for k, s := range spaces {
			volume, err := b.shared(s.Solid, p.Solid)
			if err != nil {
				return err
			}
			inside += volume
			rel.Clauses.Inside[k] += volume
		}
		whole := p.Solid.Volume()
		switch {
		case inside <= sharedVolume*whole:
			wholly = append(wholly, p.Name)
		case inside < whole*(1-sharedVolume):
			partly = append(partly, p.Name)
			out, of = out+whole-inside, of+whole
		}
	}
	if len(wholly) > 0 {
		b.say(note.Warning, note.Sites, "%s outside %s and %s no rows: %s", liesOrLie(len(wholly)), rel.Clauses.SolidName, hasOrHave(len(wholly)), shortList(wholly))
	}
	if len(partly) > 0 {
		b.say(note.Note, note.Sites, "%s partly outside %s: %.4g of %.4g m³ do not count: %s", liesOrLie(len(partly)), rel.Clauses.SolidName, out, of, shortList(partly))
	}
	return nil
}

func liesOrLie(n int) string {
	if n == 1 {
		return "1 part lies"
	}
	return fmt.Sprintf("%d parts lie", n)
}

func hasOrHave(n int) string {
	if n == 1 {
		return "has"
	}
	return "have"
}
