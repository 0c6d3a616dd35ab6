package csv

import (
	"bytes"
	"strings"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/timeform"
)

// sampleRows is how many records must speak for a line of units.
const sampleRows = 20

// readUnits takes the line under the heading for units where it can be nothing
// else: at least one of its fields is a unit of the list below, and every field
// that is not empty or a dash stands over a column of numbers, or of times, and is
// neither a number nor a word for a missing value.
func (im *importer) readUnits(f *file) {
	s := f.records()
	if !s.next() || s.rec.blank() || s.rec.fault.kind != reader.NoFault {
		return
	}
	if n := len(s.rec.fields); n != len(f.head.names) && n != len(f.head.names)+f.head.extra+f.trailing {
		return
	}
	texts := make([]string, len(f.head.names))
	for i := range texts {
		b := trim(s.rec.fields[i].text)
		if len(b) > 0 && (im.isNull(b) && string(b) != "-" || lookAt(b, im.mark).class != isWord || lookAt(b, otherMark(im.mark)).class != isWord) {
			return
		}
		texts[i] = strings.Trim(string(b), "[]()")
	}
	over := im.lookBelow(f, s)
	known := false
	var units []reader.UnitOfRow
	for i, text := range texts {
		if text == "" || text == "-" {
			continue
		}
		if over[i] == nothing || missingWords[strings.ToLower(text)] {
			return
		}
		u := reader.UnitOfRow{Column: f.head.names[i], Text: text}
		if over[i] == numbers {
			u.Unit = column.ParseUnit(text)
			if f.head.units[i] != nil && !column.SameUnit(f.head.units[i], u.Unit) {
				return
			}
			known = known || isKnownUnit(text)
		}
		units = append(units, u)
	}
	if !known {
		return
	}
	for i, text := range texts {
		if over[i] == numbers && text != "" && text != "-" {
			f.head.units[i] = column.ParseUnit(text)
		}
	}
	f.facts.UnitsLine = s.rec.line
	f.body, f.bodyLine = s.pos, s.line
	if im.facts.UnitsRow == nil {
		im.facts.UnitsRow = units
	}
}

// below is what the records under a field hold.
type below uint8

const (
	nothing below = iota // or texts
	numbers
	times
)

// lookBelow looks at the records behind the one that s has read.
func (im *importer) lookBelow(f *file, s *scanner) []below {
	over := make([]below, len(f.head.names))
	guesses := make([]timeform.Guess, len(over))
	texts := make([]bool, len(over))
	for k := 0; k < sampleRows && nextRecord(s); k++ {
		for i := range min(len(over), len(s.rec.fields)) {
			b := trim(s.rec.fields[i].text)
			if im.isNull(b) || missingWords[strings.ToLower(string(b))] {
				continue
			}
			switch l := lookAt(b, im.mark); {
			case l.class == isInt || l.class == isReal || l.class == isLongInt:
				over[i] = max(over[i], numbers)
			case l.class == isTime, im.hasForm(f.head.names[i]):
				over[i] = times
			case lookAtNumber(b, otherMark(im.mark)).class == isReal:
				over[i] = max(over[i], numbers) // read with another mark it is one
			case bytes.ContainsAny(b, "0123456789") && guesses[i].Possible():
				guesses[i].Add(b)
				texts[i] = texts[i] || !guesses[i].Possible()
				over[i] = times
			default:
				texts[i] = true
			}
		}
	}
	for i := range over {
		if texts[i] {
			over[i] = nothing
		}
	}
	*s = *newScanner(f.data, f.facts.Delimiter, f.body, f.bodyLine)
	s.next()
	return over
}

// nextRecord is the next record that is not blank.
func nextRecord(s *scanner) bool {
	for s.next() {
		if !s.rec.blank() {
			return true
		}
	}
	return false
}

// hasForm reports whether Options.Times reads a column.
func (im *importer) hasForm(name string) bool {
	for _, t := range im.o.Times {
		if strings.EqualFold(t.Column, name) {
			return true
		}
	}
	return false
}

// missingWords are what instruments write for a value that is none.
var missingWords = words("n/a na #n/a #na nan null none nil err error err. fault fail failed invalid inf -inf overflow underflow over under ovr ovl ol " +
	"lost gap missing nodata no_data -- --- ---- ----- * ** *** ? . x")

// MissingWord reports whether a text is one that instruments write for a value
// that is none, such as n/a or ---. Case does not count.
func MissingWord(text string) bool { return text == "-" || missingWords[strings.ToLower(text)] }

// KnownUnit reports whether a text is a unit of measurement that is common on
// instruments.
func KnownUnit(text string) bool { return isKnownUnit(text) }

// baseUnits may have a prefix of the SI before them, otherUnits may not.
var (
	baseUnits = words("m g s A K V W Pa J N Hz mol cd lx lm Bq Gy Sv Ω ohm S F H T bar l L eq Wh VA Ah")
	others    = words("°C °F C F degC degF deg ° °dC %RH % %rH rH RH %r.F. ppm ppb ppt min h d rpm 1/min dB dBA dB(A) dB(C) " +
		"ft in mi mph psi atm mmHg inHg torr lux kn NTU FNU pH psu rad sr counts cps px #/cm3 P/cm3 h-1 ‰ kg t ha")
)

const prefixes = "n u µ m c d h k M G"

func isKnownUnit(text string) bool {
	text = strings.ReplaceAll(strings.ReplaceAll(strings.ReplaceAll(text, "μ", "µ"), "ºC", "°C"), "℃", "°C")
	if others[text] {
		return true
	}
	parts := strings.FieldsFunc(text, func(r rune) bool { return r == '/' || r == '*' || r == '·' || r == ' ' })
	for _, p := range parts {
		p = strings.TrimRight(p, "23^-⁻¹²³")
		if others[p] || baseUnits[p] {
			continue
		}
		ok := false
		for _, prefix := range strings.Fields(prefixes) {
			rest, cut := strings.CutPrefix(p, prefix)
			ok = ok || cut && baseUnits[rest]
		}
		if !ok {
			return false
		}
	}
	return len(parts) > 0
}

func words(s string) map[string]bool {
	m := map[string]bool{}
	for _, w := range strings.Fields(s) {
		m[w] = true
	}
	return m
}
