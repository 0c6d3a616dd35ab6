package engine

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/draw"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// picture is the data of a picture, which can lay itself out.
type picture interface{ Scene() *draw.Scene }

// pictureForm says what one kind of picture takes.
type pictureForm struct {
	takes []string // clauses of DRAW
	needs []string // those that it cannot be without
	ready func(s *Session, ctx context.Context, st *statement, t *lang.Draw) (picture, error)
}

// pictureForms are the pictures by what is drawn.
func pictureForms() map[string]pictureForm {
	return map[string]pictureForm{
		"SECTION":   {[]string{"SHADED BY", "LIMITS"}, []string{"SHADED BY"}, (*Session).sectionPicture},
		"COURSE":    {[]string{"ALONG", "SHOWING", "LIMITS"}, []string{"ALONG", "SHOWING"}, (*Session).coursePicture},
		"HISTOGRAM": {[]string{"SHOWING", "WEIGHTED BY", "LIMITS"}, []string{"SHOWING"}, (*Session).histogramPicture},
		"PROFILE":   {[]string{"ALONG", "LIMITS"}, []string{"ALONG"}, (*Session).profilePicture},
		"CELLS":     {[]string{"SHADED BY", "LIMITS", "SEEN FROM"}, []string{"SHADED BY"}, (*Session).spacePicture},
	}
}

// drawing is DRAW … TO 'file', and SHOW.
func (s *Session) drawing(ctx context.Context, st *statement, t *lang.Draw) error {
	write, err := s.pictureFile(st, t)
	if err != nil {
		return err
	}
	p, err := s.pictureOf(ctx, st, t)
	if err != nil || p == nil {
		return err
	}
	if t.Show && s.report == nil {
		return s.showSection(p.(*draw.Section))
	}
	scene := p.Scene()
	if s.report != nil { // the picture stands in the report, too
		if err := s.report.Picture(scene.SVG(), scene.Title+". "+scene.Description, st.place(), st.text()); err != nil {
			return err
		}
	}
	if t.Show {
		return nil
	}
	data, err := write(p, scene)
	if err != nil {
		return err
	}
	err = WriteAside(st.path(t.To.Value), func(f *os.File) error {
		_, err := f.Write(data)
		return err
	})
	if err != nil {
		return fileProblem(err, st.at(t.To), t.To.Value, "be written")
	}
	s.say("drawn to %s, %s", t.To.Value, st.seconds())
	return nil
}

// pictureOf is the picture that a statement asks for; nil where the statement is only
// checked. Its Scene has the bytes of the file: SVG, PNG.
func (s *Session) pictureOf(ctx context.Context, st *statement, t *lang.Draw) (picture, error) {
	noun := strings.ToUpper(t.Relation.Noun.Text)
	form, ok := pictureForms()[noun]
	switch {
	case t.Show && noun != "SECTION":
		return nil, problem.New("no-picture", st.at(&t.Relation.Noun), "the terminal has no picture of %s", noun).
			WithHint("SHOW SECTION OF campaign AT z = height SHADED BY column; others are files: DRAW … TO 'file.svg'")
	case !ok:
		return nil, problem.New("no-picture", st.at(&t.Relation.Noun), "there is no picture of %s", noun).
			WithHint("there are pictures of SECTION, CELLS, COURSE, HISTOGRAM and PROFILE (HELP DRAW)")
	}
	if err := form.fits(st, t, noun); err != nil {
		return nil, err
	}
	return form.ready(s, ctx, st, t)
}

// fits refuses clauses that a picture does not take, and misses those that it needs.
func (f *pictureForm) fits(st *statement, t *lang.Draw, noun string) error {
	given := map[string]bool{"SHADED BY": !t.Shaded.IsZero(), "LIMITS": len(t.Limits) > 0, "ALONG": !t.Along.IsZero(),
		"SHOWING": len(t.Showing) > 0, "WEIGHTED BY": t.Weight != nil, "SEEN FROM": len(t.Seen) > 0}
	for _, clause := range []string{"SHADED BY", "LIMITS", "ALONG", "SHOWING", "WEIGHTED BY", "SEEN FROM"} {
		switch {
		case given[clause] && !slices.Contains(f.takes, clause):
			return problem.New("no-clause", st.at(t), "a picture of %s takes no %s", noun, clause).
				WithHint("it takes %s", strings.Join(f.takes, ", "))
		case !given[clause] && slices.Contains(f.needs, clause):
			return problem.New("needs-clause", st.at(t), "a picture of %s needs %s", noun, clause).WithHint("HELP DRAW shows it")
		}
	}
	return nil
}

