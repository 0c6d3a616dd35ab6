//go:build !unix

package store

import "os"

// mapFile reads a file into memory: there is no mmap here.
func mapFile(path string) (data []byte, unmap func() error, err error) {
	data, err = os.ReadFile(path)
	return data, func() error { return nil }, err
}

// syncFolder does nothing: folders cannot be flushed here.
func syncFolder(string) error { return nil }

func advise([]string) {}
