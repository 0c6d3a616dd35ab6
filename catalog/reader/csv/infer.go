package csv

import (
	"bytes"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/timeform"
)

// tally is what the first pass learns of a column.
type tally struct {
	name      string
	unit      *column.Unit
	text      bool               // one of Options.TextColumns
	censored  bool               // one of Options.Censored
	constant  bool               // of the preamble: one value a file, never at fault
	fixed     column.Type        // by the word of the file; Null: to be found
	time      *reader.TimeColumn // of Options.Times, and its index there
	timeIndex int
	present   int // values that are not missing
	counts    [isTime + 1]int
	zeros     int
	plain     int
	other     int            // texts that the other decimal mark would make numbers
	grouped   int            // texts that are numbers with marks between thousands
	guess     timeform.Guess // of texts with digits
	guessed   int

	firstText, firstLong, firstZeros, firstOther, firstGrouped, firstGuess sample // of values that are no number, …
}

// sample is a value worth showing.
type sample struct {
	line int
	text string
	file string
}

func (s *sample) keep(line int, b []byte, file string) {
	if s.line == 0 {
		*s = sample{line, string(b), file}
	}
}

// add takes a trimmed value that is not missing.
func (t *tally) add(b []byte, mark byte, line int, file string) {
	t.present++
	if t.time != nil || t.censored {
		return
	}
	l := lookAt(b, mark)
	t.counts[l.class]++
	switch l.class {
	case isWord, isBool, isTime:
		t.firstText.keep(line, b, file)
		if l.class == isWord && lookAtNumber(b, otherMark(mark)).class == isReal {
			t.other++
			t.firstOther.keep(line, b, file)
		}
		if l.class == isWord && (isGrouped(b, mark) || isGrouped(b, otherMark(mark))) {
			t.grouped++
			t.firstGrouped.keep(line, b, file)
		}
		if l.class == isWord && t.guess.Possible() && bytes.ContainsAny(b, "0123456789") {
			t.guess.Add(b)
			t.guessed++
			t.firstGuess.keep(line, b, file)
		}
	case isLongInt:
		t.firstLong.keep(line, b, file)
	}
	if l.zeros {
		t.zeros++
		t.firstZeros.keep(line, b, file)
	}
	if l.plain {
		t.plain++
	}
}

func otherMark(mark byte) byte {
	if mark == '.' {
		return ','
	}
	return '.'
}

// uniform reports whether all values are of one kind.
func (t *tally) uniform() bool {
	return t.numbers() == t.present || t.counts[isTime] == t.present || t.counts[isBool] == t.present
}

func (t *tally) numbers() int { return t.counts[isInt] + t.counts[isLongInt] + t.counts[isReal] }

// nearly reports whether a column of which fit values are of a type is of that
// type, so that the others are faults.
func (t *tally) nearly(fit int) bool {
	misfits := t.present - fit
	return fit > 0 && (10*misfits <= t.present || misfits == 1 && fit >= 4)
}

// decide is the type of the column, and why it is TEXT where that is worth a word.
func (t *tally) decide() (column.Type, *reader.StayedText) {
	numeric := t.numbers() + t.counts[isNotFinite]
	switch {
	case t.time != nil:
		return column.Timestamp, nil
	case t.censored:
		return column.Text, nil
	case t.text && t.fixed == column.Text:
		return column.Text, nil
	case t.fixed != column.Null && !t.text:
		return t.fixed, nil
	case t.text && t.plain == t.present && t.present > 0:
		return column.Integer, nil
	case t.text:
		return column.Text, nil
	case t.present == 0:
		return column.Real, nil
	case t.constant && !t.uniform():
		return column.Text, nil
	case t.nearly(numeric):
		return t.decideNumber()
	case t.nearly(t.counts[isTime]):
		return column.Timestamp, nil
	case t.nearly(t.counts[isBool]):
		return column.Boolean, nil
	case t.guessed > 0 && 2*t.guessed > t.present && t.guess.Possible():
		stayed := t.stayed(reader.LooksLikeTime, t.firstGuess)
		stayed.Pattern, stayed.Other = t.guess.Pattern()
		return column.Text, stayed
	case t.grouped > 0 && t.grouped >= t.other && 2*(t.numbers()+t.grouped) > t.present:
		return column.Text, t.stayed(reader.Thousands, t.firstGrouped)
	case t.other > 0 && 2*(t.numbers()+t.other) > t.present:
		return column.Text, t.stayed(reader.OtherMark, t.firstOther)
	case 2*t.numbers() > t.present:
		return column.Text, t.stayed(reader.MixedValues, t.firstText)
	}
	return column.Text, nil
}

func (t *tally) decideNumber() (column.Type, *reader.StayedText) {
	switch {
	case t.counts[isReal] > 0 || t.numbers() == 0:
		return column.Real, nil
	case t.counts[isLongInt] > 0:
		return column.Text, t.stayed(reader.TooLong, t.firstLong)
	case t.zeros > 0:
		return column.Text, t.stayed(reader.LeadingZeros, t.firstZeros)
	}
	return column.Integer, nil
}

func (t *tally) stayed(why reader.TextReason, s sample) *reader.StayedText {
	return &reader.StayedText{Column: t.name, Reason: why, NotNumeric: t.present - t.numbers(), FirstLine: s.line, FirstText: s.text, File: s.file}
}
