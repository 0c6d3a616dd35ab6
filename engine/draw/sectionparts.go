package draw

import "fmt"

// mostPartWords is how many parts are told of one by one.
const mostPartWords = 12

// measuredWords are the words of a panel of which only parts count: of all of them
// together, unless they overlap.
func (x *Section) measuredWords(p *Panel) string {
	n, only := 0, ""
	for k, list := range p.Within {
		if len(list) > 0 {
			n++
			only = x.Measured[k]
		}
	}
	switch {
	case n == 0:
		return "The plane meets none of the parts."
	case n == 1:
		return x.sharesInWords("Section of "+only+",", SharesOf(p.Parts, x.Limits))
	case p.Overlap:
		return fmt.Sprintf("%d parts, which overlap in the plane and are not added up.", n)
	}
	return x.sharesInWords(fmt.Sprintf("Section of %d parts, together", n), SharesOf(p.Parts, x.Limits))
}

// PartWords are the words about each part; none where there is but one.
func (x *Section) PartWords(p *Panel) []string {
	var list []string
	left := 0
	for k, name := range x.Measured {
		if len(p.Within[k]) == 0 {
			continue
		}
		if len(list) == mostPartWords {
			left++
			continue
		}
		var own []Part
		for _, part := range p.Parts {
			if part.In == k {
				own = append(own, part)
			}
		}
		list = append(list, x.sharesInWords(name+",", SharesOf(own, x.Limits)))
	}
	if len(list) < 2 {
		return nil
	}
	if left > 0 {
		list = append(list, fmt.Sprintf("and %d more parts.", left))
	}
	return list
}
