package engine

import (
	"errors"
	"fmt"
	"math"

	"nearcell/catalog/column"
	"nearcell/catalog/frame"
	"nearcell/engine/note"
	"nearcell/engine/problem"
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
		c.system = o.Name
		c.tellPlaced(fmt.Sprintf("positions are brought from the frame %s to the site's coordinates: %s; off by %s m on the whole of its points",
			o.Name, s.frameText(k), s.number(k.RMS)))
		return k.Apply, nil
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
	var e *frame.GeographicError
	if errors.As(err, &e) {
		what := "longitude"
		if e.Latitude {
			what = "latitude"
		}
		p := problem.New("geographic", st.at(c.position), "row %d of %s has the %s %s, which cannot be", rows[e.Row]+1, origin, what, column.FormatReal(e.Value))
		if e.Swapped {
			return nil, p.WithHint("latitude and longitude seem to be swapped: POSITION (latitude, longitude, height) GEOGRAPHIC, in degrees")
		}
		return nil, p.WithHint("POSITION (latitude, longitude, height) GEOGRAPHIC takes degrees, from -90 to 90 and from -180 to 180")
	}
	if err != nil {
		return nil, problem.At(err, st.at(c.position))
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
	c.system = fmt.Sprintf("GEOGRAPHIC %s %s", column.FormatReal(at.Latitude), column.FormatReal(at.Longitude))
	c.tellPlaced(fmt.Sprintf("positions are metres east, north and up of latitude %s°, longitude %s°, height 0 (WGS 84): the middle of the survey, to a hundredth of a degree",
		column.FormatReal(at.Latitude), column.FormatReal(at.Longitude)))
	c.tellPlaced(fmt.Sprintf("up is not height: z is lower by up to %s m, since the earth curves away under %s m", s.number(short), s.number(math.Round(far))))
	if far > 50000 {
		st.notes.Add(note.Warning, note.Sites, "the places of %s lie up to %s km from their middle: is one of them mistaken?", origin, s.number(math.Round(far/1000)))
	}
	return func(p frame.Point) frame.Point { return at.East(p[0], p[1], p[2]) }, nil
}

// tellPlaced says how positions came about, now and whenever the object is described.
func (c *clauses) tellPlaced(text string) {
	c.st.notes.Add(note.Note, note.Sites, "%s", text)
	c.placedNotes = append(c.placedNotes, text)
}
