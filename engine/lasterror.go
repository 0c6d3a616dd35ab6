package engine

import (
	"errors"

	"nearcell/engine/problem"
)

// LastCode is the code of the last error that the session has printed, "" if it
// has printed none. HELP ERROR explains it.
func (s *Session) LastCode() string {
	var p *problem.Problem
	if errors.As(s.last, &p) {
		return p.Code
	}
	return ""
}
