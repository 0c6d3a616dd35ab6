//go:build unix

package reader

import (
	"os"

	"golang.org/x/sys/unix"
)

// mapFile shows a file in memory without reading it: its pages come as they are looked
// at, and go again when memory is short.
func mapFile(f *os.File, size int64) (data []byte, release func(), ok bool) {
	if int64(int(size)) != size {
		return nil, nil, false
	}
	data, err := unix.Mmap(int(f.Fd()), 0, int(size), unix.PROT_READ, unix.MAP_SHARED)
	if err != nil {
		return nil, nil, false
	}
	_ = unix.Madvise(data, unix.MADV_SEQUENTIAL)
	return data, func() { _ = unix.Munmap(data) }, true
}

// forget lets whole pages of a mapped file go until they are looked at again.
func forget(data []byte) { _ = unix.Madvise(data, unix.MADV_DONTNEED) }
