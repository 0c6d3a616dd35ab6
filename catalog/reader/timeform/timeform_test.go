package timeform

import (
	"errors"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"
)

func mustParse(t testing.TB, pattern string) *Form {
	t.Helper()
	f, err := Parse(pattern)
	if err != nil {
		t.Fatalf("%s: %v", pattern, err)
	}
	return f
}

func TestRead(t *testing.T) {
	for _, c := range []struct {
		pattern, text, want string // RFC 3339; "" no match, "-" no such time
	}{
		{"DD.MM.YYYY hh:mm:ss", "05.04.2031 08:15:30", "2031-04-05T08:15:30Z"},
		{"DD.MM.YYYY hh:mm:ss", "5.4.2031 8:15:30", ""},
		{"D.M.YYYY h:mm", "5.4.2031 8:15", "2031-04-05T08:15:00Z"},
		{"D.M.YYYY h:mm", "05.04.2031   18:15", "2031-04-05T18:15:00Z"},
		{"D.M.YYYY h:mm", "05.04.203118:15", ""},
		{"DD.MM.YYYY", "30.02.2031", "-"},
		{"DD.MM.YYYY", "29.02.2032", "2032-02-29T00:00:00Z"},
		{"DD.MM.YYYY", "29.02.2100", "-"},
		{"DD.MM.YY", "01.01.70", "1970-01-01T00:00:00Z"},
		{"DD.MM.YY", "31.12.69", "2069-12-31T00:00:00Z"},
		{"MM/DD/YYYY hh:mm:ss AM", "04/05/2031 12:00:00 am", "2031-04-05T00:00:00Z"},
		{"MM/DD/YYYY hh:mm:ss PM", "04/05/2031 12:30:00 PM", "2031-04-05T12:30:00Z"},
		{"MM/DD/YYYY h:mm AM", "04/05/2031 1:05 PM", "2031-04-05T13:05:00Z"},
		{"MM/DD/YYYY h:mm AM", "04/05/2031 13:05 PM", "-"},
		{"MM/DD/YYYY h:mm AM", "04/05/2031 0:05 AM", "-"},
		{"MM/DD/YYYY h:mm AM", "04/05/2031 1:05", ""},
		{"YYYY-MM-DDThh:mm:ss.fffZ", "2031-04-05T08:15:30.25Z", "2031-04-05T08:15:30.25Z"},
		{"YYYY-MM-DD hh:mm:ss,f", "2031-04-05 08:15:30,123456000", "2031-04-05T08:15:30.123456Z"},
		{"YYYY-MM-DD hh:mm:ss,f", "2031-04-05 08:15:30,1234567", "-"},
		{"YYYYMMDDhhmmss", "20310405081530", "2031-04-05T08:15:30Z"},
		{"DD-MMM-YYYY hh:mm", "05-apr-2031 08:15", "2031-04-05T08:15:00Z"},
		{"DD-MMM-YYYY hh:mm", "05-Avr-2031 08:15", ""},
		{`DD.MM.YYYY hh:mm "Uhr"`, "05.04.2031 08:15 Uhr", "2031-04-05T08:15:00Z"},
		{`DD.MM.YYYY hh:mm "Uhr"`, "05.04.2031 08:15 uhr", ""},
		{"DD.MM.YYYY hh:mm", "05.04.2031 24:00", "-"},
		{"DD.MM.YYYY hh:mm", "05.04.2031 08:60", "-"},
		{"DD.MM.YYYY hh:mm", "05.04.2031 08:15 ", ""},
		{"DD.MM.YYYY", "00.04.2031", "-"},
		{"DD.MM.YYYY", "", ""},
	} {
		us, outcome := mustParse(t, c.pattern).Read([]byte(c.text))
		got := map[Outcome]string{NoMatch: "", NoSuch: "-"}[outcome]
		if outcome == OK {
			got = time.UnixMicro(us).UTC().Format(time.RFC3339Nano)
		}
		if got != c.want {
			t.Errorf("%s reads %q as %q, wanted %q", c.pattern, c.text, got, c.want)
		}
	}
}

