package engine

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/catalog/frame"
	"nearcell/engine/bind"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// bringToSite turns the coordinates that POSITION gave, in a frame or geographic, into
// the site's: the first three columns of out.
func (s *Session) bringToSite(st *statement, c *clauses, out *column.Table, origin string) error {
	if c.position == nil || c.position.Frame.IsZero() && !c.position.Geographic {
		return nil
	}
	var axes [3]column.Vector
	for k := range axes {
		axes[k] = ownCopy(out.Cols[k])
		axes[k].Unit = column.Symbol("m")
	}
	bring, err := s.way(st, c, axes, origin)
	if err != nil {
		return err
	}
	for i := range out.N {
		if p, whole := pointOf(axes, i); whole {
			for k, x := range bring(p) {
				axes[k].F[i] = x
			}
		}
	}
	for k := range axes {
		out.Cols[k], out.Schema[k].Unit = axes[k], axes[k].Unit
	}
	return nil
}

// pointOf is the place of a row, and whether it has all coordinates.
func pointOf(axes [3]column.Vector, row int) (p frame.Point, whole bool) {
	for k := range axes {
		if axes[k].IsNull(row) {
			return p, false
		}
		p[k] = axes[k].F[row]
	}
	return p, true
}

// way is how coordinates are brought to the site's; what is to be said of it is said.
func (s *Session) way(st *statement, c *clauses, axes [3]column.Vector, origin string) (func(frame.Point) frame.Point, error) {
	if !c.position.Geographic {
		o, k, err := s.frameNamed(st, c.position.Frame)
		if err != nil {
			return nil, err
		}
		c.system = catalog.FrameSystem(o.Name, o.Text)
		c.tellPlaced(fmt.Sprintf("positions are brought from the frame %s to the site's coordinates: %s; off by %s m on the whole of its points",
			o.Name, s.frameText(k), s.number(k.RMS)))
		return k.Apply, nil
	}
	return s.geographic(st, c, axes, origin)
}

// geographic is how latitudes and longitudes become local metres.
func (s *Session) geographic(st *statement, c *clauses, axes [3]column.Vector, origin string) (func(frame.Point) frame.Point, error) {
	if err := namesSwapped(st, c.position); err != nil {
		return nil, err
	}
	var lat, lon []float64
	var rows []int
	for i := range axes[0].N {
		if p, whole := pointOf(axes, i); whole {
			lat, lon, rows = append(lat, p[0]), append(lon, p[1]), append(rows, i)
		}
	}
	if len(rows) == 0 {
		return func(p frame.Point) frame.Point { return p }, nil
	}
	at, err := frame.OriginOf(lat, lon)
	if err != nil {
		return nil, geographicProblem(st, c, err, rows, origin)
	}
	said := "the middle of the survey, to a hundredth of a degree; ORIGIN says another, and is needed to compare surveys"
	if c.position.Latitude != nil {
		if at, err = s.statedOrigin(st, c.position); err != nil {
			return nil, err
		}
		said = "as ORIGIN says"
	}
	short, far := 0.0, 0.0
	for i, row := range rows {
		h := axes[2].F[row]
		if math.IsNaN(h) || math.IsInf(h, 0) {
			continue
		}
		p := at.East(lat[i], lon[i], h)
		short, far = max(short, h-p[2]), max(far, math.Hypot(p[0], p[1]))
	}
	c.system = catalog.GeographicSystem(at.Latitude, at.Longitude)
	c.tellPlaced(fmt.Sprintf("positions are metres east, north and up of latitude %s°, longitude %s°, height 0 (WGS 84): %s",
		column.FormatReal(at.Latitude), column.FormatReal(at.Longitude), said))
	c.tellPlaced(fmt.Sprintf("up is not height: z is lower by up to %s m, since the earth curves away under %s m", s.number(short), s.number(math.Round(far))))
	if far > farAway {
		st.notes.Add(note.Warning, note.Sites, "the places of %s lie up to %s km from where they count from: is one of them mistaken?", origin, s.number(math.Round(far/1000)))
	}
	return func(p frame.Point) frame.Point { return at.East(p[0], p[1], p[2]) }, nil
}

// farAway is how far from its origin a survey is looked at with doubt, in metres.
const farAway = 50000

