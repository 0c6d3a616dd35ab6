package engine

import (
	"io"

	"nearcell/engine/draw"
)

// showSection prints a map: as a result of its own, with the width of the screen.
func (s *Session) showSection(p *draw.Section) error {
	columns := 0
	if s.o.Screen != nil {
		columns, _ = s.o.Screen()
	}
	out := &lateSeparator{w: s.o.Out, pending: s.results > 0}
	if _, err := io.WriteString(out, p.Characters(columns, s.o.PlainText)); err != nil {
		return err
	}
	s.results++
	return nil
}