func TestSaysUTC(t *testing.T) {
	for pattern, want := range map[string]bool{"YYYY-MM-DDThh:mm:ssZ": true, "YYYYMMDDZ": true, "DD.MM.YYYY hh:mm": false, `YYYY-MM-DD hh:mm" Z"`: false, "ZYYYYMMDD": false} {
		if mustParse(t, pattern).SaysUTC() != want {
			t.Errorf("%s", pattern)
		}
	}
}

func TestPatternsThatAreNone(t *testing.T) {
	for pattern, want := range map[string]PatternError{
		"":                     {NoDate, 0, ""},
		"DD.MM.YYYY HH:mm":     {UnknownLetter, 11, "HH"},
		"dd.MM.YYYY":           {UnknownLetter, 0, "dd"},
		"DD.MM.YYY":            {WrongLength, 6, "YYY"},
		"DDD.MM.YYYY":          {WrongLength, 0, "DDD"},
		"MM.YYYY hh:mm":        {NoDate, 0, "MM.YYYY hh:mm"},
		"DD.MM.YYYY DD":        {Repeated, 0, "DD.MM.YYYY DD"},
		"DD.MM.YYYY YY":        {Repeated, 0, "DD.MM.YYYY YY"},
		"DD.MM.YYYY MMM":       {Repeated, 0, "DD.MM.YYYY MMM"},
		"DD.MM.YYYY mm:ss":     {NoHour, 0, "DD.MM.YYYY mm:ss"},
		"DD.MM.YYYY hh:ss":     {NoHour, 0, "DD.MM.YYYY hh:ss"},
		"DD.MM.YYYY hh:mm,f":   {NoHour, 0, "DD.MM.YYYY hh:mm,f"},
		"DD.MM.YYYY AM":        {NoHour, 0, "DD.MM.YYYY AM"},
		"DMYYYY":               {RunsTogether, 1, "M"},
		"DD.MM.YYYY hmm":       {RunsTogether, 12, "mm"},
		`DD.MM.YYYY "Uhr`:      {NotClosed, 11, `"Uhr`},
		`DD.MM.YYYY ""`:        {WrongLength, 11, `""`},
		"05.04.2031 08:15":     {IsDigit, 0, "0"},
		"DD.MM.YYYY hh:mm Uhr": {UnknownLetter, 17, "U"},
	} {
		_, err := Parse(pattern)
		var got *PatternError
		if !errors.As(err, &got) || *got != want {
			t.Errorf("%q: %v, wanted %v", pattern, err, &want)
		}
	}
}

// FuzzPattern: any text is a pattern or is refused with a place in it; what a
// pattern reads is a time of the years 1 to 9999, written so again by its parts.
func FuzzPattern(f *testing.F) {
	for i, p := range commonTexts {
		if i%7 == 0 {
			f.Add(p, "05.04.2031 08:15:30")
		}
	}
	f.Add(`YYYY"x"MMDD hh:mm:ss.f AM`, "2031x0405 08:15:30.25 PM")
	f.Add("DD.MM.YYYY HH", "é\xff")
	f.Fuzz(func(t *testing.T, pattern, text string) {
		form, err := Parse(pattern)
		if err != nil {
			var fault *PatternError
			if !errors.As(err, &fault) || fault.At < 0 || fault.At > len(pattern) || !strings.HasPrefix(pattern[fault.At:], fault.Text) || err.Error() == "" {
				t.Fatalf("%q: %v", pattern, err)
			}
			return
		}
		us, outcome := form.Read([]byte(text))
		if outcome >= Skipped || outcome != OK && us != 0 {
			t.Fatalf("%q reads %q: %d, %d", pattern, text, us, outcome)
		}
		if y := time.UnixMicro(us).UTC().Year(); y < 1 || y > 9999 {
			t.Fatalf("%q reads %q as the year %d", pattern, text, y)
		}
	})
}

