//go:build !unix

package prompt

import (
	"os"
	"syscall"
)

var endingSignals = []os.Signal{os.Interrupt, syscall.SIGTERM}

// suspend does nothing: there is no job control.
func suspend(_, _ func() error) {}