// pictureFile finds the way to write the file before anything is computed; nil for SHOW.
func (s *Session) pictureFile(st *statement, t *lang.Draw) (func(picture, *draw.Scene) ([]byte, error), error) {
	switch {
	case t.Show && t.To != nil:
		return nil, problem.New("clauses", st.at(t.To), "SHOW draws in the terminal and writes no file").WithHint("DRAW … TO '%s'", t.To.Value)
	case t.Show:
		return nil, nil
	case t.To == nil:
		return nil, problem.New("needs-clause", st.at(t), "DRAW needs a file").WithHint("DRAW … TO 'picture.svg'; SHOW SECTION draws in the terminal")
	}
	var write func(picture, *draw.Scene) ([]byte, error)
	switch ending := strings.ToLower(filepath.Ext(t.To.Value)); {
	case ending == ".svg":
		write = func(_ picture, scene *draw.Scene) ([]byte, error) { return scene.SVG(), nil }
	case ending == ".png":
		write = func(_ picture, scene *draw.Scene) ([]byte, error) { return scene.PNG() }
	case ending == ".html" && strings.EqualFold(t.Relation.Noun.Text, "CELLS"):
		write = s.spacePage
	case ending == ".html":
		return nil, problem.New("file-kind", st.at(t.To), "only CELLS are drawn as a page, '%s' cannot be one", t.To.Value).
			WithHint("end it with .svg or .png; nearcell run --as html puts all pictures into a report")
	default:
		p := problem.New("file-kind", st.at(t.To), "the ending of '%s' does not say how to draw it", t.To.Value)
		if strings.EqualFold(t.Relation.Noun.Text, "CELLS") {
			return nil, p.WithHint("end it with .html, .svg or .png")
		}
		return nil, p.WithHint("end it with .svg or .png")
	}
	if _, err := os.Stat(st.path(t.To.Value)); err == nil && !t.Overwrite && !s.checkOnly {
		return nil, problem.New("file-exists", st.at(t.To), "the file '%s' is there already", t.To.Value).
			WithHint("DRAW … TO '%s' OVERWRITE replaces it", t.To.Value)
	}
	return write, nil
}

// pictureLimits are the values of LIMITS: one, an upper one, or two.
func (s *Session) pictureLimits(st *statement, t *lang.Draw) ([]float64, error) {
	if len(t.Limits) > 2 {
		return nil, problem.New("limits", st.at(t.Limits[2]), "a picture has one limit or two, not %d", len(t.Limits)).
			WithHint("LIMITS (8) is an upper limit, LIMITS (2, 8) a lower and an upper one")
	}
	var list []float64
	for _, e := range t.Limits {
		v, err := s.pictureNumber(st, e, "a limit")
		if err != nil {
			return nil, err
		}
		list = append(list, v)
	}
	if len(list) == 2 && list[0] >= list[1] {
		return nil, problem.New("limits", st.at(t.Limits[0]), "the lower limit %s is not below the upper one, %s", draw.Number(list[0]), draw.Number(list[1])).
			WithHint("LIMITS (2, 8): the lower one first")
	}
	return list, nil
}

// pictureNumber is a number that a clause gives.
func (s *Session) pictureNumber(st *statement, e lang.Expr, what string) (float64, error) {
	v, err := s.constant(st, e)
	switch {
	case err != nil:
		return 0, err
	case v.Null:
		return 0, problem.New("no-value", st.at(e), "%s is NULL", what)
	case v.Type == column.Integer:
		return float64(v.I), nil
	case v.Type == column.Real:
		return v.F, nil
	}
	return 0, problem.New("types", st.at(e), "%s is %s, not a number", what, v.Type)
}

// selecting is SELECT names FROM source, at the place of a statement.
func selecting(t *lang.Draw, from lang.Source, names ...lang.Name) *lang.Query {
	q := &lang.Select{At: t.At, From: []lang.Source{from}}
	for _, n := range names {
		if n.At == (lang.At{}) {
			n.At = t.At
		}
		q.Items = append(q.Items, &lang.Item{At: n.At, Expr: &lang.Column{At: n.At, Name: n}})
	}
	return &lang.Query{At: t.At, Body: q}
}

// numeric refuses a column that is no number.
func numeric(st *statement, n lang.Name, f column.Field) error {
	if f.Type.Numeric() {
		return nil
	}
	return problem.New("types", st.at(&n), "'%s' is %s, not a number", f.Name, f.Type).
		WithHint("only numbers can be drawn; CAST(%s AS REAL) in OF (query) reads a text as one", f.Name)
}

// noted says something under the statement, and in the picture.
func (s *Session) noted(st *statement, notes *[]string, format string, args ...any) {
	st.notes.Add(note.Note, note.Output, format, args...)
	*notes = append(*notes, pictureSentence(format, args...))
}

// pictureSentence is a note as it stands in a picture.
func pictureSentence(format string, args ...any) string {
	text := fmt.Sprintf(format, args...)
	return strings.ToUpper(text[:1]) + text[1:] + "."
}
