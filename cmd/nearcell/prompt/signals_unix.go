//go:build unix

package prompt

import (
	"os"
	"os/signal"
	"syscall"
	"time"
)

// endingSignals are those that stop a statement or end the program; at any of
// them the terminal must be put right first.
var endingSignals = []os.Signal{os.Interrupt, syscall.SIGTERM, syscall.SIGHUP}

// resumed is how long the program waits to be stopped after it has asked for it.
const resumed = time.Second

// suspend stops the program as Ctrl-Z does where the terminal sees to it: with
// the terminal as it was before, and all of the job, but nobody else.
func suspend(exit, enter func() error) {
	if exit() != nil {
		return
	}
	back := make(chan os.Signal, 1)
	signal.Notify(back, syscall.SIGCONT)
	defer signal.Stop(back)
	if syscall.Kill(0, syscall.SIGTSTP) == nil {
		select {
		case <-back:
		case <-time.After(resumed): // a shell without job control does not stop us
		}
	}
	_ = enter() // if the terminal is gone, the next read says so
}
