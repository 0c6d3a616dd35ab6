package catalog

import (
	"crypto/sha256"
	"fmt"
	"strings"

	"nearcell/catalog/column"
)

// GeographicSystem is the system of local metres: east, north and up of a place on the
// ellipsoid.
func GeographicSystem(latitude, longitude float64) string {
	return geographic + column.FormatReal(latitude) + " " + column.FormatReal(longitude)
}

const geographic = "GEOGRAPHIC "

// FrameSystem is the system of what a frame has brought to the site's coordinates. It
// tells frames apart that had one name, one after the other.
func FrameSystem(name, text string) string {
	h := sha256.Sum256([]byte(text))
	return fmt.Sprintf("%s#%x", name, h[:4])
}

// GeographicOrigin is where the local metres of a system count from, as "latitude,
// longitude"; ok is false for any other system.
func GeographicOrigin(system string) (origin string, ok bool) {
	rest, ok := strings.CutPrefix(system, geographic)
	return strings.ReplaceAll(rest, " ", ", "), ok
}

// SameSystem tells whether coordinates of two origins can be compared, and if so what is
// taken for granted in that, "" for nothing. Coordinates that were brought from a drawing
// are the site's, as those are taken to be that came as they are. Local metres of
// geographic places are one system only with the same origin, and never the site's; but a
// solid or a table may have been written down in them.
func SameSystem(a, b *column.System) (same bool, taken string) {
	if a == nil || b == nil || a.Text == b.Text {
		return true, ""
	}
	_, one := GeographicOrigin(a.Text)
	_, other := GeographicOrigin(b.Text)
	if one && b.Loose && b.Text == "" {
		a, b, one, other = b, a, other, one
	}
	switch {
	case other && a.Loose && a.Text == "":
		return true, "the coordinates of " + a.Of + ", " + SystemText("") + " are taken as " + SystemText(b.Text) + " as those of " + b.Of + " are"
	case one || other:
		return false, ""
	}
	x, y := SystemText(a.Text), SystemText(b.Text)
	if x == y { // the frame was made anew in between
		y = "brought from another frame that was called so,"
	}
	return true, "the coordinates of " + a.Of + ", " + x + " and those of " + b.Of + ", " + y + " are taken as one system"
}

// SystemText says how coordinates came about: with a comma behind.
func SystemText(system string) string {
	if at, ok := GeographicOrigin(system); ok {
		return "metres east, north and up of (" + at + "),"
	}
	if system == "" {
		return "as they came,"
	}
	name, _, _ := strings.Cut(system, "#")
	return "brought from the frame " + name + ","
}
