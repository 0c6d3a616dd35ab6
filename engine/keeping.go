package engine

import (
	"context"
	"errors"
	"strings"
	"syscall"
	"time"

	"nearcell/catalog/column"
	"nearcell/catalog/store"
	"nearcell/engine/diagram"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
)

const cacheSetting = "CACHE"

// keepDiagrams makes the session keep large diagrams in the catalog's folder, if it has
// one.
func (s *Session) keepDiagrams() {
	folder, err := s.catalog.Derived()
	if folder == nil {
		return
	}
	s.diagrams.Keep(diagram.NewKeeper(folder))
	if err != nil {
		s.untold = append(s.untold, err)
	}
}

// tellOfKeeping says what went wrong with kept diagrams. It costs time and never an
// answer, so that it is a note.
func (s *Session) tellOfKeeping(st *statement) {
	for _, err := range append(s.untold, s.diagrams.Troubles()...) {
		st.notes.Add(note.Note, note.Slowness, "%s", keepingText(err))
	}
	s.untold = nil
}

func keepingText(err error) string {
	var damaged *store.DamagedError
	var newer *store.NewerError
	var locked *store.LockedError
	var keep *diagram.KeepError
	isKeep := errors.As(err, &keep)
	switch {
	case errors.As(err, &damaged):
		return "the file " + damaged.Path + " of a kept diagram is damaged and is not used; what it held is computed again"
	case errors.As(err, &newer):
		return "the kept diagrams are those of a later version of this program and are not used"
	case errors.As(err, &locked):
		return "the diagram is not kept, as another process is changing those that are"
	case isKeep && errors.Is(err, syscall.ENOSPC):
		return "the diagram is not kept, as there is no room for it on the disk: DROP DIAGRAMS makes some"
	}
	return err.Error()
}

// keeper is what keeps diagrams; a problem where nothing does.
func (s *Session) keeper() *diagram.Keeper { return s.diagrams.Keeper() }

// cacheText is the limit of kept diagrams.
func (s *Session) cacheText() string {
	if s.keeper() == nil {
		return "none without a catalog"
	}
	n, err := s.keeper().Limit()
	if err != nil {
		return "unknown"
	}
	return sizeText(n)
}

// setCache is SET CACHE 'size'.
func (s *Session) setCache(ctx context.Context, st *statement, t *lang.Set) error {
	refusal := func(at lang.Node) error {
		return problem.New("setting", st.at(at), "SET CACHE takes a size such as '2GiB', or 0")
	}
	if t.Value == nil {
		return refusal(t)
	}
	v, err := s.constant(st, t.Value)
	if err != nil {
		return err
	}
	text := v.S
	if v.Type == column.Integer && !v.Null && v.I == 0 {
		text = "0"
	} else if v.Null || v.Type != column.Text {
		return refusal(t.Value)
	}
	bytes, ok := ParseSize(text)
	if !ok {
		return refusal(t.Value)
	}
	switch {
	case s.checkOnly:
		return nil
	case s.keeper() == nil:
		st.notes.Add(note.Note, note.Output, "without a catalog no diagrams are kept, whatever CACHE is")
		return nil
	}
	if err := s.keeper().SetLimit(ctx, bytes); err != nil {
		return catalogProblem(err, st.at(t))
	}
	return nil
}

// dropDiagrams is DROP DIAGRAMS.
func (s *Session) dropDiagrams(ctx context.Context) error {
	if s.checkOnly {
		return nil
	}
	s.diagrams.Clear()
	if s.keeper() == nil {
		s.say("no diagrams are kept without a catalog")
		return nil
	}
	n, bytes, err := s.keeper().Drop(ctx)
	switch {
	case err != nil:
		return catalogProblem(err, problem.Place{})
	case n == 0:
		s.say("no diagrams are kept")
	default:
		s.say("%s dropped, %s", plural(n, "diagram"), sizeText(bytes))
	}
	return nil
}

// listDiagrams is LIST DIAGRAMS.
func (s *Session) listDiagrams() (*column.Table, error) {
	r := newRows(text("diagram"), text("of"), text("within"), whole("sites"), text("kept"), whole("bytes"),
		column.Field{Name: "made", Type: column.Timestamp}, column.Field{Name: "used", Type: column.Timestamp})
	if s.keeper() == nil {
		return r.table(), nil
	}
	list, err := s.keeper().List()
	if err != nil {
		return nil, catalogProblem(err, problem.Place{})
	}
	for _, d := range list {
		r.add(column.String(d.Key[:12]), maybe(d.Of), maybe(d.Within), column.Int(int64(d.Sites)),
			maybe(strings.Join(d.Parts, ", ")), column.Int(d.Bytes), moment(d.Made), moment(d.Used))
	}
	return r.table(), nil
}

func moment(t time.Time) column.Value {
	return column.Value{Type: column.Timestamp, I: t.UTC().Truncate(time.Second).UnixMicro()}
}
