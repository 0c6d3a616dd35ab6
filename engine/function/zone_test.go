package function

import (
	"testing"
	"time"

	"nearcell/catalog/column"
)

func zonedAt(t *testing.T, at string, zone column.Value) (column.Value, error) {
	t.Helper()
	us, _, err := column.ParseTimestamp(at)
	if err != nil {
		t.Fatal(err)
	}
	args := make([]column.Vector, 2)
	for i, v := range []column.Value{{Type: column.Timestamp, I: us}, zone} {
		b := column.NewBuilder(v.Type, nil)
		b.Append(v)
		args[i] = b.Finish()
	}
	out := column.New(column.Timestamp, nil, 1)
	err = Zoned.Eval(new(Arena), args, nil, 1, &out)
	return out.Value(0), err
}

// Offsets as the IANA database has them: Zurich is at UTC+1, in summer (from the
// last Sunday of March to that of October, 01:00 UTC) at UTC+2; Kathmandu at
// UTC+5:45 since 1986 (common facts of the trade).
func TestZones(t *testing.T) {
	for _, c := range []struct{ at, zone, want string }{
		{"2031-01-15 12:00:00", "Europe/Zurich", "2031-01-15 13:00:00"},
		{"2031-07-15 12:00:00", "Europe/Zurich", "2031-07-15 14:00:00"},
		{"2031-03-30 00:59:59", "Europe/Zurich", "2031-03-30 01:59:59"},
		{"2031-03-30 01:00:00", "Europe/Zurich", "2031-03-30 03:00:00"},
		{"2031-10-26 00:59:59", "Europe/Zurich", "2031-10-26 02:59:59"},
		{"2031-10-26 01:00:00", "Europe/Zurich", "2031-10-26 02:00:00"},
		{"2031-04-07 23:30:00", "Asia/Kathmandu", "2031-04-08 05:15:00"},
		{"2031-04-07 08:15:00", "UTC", "2031-04-07 08:15:00"},
		{"2031-04-07 08:15:00", "-03:30", "2031-04-07 04:45:00"},
	} {
		got, err := zonedAt(t, c.at, column.String(c.zone))
		if err != nil || column.FormatTimestamp(got.I) != c.want {
			t.Errorf("%s at %s is %s, want %s (%v)", c.at, c.zone, column.FormatTimestamp(got.I), c.want, err)
		}
	}
	hour := column.Value{Type: column.Interval, I: -int64(time.Hour / time.Microsecond)}
	if got, err := zonedAt(t, "2031-04-07 00:15:00", hour); err != nil || column.FormatTimestamp(got.I) != "2031-04-06 23:15:00" {
		t.Errorf("an hour west is %s (%v)", column.FormatTimestamp(got.I), err)
	}
	for _, zone := range []string{"Europe/Nowhere", "Local", "", "../etc/passwd"} {
		if _, err := zonedAt(t, "2031-04-07 00:15:00", column.String(zone)); err == nil {
			t.Errorf("there is no zone %q", zone)
		}
	}
	if _, err := zonedAt(t, "9999-12-31 23:30:00", column.String("+01:00")); err == nil {
		t.Error("the year 10000 is none")
	}
}
