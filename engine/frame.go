package engine

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"time"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/catalog/frame"
	"nearcell/catalog/reader"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// keptFrame is the text under which the catalog keeps a frame; its table are the pairs
// of points with what each is off.
type keptFrame struct {
	frame.Similarity
	Pairs   int     `json:"pairs"`
	RMS     float64 `json:"rms"`     // of the residuals
	Largest float64 `json:"largest"` // residual
	Worst   string  `json:"worst"`   // the pair that it is of
}

// createFrame is CREATE FRAME: the similarity that brings the drawing's points of a file
// to the site's.
func (s *Session) createFrame(ctx context.Context, st *statement, t *lang.CreateFrame) error {
	if err := s.mayCreate(st, t.Name, catalog.Frame, t.Replace); err != nil {
		return err
	}
	source, err := openSource(st, t.File)
	if err != nil {
		return err
	}
	form, err := formatOf(st.at(t.File), t.File.Value)
	if err != nil {
		return err
	}
	if source, err = unpacked(st, t.File, source); err != nil {
		return err
	}
	result, err := form.read.ReadFiles(ctx, []*reader.Source{source}, reader.Options{})
	if err != nil {
		return problem.New("control-points", st.at(t.File), "the pairs of points in '%s' cannot be read: %v", t.File.Value, err)
	}
	p, err := readPairs(st, t.File, result.Table)
	if err != nil {
		return err
	}
	fit, off, err := frame.Fit(p.from, p.to, p.plan)
	if err != nil {
		return frameProblem(err, st.at(t.File), t.File.Value, len(p.from))
	}
	kept := keptFrame{Similarity: *fit, Pairs: len(off)}
	for i, r := range off {
		d := math.Sqrt(float64(r[0]*r[0]) + float64(r[1]*r[1]) + float64(r[2]*r[2]))
		kept.RMS += float64(d*d) / float64(len(off))
		if d > kept.Largest || i == 0 {
			kept.Largest, kept.Worst = d, p.names[i]
		}
	}
	kept.RMS = math.Sqrt(kept.RMS)
	text, err := json.Marshal(kept)
	if err != nil {
		return err
	}
	f := result.Files[0]
	object := catalog.Object{Kind: catalog.Frame, Key: t.Name.Key(), Name: t.Name.Text, Text: string(text), Created: time.Now().UTC(),
		Table: p.table(off), Sources: []catalog.SourceFile{{Path: f.Name, SHA256: f.SHA256, Size: f.Bytes, ModTime: source.ModTime, Rows: f.Rows}}}
	if err := s.catalog.Put(object, t.Replace); err != nil {
		return catalogProblem(err, st.at(t.Name))
	}
	if extent := p.extent(); kept.RMS > 0.01*extent {
		st.notes.Add(note.Warning, note.Import, "the pairs of %s fit badly: they are off by %s m on the whole, over %s m; is one of them mistaken? DESCRIBE %s shows each",
			t.Name.Text, s.number(kept.RMS), s.number(extent), t.Name.Text)
	}
	if !s.checkOnly {
		s.say("%s: a frame from %s of points, %s; off by %s m on the whole, %s m at most (%s)", t.Name.Text, plural(kept.Pairs, "pair"),
			s.frameText(&kept), s.number(kept.RMS), s.number(kept.Largest), kept.Worst)
	}
	return nil
}

// frameText says what a frame does.
func (s *Session) frameText(k *keptFrame) string {
	text := fmt.Sprintf("scaled by %s, turned by %s°", s.number(k.Scale), s.number(roundedDegrees(k.Degrees())))
	if !k.Upright {
		text = fmt.Sprintf("scaled by %s, turned in space", s.number(k.Scale))
	}
	if k.Mirrored {
		text += ", mirrored"
	}
	switch {
	case k.Plan:
		text += ", heights as they are"
	case k.Upright:
		text += ", up stays up (the points lie at one height)"
	}
	return text
}

// roundedDegrees takes the rounding off an angle.
func roundedDegrees(d float64) float64 { return math.Round(d*1e9)/1e9 + 0 }

// frameProblem words what keeps points from making a frame.
func frameProblem(err error, at problem.Place, file string, n int) error {
	switch {
	case errors.Is(err, frame.ErrFew):
		return problem.New("control-points", at, "'%s' has %s of points; a frame needs three that are not on one line", file, plural(n, "pair")).
			WithHint("two leave open whether the drawing is mirrored")
	case errors.Is(err, frame.ErrLine):
		return problem.New("control-points", at, "the points of '%s' lie on one line, in the drawing or at the site: whether the drawing is mirrored is left open", file).
			WithHint("add a point well beside the line")
	case errors.Is(err, frame.ErrPlane):
		return problem.New("control-points", at, "the points of '%s' lie in one plane that is not level: whether the drawing is mirrored is left open", file).
			WithHint("add a point off the plane, or give plan coordinates alone: px, py, x, y")
	case errors.Is(err, frame.ErrNotFinite):
		return problem.New("control-points", at, "a coordinate of '%s' is no finite number", file)
	}
	return problem.At(err, at)
}

// pairs are the points of a file: where the drawing has them, and where the site does.
type pairs struct {
	names    []string
	from, to []frame.Point
	plan     bool
}

