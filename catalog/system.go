package catalog

import "strings"

// SameSystem tells whether two objects with coordinates can be compared, and if so what
// is taken for granted in that, "" for nothing. Coordinates that were brought from a
// drawing are the site's, as those are taken to be that came as they are. Local metres of
// geographic places are one system only with the same origin, and never the site's.
func SameSystem(a, b *Object) (same bool, taken string) {
	const geographic = "GEOGRAPHIC "
	switch {
	case a.System == b.System:
		return true, ""
	case strings.HasPrefix(a.System, geographic), strings.HasPrefix(b.System, geographic):
		return false, ""
	}
	return true, "the coordinates of " + a.Name + systemText(a) + " and those of " + b.Name + systemText(b) + " are taken as one system"
}

func systemText(o *Object) string {
	if o.System == "" {
		return ", as they came,"
	}
	return ", brought from the frame " + o.System + ","
}