// What the time package writes by a layout, the pattern of that layout reads back.
func TestPatternsAgainstLayouts(t *testing.T) {
	pairs := [][2]string{{"02.01.2006 15:04:05", "DD.MM.YYYY hh:mm:ss"}, {"2.1.2006 15:04", "D.M.YYYY h:mm"},
		{"01/02/2006 03:04:05 PM", "MM/DD/YYYY hh:mm:ss AM"}, {"1/2/2006 3:04 pm", "M/D/YYYY h:mm PM"},
		{"2006-01-02T15:04:05.000000Z", "YYYY-MM-DDThh:mm:ss.fZ"}, {"02-Jan-06 15:04", "DD-MMM-YY hh:mm"}, {"20060102150405", "YYYYMMDDhhmmss"}}
	rapid.Check(t, func(t *rapid.T) {
		us := rapid.Int64Range(0, 3_124_223_999_999_999).Draw(t, "us") // up to 2068: the time package turns the century a year earlier
		p := rapid.SampledFrom(pairs).Draw(t, "layout")
		at := time.UnixMicro(us).UTC()
		text := at.Format(p[0])
		want, err := time.Parse(p[0], text)
		if err != nil {
			t.Fatal(err)
		}
		form, err := Parse(p[1])
		if err != nil {
			t.Fatal(err)
		}
		if got, outcome := form.Read([]byte(text)); outcome != OK || got != want.UnixMicro() {
			t.Fatalf("%s reads %q as %v, %d", p[1], text, time.UnixMicro(got).UTC(), outcome)
		}
	})
}

func zone(t testing.TB, name string) *Zone {
	t.Helper()
	z, err := LoadZone(name)
	if err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	return z
}

func local(t testing.TB, text string) int64 {
	t.Helper()
	us, outcome := mustParse(t, "YYYY-MM-DD hh:mm:ss").Read([]byte(text))
	if outcome != OK {
		t.Fatalf("%q", text)
	}
	return us
}

func utc(us int64) string { return time.UnixMicro(us).UTC().Format("2006-01-02 15:04:05") }

// Summer time in the Union begins and ends at 01:00 UTC on the last Sundays of
// March and October (directive 2000/84/EC, articles 2 and 3); those of 2031 are
// the 30th and the 26th. Clocks in Zurich, which follow it, skip 02:00 to 03:00 and
// repeat 02:00 to 03:00 (IANA time zone database, Europe/Zurich).
func TestClockChanges(t *testing.T) {
	z := zone(t, "Europe/Zurich")
	for _, c := range []struct{ local, first, last string }{
		{"2031-01-15 12:00:00", "2031-01-15 11:00:00", ""},
		{"2031-07-15 12:00:00", "2031-07-15 10:00:00", ""},
		{"2031-03-30 01:59:59", "2031-03-30 00:59:59", ""},
		{"2031-03-30 02:00:00", "", ""},
		{"2031-03-30 02:59:59", "", ""},
		{"2031-03-30 03:00:00", "2031-03-30 01:00:00", ""},
		{"2031-10-26 01:59:59", "2031-10-25 23:59:59", ""},
		{"2031-10-26 02:00:00", "2031-10-26 00:00:00", "2031-10-26 01:00:00"},
		{"2031-10-26 02:59:59", "2031-10-26 00:59:59", "2031-10-26 01:59:59"},
		{"2031-10-26 03:00:00", "2031-10-26 02:00:00", ""},
	} {
		first, last, outcome := z.Instants(local(t, c.local))
		got := [2]string{}
		switch outcome {
		case OK:
			got[0] = utc(first)
		case Repeats:
			got = [2]string{utc(first), utc(last)}
		}
		if got != [2]string{c.first, c.last} {
			t.Errorf("%s is %v, wanted %v", c.local, got, c)
		}
	}
}

// Whatever the zone and the instant, the local time that the time package gives it
// leads back to it: as the only one, or as one of two.
func TestInstantsLeadBack(t *testing.T) {
	names := ZoneNames()
	zones := map[string]*Zone{}
	rapid.Check(t, func(t *rapid.T) {
		name := rapid.SampledFrom(names).Draw(t, "zone")
		z := zones[name]
		if z == nil {
			var err error
			if z, err = LoadZone(name); err != nil {
				t.Fatal(err)
			}
			zones[name] = z
		}
		at := time.Unix(rapid.Int64Range(-2_000_000_000, 4_000_000_000).Draw(t, "at"), 0).In(z.loc)
		if rapid.Bool().Draw(t, "near a change") {
			if _, end := at.ZoneBounds(); !end.IsZero() {
				at = end.Add(time.Duration(rapid.IntRange(-7200, 7200).Draw(t, "seconds")) * time.Second)
			}
		}
		_, offset := at.Zone()
		first, last, outcome := z.Instants((at.Unix() + int64(offset)) * 1e6)
		if outcome == Skipped || first != at.UnixMicro() && last != at.UnixMicro() || outcome == OK && first != last || outcome == Repeats && first >= last {
			t.Fatalf("%v: %d, %d, %d", at, first, last, outcome)
		}
	})
}