// statedOrigin is ORIGIN (latitude, longitude).
func (s *Session) statedOrigin(st *statement, p *lang.PositionReading) (frame.Origin, error) {
	var at [2]float64
	for i, e := range [2]lang.Expr{p.Latitude, p.Longitude} {
		v, err := bind.Value(s.bindEnv(st), e)
		if err != nil {
			return frame.Origin{}, err
		}
		if v.Null || !v.Type.Numeric() {
			return frame.Origin{}, problem.New("types", st.at(e), "ORIGIN takes a latitude and a longitude in degrees, and this is %s", v.Type)
		}
		at[i] = v.F
		if v.Type == column.Integer {
			at[i] = float64(v.I)
		}
		if limit := [2]float64{90, 360}[i]; !(math.Abs(at[i]) <= limit) {
			return frame.Origin{}, problem.New("geographic", st.at(e), "ORIGIN has the %s %s, which cannot be", [2]string{"latitude", "longitude"}[i], column.FormatReal(at[i]))
		}
	}
	return frame.Origin{Latitude: at[0], Longitude: at[1]}, nil
}

// geographicProblem words what is wrong with latitudes and longitudes.
func geographicProblem(st *statement, c *clauses, err error, rows []int, origin string) error {
	var e *frame.GeographicError
	if !errors.As(err, &e) {
		return problem.At(err, st.at(c.position))
	}
	row := rows[e.Row] + 1
	mend := "mend the file, or leave such rows out: AS (SELECT … WHERE …)"
	switch e.Fault {
	case frame.RowSwapped:
		return problem.New("geographic", st.at(c.position), "row %d of %s lies %.0f km from the others, and would lie among them with latitude and longitude exchanged", row, origin, e.Value/1000).
			WithHint("%s", mend)
	case frame.NoFix:
		return problem.New("geographic", st.at(c.position), "row %d of %s has latitude 0 and longitude 0, %.0f km from the others: a receiver without a fix writes that", row, origin, e.Value/1000).
			WithHint("%s", mend)
	case frame.TooFar:
		return problem.New("geographic", st.at(c.position), "row %d of %s lies %.0f km from the others: over such distances metres east, north and up mean nothing", row, origin, e.Value/1000).
			WithHint("%s; is one of them in other units than degrees?", mend)
	}
	what := "longitude"
	if e.Fault != frame.Longitude {
		what = "latitude"
	}
	p := problem.New("geographic", st.at(c.position), "row %d of %s has the %s %s, which cannot be", row, origin, what, column.FormatReal(e.Value))
	if e.Fault == frame.Swapped {
		return p.WithHint("latitude and longitude seem to be swapped: POSITION (latitude, longitude, height) GEOGRAPHIC, in degrees")
	}
	return p.WithHint("POSITION (latitude, longitude, height) GEOGRAPHIC takes degrees, from -90 to 90 and from -180 to 180")
}

// namesSwapped refuses a longitude, going by the name of its column, in the place of the
// latitude: over most of the earth the numbers alone do not tell.
func namesSwapped(st *statement, p *lang.PositionReading) error {
	first, one := p.X.(*lang.Column)
	second, other := p.Y.(*lang.Column)
	if !one || !other {
		return nil
	}
	is := func(c *lang.Column, words ...string) bool {
		name := lang.Fold(c.Name.Text)
		return slices.ContainsFunc(words, func(w string) bool { return strings.HasPrefix(name, w) || strings.HasSuffix(name, "_"+w) })
	}
	if !is(first, "lon", "lng") || !is(second, "lat") {
		return nil
	}
	return problem.New("geographic", st.at(p), "latitude and longitude are swapped, going by the names %s and %s", first.Name.Text, second.Name.Text).
		WithHint("POSITION (%s, %s, …) GEOGRAPHIC; if the columns are misnamed, %s + 0 is taken as it stands", second.Name.Text, first.Name.Text, first.Name.Text)
}

// tellPlaced says how positions came about, now and whenever the object is described.
func (c *clauses) tellPlaced(text string) {
	c.st.notes.Add(note.Note, note.Sites, "%s", text)
	c.placedNotes = append(c.placedNotes, text)
}
