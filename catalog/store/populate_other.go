//go:build unix && !linux

package store

const populate = 0
