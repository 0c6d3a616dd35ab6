package timeform

import (
	"slices"
	"strings"
)

// commonTexts are patterns that instruments write, those with more in them before
// those with less, day before month where a date could be read both ways.
var commonTexts = func() []string {
	var list []string
	dates := []string{"D.M.YYYY", "D.M.YY", "D/M/YYYY", "M/D/YYYY", "D-M-YYYY", "M-D-YYYY", "YYYY/M/D", "YYYY.M.D", "YYYY-M-D",
		"D/M/YY", "M/D/YY", "D-MMM-YYYY", "D MMM YYYY", "D-MMM-YY", "MMM D YYYY", "MMM D, YYYY", "YYYYMMDD"}
	for _, d := range dates {
		for _, gap := range []string{" ", "T", ", "} {
			for _, clock := range []string{"h:mm:ss", "h:mm", "h:mm:ss.f", "h:mm:ss,f", "h:mm:ss AM", "h:mm AM", "h.mm.ss", "h.mm"} {
				list = append(list, d+gap+clock)
			}
		}
		list = append(list, d)
	}
	return append(list, "YYYYMMDDhhmmss", "YYYYMMDD hhmmss", "YYYYMMDDThhmmss", "YYYY-M-D h:mm:ssZ")
}()

// common are these patterns, first with every number at its full width.
var common = func() []*Form {
	var list []*Form
	for _, widen := range []bool{true, false} {
		for _, text := range commonTexts {
			if widen {
				text = widened(text)
			}
			f, err := Parse(text)
			if err != nil {
				panic(err) // the tests parse every one
			}
			list = append(list, f)
		}
	}
	return list
}()

// Guess finds the pattern of a column from its values. The zero Guess has seen
// none and is ready.
type Guess struct {
	seen int
	left []int // of common
}

// Add takes a value, without blanks around it.
func (g *Guess) Add(b []byte) {
	if g.seen++; g.seen == 1 {
		for i, f := range common {
			if _, outcome := f.Read(b); outcome == OK {
				g.left = append(g.left, i)
			}
		}
		return
	}
	if len(g.left) > 0 {
		g.left = slices.DeleteFunc(g.left, func(i int) bool {
			_, outcome := common[i].Read(b)
			return outcome != OK
		})
	}
}

// Merge adds the values that another Guess has seen.
func (g *Guess) Merge(other *Guess) {
	switch {
	case other.seen == 0:
	case g.seen == 0:
		*g = Guess{seen: other.seen, left: slices.Clone(other.left)}
	default:
		g.seen += other.seen
		g.left = slices.DeleteFunc(g.left, func(i int) bool { return !slices.Contains(other.left, i) })
	}
}

// Possible reports whether a pattern fits all values so far.
func (g *Guess) Possible() bool { return g.seen == 0 || len(g.left) > 0 }

// Pattern is the pattern that fits every value, "" where none does; other is one
// that fits too and reads other dates, such as MM/DD for DD/MM.
func (g *Guess) Pattern() (pattern, other string) {
	if g.seen == 0 || len(g.left) == 0 {
		return "", ""
	}
	pattern = common[g.left[0]].text
	for _, i := range g.left[1:] {
		if dayFirst(common[i]) != dayFirst(common[g.left[0]]) {
			return pattern, common[i].text
		}
	}
	return pattern, ""
}

// dayFirst reports whether the day stands before the month.
func dayFirst(f *Form) bool {
	for _, it := range f.items {
		switch it.part {
		case day:
			return true
		case month, monthName:
			return false
		}
	}
	return false
}

// widened doubles the letters D, M and h that stand alone.
func widened(text string) string {
	var b strings.Builder
	for i := 0; i < len(text); {
		n := 1
		for i+n < len(text) && text[i+n] == text[i] {
			n++
		}
		run := text[i : i+n]
		b.WriteString(run)
		if alone := n == 1 && strings.Contains("DMh", run); alone && !strings.HasSuffix(text[:i], "A") {
			b.WriteString(run) // the M of AM is none
		}
		i += n
	}
	return b.String()
}