func TestZones(t *testing.T) {
	if n := len(ZoneNames()); n < 400 {
		t.Fatalf("%d zones", n)
	}
	for _, name := range ZoneNames() {
		zone(t, name)
	}
	for name, hours := range map[string]float64{"UTC": 0, "utc": 0, "Z": 0, "+01:00": 1, "-03:30": -3.5, "UTC+1": 1, "GMT-2": -2, "+0530": 5.5, "+14": 14} {
		first, _, outcome := zone(t, name).Instants(0)
		if outcome != OK || float64(first) != -hours*3600e6 {
			t.Errorf("%s: %d, %d", name, first, outcome)
		}
	}
	for _, name := range []string{"", "Local", "local", "Europe/Zurch", "CEST", "+15", "+1:5", "+-1", "UTC+", "../etc/passwd", "+01:60", "+"} {
		if _, err := LoadZone(name); !errors.Is(err, ErrZone) {
			t.Errorf("%q: %v", name, err)
		}
	}
}

// settle runs times of one day in October 2031 through Settle and writes the
// instants of the repeated hour, "?" where they are undecided.
func settle(t *testing.T, groups, times string, strict bool) (string, bool) {
	z := zone(t, "Europe/Zurich")
	var list []int64
	var group []uint32
	for _, word := range strings.Fields(times) {
		day := "26"
		if rest, ok := strings.CutPrefix(word, "25/"); ok {
			day, word = "25", rest
		}
		list = append(list, local(t, "2031-10-"+day+" "+word+":00"))
	}
	for _, g := range strings.Fields(groups) {
		group = append(group, uint32(g[0]))
	}
	s := z.Settle(list, group, strict)
	undecided := map[int]bool{}
	for _, row := range s.Undecided {
		undecided[row] = true
	}
	var out []string
	for row, at := range list {
		if _, _, outcome := z.Instants(at); outcome != Repeats {
			continue
		}
		us, decided := s.Instant[row]
		switch {
		case decided == undecided[row]:
			t.Fatalf("row %d is decided and undecided, or neither", row)
		case decided:
			out = append(out, utc(us)[11:16])
		default:
			out = append(out, "?")
		}
	}
	return strings.Join(out, " "), s.Orderly
}

func TestSettle(t *testing.T) {
	for _, c := range []struct {
		what, groups, times string
		strict              bool
		want                string
		orderly             bool
	}{
		{"both runs", "", "01:30 02:00 02:30 02:00 02:30 03:00", true, "00:00 00:30 01:00 01:30", true},
		{"both runs, newest first", "", "03:00 02:30 02:00 02:30 02:00 01:30", true, "01:30 01:00 00:30 00:00", true},
		{"every hour", "", "01:00 02:00 02:00 03:00", true, "00:00 01:00", true},
		{"every hour, instants may repeat", "", "01:00 02:00 02:00 03:00", false, "? ?", true},
		{"one run lost", "", "01:30 02:00 02:30 03:00", true, "? ?", true},
		{"the file begins within", "", "02:30 02:00 02:30 03:00", true, "00:30 01:00 01:30", true},
		{"a single row", "", "01:45 02:45 03:00", true, "?", true},
		{"two steps back", "", "01:00 02:30 02:00 02:30 02:00 03:00", true, "? ? ? ?", false},
		{"a step back elsewhere", "", "05:00 01:00 02:30 02:00 03:00", true, "00:30 01:00", false},
		{"two loggers in turn", "a b a b a b a b", "01:00 01:00 02:00 02:00 02:00 02:00 03:00 03:00", true, "00:00 00:00 01:00 01:00", true},
		{"two loggers, not told apart", "", "01:00 01:00 02:00 02:00 02:00 02:00 03:00 03:00", true, "? ? ? ?", false},
		{"one after the other", "a a a a b b b b", "01:00 02:00 02:00 03:00 01:00 02:00 02:00 03:00", true, "00:00 01:00 00:00 01:00", true},
		{"one of them lost a run", "a a a a b b b", "01:00 02:00 02:00 03:00 01:00 02:00 03:00", true, "00:00 01:00 ?", true},
		{"the day before", "", "25/02:00 25/02:30 02:00 02:30 02:00 03:00", true, "00:00 00:30 01:00", true},
	} {
		if got, orderly := settle(t, c.groups, c.times, c.strict); got != c.want || orderly != c.orderly {
			t.Errorf("%s: %s, orderly %v; wanted %s, %v", c.what, got, orderly, c.want, c.orderly)
		}
	}
}

