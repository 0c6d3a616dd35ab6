package timeform

import (
	_ "embed"
	"errors"
	"slices"
	"strings"
	"time"
	_ "time/tzdata" // machines without the database have these rules
)

//go:embed zones.txt
var zoneText string

// ZoneNames are the names of the IANA time zone database (release of the Go
// version that this file was made with), sorted.
func ZoneNames() []string { return strings.Fields(zoneText) }

// ErrZone says that there is no zone of a name.
var ErrZone = errors.New("timeform: no such time zone")

// Zone is the local time of a place. It remembers what it looked at last and is
// not safe for concurrent use.
type Zone struct {
	name string
	loc  *time.Location

	// The period of one offset that the last time lay in, in seconds since 1970,
	// cut by two days at both ends: local times in it have one instant.
	from, until, offset int64
}

const (
	secondsOfDay = 86400
	beyond       = 1 << 40 // seconds, further than any time stamp
)

// LoadZone finds a zone: a name of the IANA database, UTC, or an offset such as
// +01:00, +01, UTC+1 or UTC-03:30.
func LoadZone(name string) (*Zone, error) {
	if offset, ok := fixedOffset(name); ok {
		return &Zone{name: name, loc: time.FixedZone(name, offset)}, nil
	}
	if name == "" || strings.EqualFold(name, "local") { // what the machine is set to
		return nil, ErrZone
	}
	loc, err := time.LoadLocation(name)
	if err != nil {
		return nil, ErrZone
	}
	return &Zone{name: name, loc: loc}, nil
}

// String is the name that the zone was found by.
func (z *Zone) String() string { return z.name }

// fixedOffset reads UTC, Z, or an offset in hours and minutes, in seconds.
func fixedOffset(s string) (seconds int, ok bool) {
	upper := strings.ToUpper(s)
	rest := strings.TrimPrefix(strings.TrimPrefix(upper, "UTC"), "GMT")
	switch {
	case upper == "Z" || upper != "" && rest == "":
		return 0, true
	case rest == "" || rest[0] != '+' && rest[0] != '-':
		return 0, false
	}
	h, m, colon := strings.Cut(rest[1:], ":")
	if !colon && len(h) == 4 {
		h, m, colon = h[:2], h[2:], true
	}
	if !digits(h) || len(h) > 2 || colon && (!digits(m) || len(m) != 2) {
		return 0, false
	}
	minutes := 60*number([]byte(h)) + number([]byte(m))
	if minutes > 14*60 || number([]byte(m)) > 59 {
		return 0, false
	}
	if rest[0] == '-' {
		minutes = -minutes
	}
	return 60 * minutes, true
}

func digits(s string) bool { return s != "" && strings.Trim(s, "0123456789") == "" }

// Instants are the moments, in microseconds since 1970 in UTC, at which the clocks
// of the place show a local time: one, none where the clock change skips it (the
// outcome is Skipped), or two where it repeats it (Repeats), the earlier first.
func (z *Zone) Instants(local int64) (first, last int64, _ Outcome) {
	sec := local / 1e6
	if local%1e6 < 0 {
		sec--
	}
	micros := local - sec*1e6
	if at := sec - z.offset; z.from < at && at < z.until {
		return at*1e6 + micros, at*1e6 + micros, OK
	}
	found := z.search(sec)
	switch len(found) {
	case 0:
		return 0, 0, Skipped
	case 1:
		return found[0]*1e6 + micros, found[0]*1e6 + micros, OK
	}
	return found[0]*1e6 + micros, found[len(found)-1]*1e6 + micros, Repeats
}

// search looks through the periods around a local time, in seconds.
func (z *Zone) search(sec int64) []int64 {
	var found []int64
	t := time.Unix(sec-2*secondsOfDay, 0).In(z.loc)
	for {
		start, end := t.ZoneBounds()
		from, until := int64(-beyond), int64(beyond)
		if !start.IsZero() {
			from = start.Unix()
		}
		if !end.IsZero() {
			until = end.Unix()
		}
		_, offset := t.Zone()
		if at := sec - int64(offset); from <= at && at < until {
			found = append(found, at)
			z.from, z.until, z.offset = from+2*secondsOfDay, until-2*secondsOfDay, int64(offset)
		}
		if until > sec+2*secondsOfDay {
			break
		}
		t = end
	}
	slices.Sort(found)
	return found
}
