package draw

import (
	"math"
	"strconv"
	"strings"
	"time"
)

// step is the round step (1, 2 or 5 times a power of ten) of which no more than about
// most fit into a length.
func step(length float64, most int) float64 {
	if !(length > 0) || math.IsInf(length, 0) {
		return 1
	}
	rough := length / float64(max(most, 1))
	power := math.Pow(10, math.Floor(math.Log10(rough)))
	for _, f := range [...]float64{1, 2, 5} {
		if f*power >= rough*(1-1e-9) {
			return f * power
		}
	}
	return 10 * power
}

// ticks are round numbers from lo to hi.
func ticks(lo, hi float64, most int) []float64 {
	by := step(hi-lo, most)
	var list []float64
	for k := math.Ceil(lo/by - 1e-9); k*by <= hi+by*1e-9; k++ {
		v := k * by
		if by < 1 { // 3 · 0.1 is not 0.3, 3 / 10 is
			v = k / math.Round(1/by)
		}
		list = append(list, v+0)
	}
	return list
}

// tickText writes a tick with as many digits as its step needs.
func tickText(v, by float64) string {
	if by >= 1e6 || by < 1e-5 {
		return strconv.FormatFloat(v, 'g', 4, 64)
	}
	digits := 0
	if by < 1 {
		digits = int(math.Ceil(-math.Log10(by) - 1e-9))
	}
	text := strconv.FormatFloat(v, 'f', digits, 64)
	if strings.Trim(text, "-0.") == "" {
		text = strings.TrimPrefix(text, "-")
	}
	return text
}

// Number writes a number for reading: four digits or so, without an exponent where
// that can be.
func Number(v float64) string {
	a := math.Abs(v)
	switch {
	case v == 0:
		return "0"
	case math.IsInf(v, 0) || a >= 1e9 || a < 1e-4:
		return strconv.FormatFloat(v, 'g', 4, 64)
	case a >= 1000:
		return strconv.FormatFloat(v, 'f', 0, 64)
	}
	digits := 3 - int(math.Floor(math.Log10(a)))
	text := strconv.FormatFloat(v, 'f', max(digits, 0), 64)
	if strings.Contains(text, ".") {
		text = strings.TrimRight(strings.TrimRight(text, "0"), ".")
	}
	return text
}

// WithUnit is a number with its unit behind it.
func WithUnit(number, unit string) string {
	if unit == "" {
		return number
	}
	return number + " " + unit
}

// named is a quantity with its unit, as axes have it.
func named(name, unit string) string {
	if unit == "" {
		return name
	}
	return name + " [" + unit + "]"
}

// timeSteps are what ticks of time can be apart.
var timeSteps = []time.Duration{time.Second, 5 * time.Second, 15 * time.Second, 30 * time.Second, time.Minute, 5 * time.Minute, 15 * time.Minute,
	30 * time.Minute, time.Hour, 2 * time.Hour, 3 * time.Hour, 6 * time.Hour, 12 * time.Hour, 24 * time.Hour, 48 * time.Hour, 7 * 24 * time.Hour,
	14 * 24 * time.Hour}

// tick is a mark on an axis.
type tick struct {
	at    float64
	text  string
	below string // a second line
}

// timeTicks are round instants between two, in microseconds since 1970: midnights,
// hours, minutes; the date stands below the first of each day.
func timeTicks(lo, hi float64, most int) []tick {
	span := time.Duration(hi-lo) * time.Microsecond
	by := time.Duration(0)
	for _, d := range timeSteps {
		if span/d <= time.Duration(most) {
			by = d
			break
		}
	}
	if by == 0 {
		return monthTicks(lo, hi, most)
	}
	us := by.Microseconds()
	var list []tick
	day := ""
	for t := int64(math.Ceil(lo/float64(us))) * us; float64(t) <= hi; t += us {
		at := time.UnixMicro(t).UTC()
		date := at.Format("2 Jan 2006")
		x := tick{at: float64(t)}
		switch {
		case by >= 24*time.Hour:
			x.text = at.Format("2 Jan")
			if year := at.Format("2006"); year != day {
				x.below, day = year, year
			}
		default:
			x.text = at.Format("15:04")
			if by < time.Minute {
				x.text = at.Format("15:04:05")
			}
			if date != day {
				x.below, day = date, date
			}
		}
		list = append(list, x)
	}
	return list
}

// monthTicks are first days of months or of years.
func monthTicks(lo, hi float64, most int) []tick {
	first, last := time.UnixMicro(int64(lo)).UTC(), time.UnixMicro(int64(hi)).UTC()
	months := (last.Year()-first.Year())*12 + int(last.Month()-first.Month()) + 1
	by := 1
	for _, m := range [...]int{1, 2, 3, 6, 12, 24, 60, 120, 240, 600, 1200, 6000, 12000} {
		if by = m; months/m <= most {
			break
		}
	}
	var list []tick
	for k := 0; k <= months+by; k++ {
		at := time.Date(first.Year(), time.January, 1, 0, 0, 0, 0, time.UTC).AddDate(0, k*by, 0)
		if at.After(last) {
			break
		}
		if at.Before(first) {
			continue
		}
		x := tick{at: float64(at.UnixMicro()), text: at.Format("Jan 2006")}
		if by >= 12 {
			x.text = at.Format("2006")
		}
		list = append(list, x)
	}
	return list
}

// numberTicks are ticks of numbers.
func numberTicks(lo, hi float64, most int) []tick {
	by := step(hi-lo, most)
	var list []tick
	for _, v := range ticks(lo, hi, most) {
		list = append(list, tick{at: v, text: tickText(v, by)})
	}
	return list
}

// Round is the largest of 1, 2, 5 times a power of ten that is no larger than v.
func Round(v float64) float64 {
	if !(v > 0) || math.IsInf(v, 0) {
		return 0
	}
	power := math.Pow(10, math.Floor(math.Log10(v)))
	round := power
	for _, f := range [...]float64{2, 5, 10} {
		if f*power <= v {
			round = f * power
		}
	}
	return round
}
