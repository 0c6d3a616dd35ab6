package main

import (
	"math"
	"os"
	"runtime"
	"runtime/debug"
)

// firstCollection is how much memory is used before garbage is looked for the first time.
const firstCollection = 192 << 20

// collectLater puts the first collection of garbage off until the program uses
// firstCollection bytes: a heap that grows from nothing to that is gone over six times
// otherwise, for a tenth of the time of a short query. From then on all is as usual.
// Whoever has set GOGC or GOMEMLIMIT is left with that.
func collectLater() {
	if os.Getenv("GOGC") != "" || os.Getenv("GOMEMLIMIT") != "" {
		return
	}
	usual := debug.SetGCPercent(-1)
	debug.SetMemoryLimit(firstCollection)
	// The first collection finds this object gone, and so tells that it was.
	runtime.AddCleanup(new([64]byte), func(percent int) {
		debug.SetMemoryLimit(math.MaxInt64)
		debug.SetGCPercent(percent)
	}, usual)
}
