//go:build unix && !linux

package store

func advise([]string) {}

const populate = 0
