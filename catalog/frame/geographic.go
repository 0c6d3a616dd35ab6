package frame

import (
	"fmt"
	"math"
	"slices"
)

// The WGS 84 ellipsoid.
const (
	axis   = 6378137.0
	flat   = 1 / 298.257223563
	eccent = flat * (2 - flat) // the square of the first eccentricity
)

// Origin is where local metres count from: latitude and longitude in degrees, height 0.
type Origin struct{ Latitude, Longitude float64 }

// GeographicFault is what is wrong with a place.
type GeographicFault uint8

const (
	Latitude   GeographicFault = iota // a latitude that cannot be
	Longitude                         // a longitude that cannot be
	Swapped                           // a latitude that cannot be, and would do as the longitude
	RowSwapped                        // far from the others, and among them if swapped
	NoFix                             // at 0, 0, far from the others
	TooFar                            // farther from the others than local metres mean anything
)

// GeographicError is a latitude or longitude that cannot be, or a place that cannot be of
// one survey with the others.
type GeographicError struct {
	Row   int
	Fault GeographicFault
	Value float64 // the latitude or longitude, or the distance in metres
}

func (e *GeographicError) Error() string {
	return fmt.Sprintf("frame: row %d: geographic fault %d, %g", e.Row, e.Fault, e.Value)
}

// What lies so far from the middle place of a survey, in metres, is looked at: exchanged
// coordinates and places without a fix are told by it.
const (
	doubtful = 100e3
	absurd   = 1000e3
)

// astray finds the first place that cannot be of one survey with the others: far from the
// place of middle latitude and longitude, and plainly wrong.
func astray(latitudes, longitudes []float64) error {
	middle := Origin{median(latitudes, 0), 0}
	first := longitudes[0]
	middle.Longitude = first + median(longitudes, first)
	away := func(lat, lon float64) float64 {
		p, q := earth(lat, lon, 0), earth(middle.Latitude, middle.Longitude, 0)
		return math.Sqrt(float64((p[0]-q[0])*(p[0]-q[0])) + float64((p[1]-q[1])*(p[1]-q[1])) + float64((p[2]-q[2])*(p[2]-q[2])))
	}
	for i, lat := range latitudes {
		lon := longitudes[i]
		d := away(lat, lon)
		switch {
		case d <= doubtful:
		case lat == 0 && lon == 0:
			return &GeographicError{i, NoFix, d}
		case math.Abs(lon) <= 90 && away(lon, lat) <= doubtful:
			return &GeographicError{i, RowSwapped, d}
		case d > absurd:
			return &GeographicError{i, TooFar, d}
		}
	}
	return nil
}

// median is the middle value, counted in degrees around from.
func median(values []float64, from float64) float64 {
	list := make([]float64, len(values))
	for i, x := range values {
		list[i] = wrap(x - from)
	}
	slices.Sort(list)
	return list[len(list)/2]
}

// originStep is what origins are rounded to, in degrees: surveys of one place then mostly
// have one origin.
const originStep = 0.01

// OriginOf is the origin of a survey: the middle of the extremes of latitude and
// longitude, to a hundredth of a degree. The order of the places does not matter.
func OriginOf(latitudes, longitudes []float64) (Origin, error) {
	lat := [2]float64{math.Inf(1), math.Inf(-1)}
	lon := [2]float64{math.Inf(1), math.Inf(-1)}
	for i := range latitudes {
		switch a, o := latitudes[i], longitudes[i]; {
		case !(math.Abs(a) <= 90) && math.Abs(a) <= 180 && math.Abs(o) <= 90:
			return Origin{}, &GeographicError{i, Swapped, a}
		case !(math.Abs(a) <= 90):
			return Origin{}, &GeographicError{i, Latitude, a}
		case !(math.Abs(o) <= 360):
			return Origin{}, &GeographicError{i, Longitude, o}
		default:
			d := wrap(o - longitudes[0]) // near the date line, too
			lat = [2]float64{min(lat[0], a), max(lat[1], a)}
			lon = [2]float64{min(lon[0], d), max(lon[1], d)}
		}
	}
	if err := astray(latitudes, longitudes); err != nil {
		return Origin{}, err
	}
	round := func(x float64) float64 { return math.Round(x/originStep) / math.Round(1/originStep) }
	return Origin{round((lat[0] + lat[1]) / 2), wrap(round(longitudes[0] + (lon[0]+lon[1])/2))}, nil
}

// wrap brings degrees into -180 to 180.
func wrap(x float64) float64 { return x - 360*math.Round(x/360) }

// East is a place in metres east, north and up of the origin (the tangent plane there).
func (o Origin) East(latitude, longitude, height float64) Point {
	p, q := earth(latitude, longitude, height), earth(o.Latitude, o.Longitude, 0)
	d := Point{p[0] - q[0], p[1] - q[1], p[2] - q[2]}
	sl, cl := math.Sincos(o.Latitude * math.Pi / 180)
	so, co := math.Sincos(o.Longitude * math.Pi / 180)
	return Point{
		float64(-so*d[0]) + float64(co*d[1]),
		float64(-sl*co*d[0]) + float64(-sl*so*d[1]) + float64(cl*d[2]),
		float64(cl*co*d[0]) + float64(cl*so*d[1]) + float64(sl*d[2]),
	}
}

// earth is a place in metres from the centre of the earth.
func earth(latitude, longitude, height float64) Point {
	sl, cl := math.Sincos(latitude * math.Pi / 180)
	so, co := math.Sincos(longitude * math.Pi / 180)
	n := axis / math.Sqrt(1-float64(eccent*sl*sl))
	return Point{(n + height) * cl * co, (n + height) * cl * so, (float64(n*(1-eccent)) + height) * sl}
}
