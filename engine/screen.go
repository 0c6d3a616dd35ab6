package engine

import (
	"nearcell/engine/note"
	"nearcell/engine/present"
	"nearcell/engine/report"
)

// tableOptions are the choices for results that are printed; on a screen its
// size limits them.
func (s *Session) tableOptions() present.Options {
	o := present.Options{Digits: s.digits}
	if s.report != nil {
		o.Rows = report.DefaultRows
		if s.rowLimit > 0 {
			o.Rows = s.rowLimit
		}
		return o
	}
	if s.o.Screen == nil {
		return o
	}
	o.Width, o.Rows = s.o.Screen()
	if s.rowLimit > 0 {
		o.Rows = s.rowLimit
	}
	return o
}

// noteLeftOut says what a table does not show, and how to see or keep it.
func (s *Session) noteLeftOut(st *statement, w present.Writer, rows, unwritten int64) {
	if unwritten > 0 {
		see := "--as csv writes all"
		if printed := rows - unwritten; (s.o.Screen != nil || s.report != nil) && printed < present.MaxTableRows {
			see = "SET ROWS 1000 prints more"
			if rows <= present.MaxTableRows {
				see = "SET ROWS " + s.number(float64(rows)) + " prints all"
			}
		}
		st.notes.Add(note.Note, note.Output, "the first %s of %d are printed; %s, SAVE … TO 'file.csv' keeps all",
			plural(rows-unwritten, "row"), rows, see)
	}
	fitted, ok := w.(present.Fitted)
	if !ok || len(fitted.LeftOut()) == 0 {
		return
	}
	out := fitted.LeftOut()
	verb := "do"
	if len(out) == 1 {
		verb = "does"
	}
	st.notes.Add(note.Note, note.Output, "%s %s not fit in the width of the terminal: %s; SELECT fewer, or SAVE … TO 'file.csv'",
		plural(len(out), "column"), verb, listed(out, 6))
}
