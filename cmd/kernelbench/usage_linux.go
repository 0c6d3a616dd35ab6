package main

import (
	"fmt"
	"os"
	"syscall"
)

func usage() (c consumption) {
	var u syscall.Rusage
	if syscall.Getrusage(syscall.RUSAGE_SELF, &u) == nil {
		c.cpu = float64(u.Utime.Nano()+u.Stime.Nano()) / 1e9
		c.peak = u.Maxrss << 10
	}
	if b, err := os.ReadFile("/proc/self/statm"); err == nil {
		var total, resident int64
		if _, err := fmt.Sscan(string(b), &total, &resident); err == nil {
			c.resident = resident * int64(os.Getpagesize())
		}
	}
	return c
}
