package engine

import (
	"context"
	"errors"
)

// RunUntilQuit is Run for a prompt, which ends at QUIT.
func (s *Session) RunUntilQuit(ctx context.Context, name, text, folder string) (quit bool, err error) {
	err = s.runText(ctx, name, text, folder)
	if errors.Is(err, errQuit) {
		return true, nil
	}
	return false, err
}
