package column

import (
	"errors"
	"math"
	"testing"
	"time"

	"pgregory.net/rapid"
)

// The standard library's calendar is the outside value here.
func TestTimestampsAgainstPackageTime(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		us := rapid.Int64Range(minTimestamp, maxTimestamp).Draw(t, "us")
		want := time.UnixMicro(us).UTC()
		text := FormatTimestamp(us)
		if s := want.Format("2006-01-02 15:04:05.999999"); text != s {
			t.Fatalf("%d is written %q, want %q", us, text, s)
		}
		back, naive, err := ParseTimestamp(text)
		if err != nil || back != us || !naive {
			t.Fatalf("%q reads back as %d (%v), %v", text, back, naive, err)
		}
		zone := time.FixedZone("", 60*rapid.IntRange(-23*60-59, 23*60+59).Draw(t, "zone"))
		local := want.In(zone)
		if local.Year() < 1 || local.Year() > 9999 {
			return
		}
		for _, layout := range []string{"2006-01-02T15:04:05.999999Z07:00", "2006-01-02 15:04:05.999999 -0700", "2006-01-02t15:04:05.000000-07:00"} {
			s := local.Format(layout)
			if back, naive, err := ParseTimestamp(s); err != nil || back != us || naive {
				t.Fatalf("%q reads as %d (naive %v), %v; want %d", s, back, naive, err, us)
			}
		}
	})
}

// Every day of the years 1 to 9999 comes in its turn.
func TestCalendar(t *testing.T) {
	want := time.Date(1, 1, 1, 0, 0, 0, 0, time.UTC)
	for days := int64(minTimestamp / day); days <= maxTimestamp/day; days++ {
		y, m, d := civil(days)
		if int(y) != want.Year() || m != int(want.Month()) || d != want.Day() || daysSince1970(int(y), m, d) != days {
			t.Fatalf("day %d is %d-%d-%d, want %s", days, y, m, d, want.Format(time.DateOnly))
		}
		want = want.AddDate(0, 0, 1)
	}
	if want.Year() != 10000 {
		t.Errorf("the calendar ends in %d", want.Year())
	}
}

func TestParseTimestamp(t *testing.T) {
	at := time.Date(2031, 4, 7, 8, 15, 0, 0, time.UTC).UnixMicro()
	for _, c := range []struct {
		s     string
		us    int64
		naive bool
	}{
		{"2031-04-07 08:15:00", at, true},
		{"2031-04-07T08:15", at, true},
		{"2031-04-07", at - 8*hour - 15*minute, true},
		{"2031-04-07 08:15:00Z", at, false},
		{"2031-04-07 08:15:00 UTC", at, false},
		{"2031-04-07 10:15+02", at, false},
		{"2031-04-07T03:45:00-04:30", at, false},
		{"2031-04-07 08:15:00.25", at + 250_000, true},
		{"2031-04-07 08:15:00,000001Z", at + 1, false},
		{"2031-04-07 08:15:00.0000010", at + 1, true},
	} {
		us, naive, err := ParseTimestamp(c.s)
		if us != c.us || naive != c.naive || err != nil {
			t.Errorf("%q = %d, %v, %v; want %d, %v", c.s, us, naive, err, c.us, c.naive)
		}
	}
	for s, want := range map[string]error{
		"":                            ErrTimestamp,
		"2031":                        ErrTimestamp,
		"20310407":                    ErrTimestamp,
		"2031-4-7":                    ErrTimestamp,
		"07.04.2031":                  ErrTimestamp,
		"2031-04-07 8:15":             ErrTimestamp,
		"2031-04-07 08":               ErrTimestamp,
		"2031-04-07 08:15:00.":        ErrTimestamp,
		"2031-04-07 08:15:00.1234567": ErrTimestamp,
		"2031-04-07 08:15 CET":        ErrTimestamp,
		"2031-04-07 08:15+2":          ErrTimestamp,
		"2031-04-07Z":                 ErrTimestamp,
		"2031-04-07 08:15:00Z ":       ErrTimestamp,
		"2031-04-07 08:15:00ZZ":       ErrTimestamp,
		"２031-04-07":                  ErrTimestamp,
		"2031-00-01":                  ErrDate,
		"2031-13-01":                  ErrDate,
		"2031-04-31":                  ErrDate,
		"2031-02-29":                  ErrDate,
		"1900-02-29":                  ErrDate,
		"2031-04-00":                  ErrDate,
		"0000-01-01":                  ErrDate,
		"2031-04-07 24:00":            ErrDate,
		"2031-04-07 08:60":            ErrDate,
		"2031-04-07 08:15:60":         ErrDate,
		"2031-04-07 08:15+24:00":      ErrDate,
		"2031-04-07 08:15+02:60":      ErrDate,
		"0001-01-01 00:00:00+00:01":   ErrDate,
		"9999-12-31 23:59:59-00:01":   ErrDate,
	} {
		if _, _, err := ParseTimestamp(s); !errors.Is(err, want) {
			t.Errorf("%q: %v, want %v", s, err, want)
		}
	}
}

func TestIntervals(t *testing.T) {
	for s, us := range map[string]int64{
		"00:00:00":                 0,
		"00:15:00":                 15 * minute,
		"-00:00:00.5":              -500_000,
		"36:00:01":                 36*hour + second,
		"1000000:00:00":            1_000_000 * hour,
		"-2562047788:00:54.775808": math.MinInt64,
		"2562047788:00:54.775807":  math.MaxInt64,
		"100:59:59.000001":         100*hour + 59*minute + 59*second + 1,
		"-168:00:00":               -7 * day,
		"00:00:00.000001":          1,
	} {
		if got := FormatInterval(us); got != s {
			t.Errorf("%d is written %q, want %q", us, got, s)
		}
		if got, err := ParseInterval(s); err != nil || got != us {
			t.Errorf("%q is %d, %v; want %d", s, got, err, us)
		}
	}
	for _, s := range []string{"", "-", "1", "1:1:1", "00:60:00", "00:00:60", "00:00:00.", "2562047788:00:54.775808",
		"-2562047788:00:54.775809", "99999999999999999999:00:00", "00:00:00 ", "+00:00:00", "1 02:00:00"} {
		if us, err := ParseInterval(s); err == nil {
			t.Errorf("%q was read as %d", s, us)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		us := rapid.Int64().Draw(t, "us")
		if got, err := ParseInterval(FormatInterval(us)); err != nil || got != us {
			t.Fatalf("%d is written %q and reads as %d, %v", us, FormatInterval(us), got, err)
		}
	})
}