// A logger that runs through the clock change without a loss, at any step and
// from any moment outside the repeated hour, gets its instants back.
func TestSettleLeadsBack(t *testing.T) {
	z := zone(t, "Europe/Zurich")
	change := local(t, "2031-10-26 01:00:00") // in UTC
	rapid.Check(t, func(t *rapid.T) {
		step := int64(rapid.IntRange(1, 60).Draw(t, "minutes")) * 60_000_000
		start := change - 3_600_000_000 - int64(rapid.IntRange(1, 7200).Draw(t, "seconds"))*1_000_000
		var want, shown []int64
		for at := start; at < change+7_200_000_000; at += step {
			offset := int64(2 * 3600e6)
			if at >= change {
				offset = 3600e6
			}
			want, shown = append(want, at), append(shown, at+offset)
		}
		s := z.Settle(shown, nil, true)
		if !s.Orderly {
			t.Fatalf("not orderly")
		}
		for i, at := range want {
			first, _, outcome := z.Instants(shown[i])
			if outcome == Repeats {
				first = s.Instant[i]
			}
			if first != at {
				t.Fatalf("row %d, %s on the clock: %s, wanted %s; undecided %v", i, utc(shown[i]), utc(first), utc(at), s.Undecided)
			}
		}
	})
}

func TestGuess(t *testing.T) {
	for _, c := range []struct{ values, pattern, other string }{
		{"05.04.2031 08:15|06.12.2031 18:15", "DD.MM.YYYY hh:mm", ""},
		{"5.4.2031 8:15|16.12.2031 18:15", "D.M.YYYY h:mm", ""},
		{"05/04/2031 08:15:00|06/12/2031 18:15:01", "DD/MM/YYYY hh:mm:ss", "MM/DD/YYYY hh:mm:ss"},
		{"05/04/2031 08:15:00|06/13/2031 18:15:01", "MM/DD/YYYY hh:mm:ss", ""},
		{"05/04/2031 08:15:00 AM", "DD/MM/YYYY hh:mm:ss AM", "MM/DD/YYYY hh:mm:ss AM"},
		{"05-Apr-2031 08:15", "DD-MMM-YYYY hh:mm", ""},
		{"2031/04/05 08:15:00.250", "YYYY/MM/DD hh:mm:ss.f", ""},
		{"20310405T081500", "YYYYMMDDThhmmss", ""},
		{"05.04.2031|L01", "", ""},
		{"31.02.2031", "", ""},
		{"L01", "", ""},
	} {
		var g Guess
		for _, v := range strings.Split(c.values, "|") {
			g.Add([]byte(v))
		}
		pattern, other := g.Pattern()
		if pattern != c.pattern || other != c.other {
			t.Errorf("%s: %q, %q; wanted %q, %q", c.values, pattern, other, c.pattern, c.other)
		}
		if g.Possible() != (c.pattern != "") {
			t.Errorf("%s: possible %v", c.values, g.Possible())
		}
	}
	if p, o := new(Guess).Pattern(); p != "" || o != "" {
		t.Error("a pattern of nothing")
	}
}

func BenchmarkRead(b *testing.B) {
	f, z := mustParse(b, "DD.MM.YYYY hh:mm:ss"), zone(b, "Europe/Zurich")
	text := []byte("05.04.2031 08:15:30")
	for b.Loop() {
		us, _ := f.Read(text)
		z.Instants(us)
	}
}