// readPairs finds the columns px, py[, pz] and x, y[, z], and name or id if there is one.
func readPairs(st *statement, file *lang.Text, t *column.Table) (*pairs, error) {
	find := func(name string) *column.Vector {
		for i, f := range t.Schema {
			if lang.Fold(f.Name) == name {
				return &t.Cols[i]
			}
		}
		return nil
	}
	p := &pairs{plan: find("pz") == nil && find("z") == nil}
	names := [2][]string{{"px", "py", "pz"}, {"x", "y", "z"}}
	if p.plan {
		names = [2][]string{{"px", "py"}, {"x", "y"}}
	}
	p.from, p.to = make([]frame.Point, t.N), make([]frame.Point, t.N)
	label := find("name")
	if label == nil {
		label = find("id")
	}
	for side, list := range names {
		for k, name := range list {
			v := find(name)
			if v == nil || !v.Type.Numeric() {
				return nil, problem.New("control-points", st.at(file), "'%s' has no column %s of numbers", file.Value, name).
					WithHint("pairs of points have the columns px, py of the drawing and x, y of the site, or px, py, pz and x, y, z; it has %s", listed(columnNames(t.Schema), 12))
			}
			for i := range t.N {
				if v.IsNull(i) {
					return nil, problem.New("control-points", st.at(file), "row %d of '%s' has no %s", i+1, file.Value, name)
				}
				x := 0.0
				if v.Type == column.Integer {
					x = float64(v.I[i])
				} else {
					x = v.F[i]
				}
				if side == 0 {
					p.from[i][k] = x
				} else {
					p.to[i][k] = x
				}
			}
		}
	}
	for i := range t.N {
		name := fmt.Sprintf("row %d", i+1)
		if label != nil && !label.IsNull(i) {
			name = label.Value(i).String()
		}
		p.names = append(p.names, name)
	}
	return p, nil
}

// extent is the largest distance of a site's point from another along an axis.
func (p *pairs) extent() float64 {
	size := 0.0
	for k := range 3 {
		lo, hi := math.Inf(1), math.Inf(-1)
		for _, q := range p.to {
			lo, hi = min(lo, q[k]), max(hi, q[k])
		}
		size = max(size, hi-lo)
	}
	return size
}

// table are the pairs with what each is off.
func (p *pairs) table(off []frame.Point) *column.Table {
	m := column.Symbol("m")
	fields := []column.Field{text("point"), realField("px", nil), realField("py", nil)}
	dims := 2
	if !p.plan {
		dims = 3
		fields = append(fields, realField("pz", nil))
	}
	for _, name := range []string{"x", "y", "z"}[:dims] {
		fields = append(fields, realField(name, m))
	}
	for _, name := range []string{"dx", "dy", "dz"}[:dims] {
		fields = append(fields, realField(name, m))
	}
	r := newRows(append(fields, realField("off", m))...)
	for i, name := range p.names {
		values := []column.Value{column.String(name)}
		for _, q := range [3]frame.Point{p.from[i], p.to[i], off[i]} {
			for k := range dims {
				values = append(values, column.Float(q[k]))
			}
		}
		d := off[i]
		r.add(append(values, column.Float(math.Sqrt(float64(d[0]*d[0])+float64(d[1]*d[1])+float64(d[2]*d[2]))))...)
	}
	return r.table()
}

// frameNamed is a frame of the catalog.
func (s *Session) frameNamed(st *statement, name lang.Name) (*catalog.Object, *keptFrame, error) {
	o, err := s.catalog.Get(name.Key())
	if err != nil {
		var none *catalog.ErrNoSuch
		if !errors.As(err, &none) {
			return nil, nil, catalogProblem(err, st.at(name))
		}
		p := problem.New("no-object", st.at(name), "there is no frame '%s'", name.Text)
		if near := lang.Nearest(name.Text, s.Objects(catalog.Frame)); near != "" {
			return nil, nil, p.WithHint("did you mean '%s'?", near)
		}
		return nil, nil, p.WithHint("CREATE FRAME %s MATCHING 'control.csv'; makes one from pairs of points", name.Text)
	}
	if o.Kind != catalog.Frame {
		return nil, nil, problem.New("wrong-kind", st.at(name), "'%s' is a %s, not a frame", o.Name, lang.Fold(o.Kind.String()))
	}
	var k keptFrame
	if err := json.Unmarshal([]byte(o.Text), &k); err != nil {
		return nil, nil, problem.New("failed", st.at(name), "the frame '%s' cannot be read from the catalog: %v", o.Name, err)
	}
	return o, &k, nil
}

// describeFrame shows the pairs of a frame and what each is off.
func (s *Session) describeFrame(st *statement, t *lang.Describe) error {
	o, k, err := s.frameNamed(st, t.Name)
	if err != nil {
		return err
	}
	st.notes.Add(note.Note, note.Import, "the frame brings coordinates of the drawing to the site's: %s", s.frameText(k))
	st.notes.Add(note.Note, note.Import+1, "dx, dy and dz are where a point comes out, less where it should; on the whole off by %s m, by %s m at most (%s)",
		s.number(k.RMS), s.number(k.Largest), k.Worst)
	return s.showTable(st, o.Table)
}

func (s *Session) listFrames() (*column.Table, error) {
	objects, err := s.catalog.List(catalog.Frame)
	if err != nil {
		return nil, err
	}
	m := column.Symbol("m")
	r := newRows(text("frame"), whole("pairs"), realField("scale", nil), realField("turned", column.Symbol("°")),
		column.Field{Name: "mirrored", Type: column.Boolean}, realField("rms", m), realField("largest", m), text("from"))
	for i := range objects {
		var k keptFrame
		if err := json.Unmarshal([]byte(objects[i].Text), &k); err != nil {
			return nil, err
		}
		turned := column.Float(roundedDegrees(k.Degrees()))
		if !k.Upright {
			turned = column.NullOf(column.Real)
		}
		r.add(column.String(objects[i].Name), column.Int(int64(k.Pairs)), column.Float(k.Scale), turned, column.Bool(k.Mirrored),
			column.Float(k.RMS), column.Float(k.Largest), maybe(sourceText(&objects[i])))
	}
	return r.table(), nil
}
