package store

import (
	"unsafe"

	"golang.org/x/sys/unix"
)

// populate brings a whole file in at once: all of it is read for its checksum anyway.
const populate = unix.MAP_POPULATE

// advise asks for pages of 2 MiB behind a large dictionary: all of it is touched at once,
// and small pages cost more than the texts.
func advise(texts []string) {
	const page = 1 << 12
	const small = 4 << 20
	size := uintptr(len(texts)) * unsafe.Sizeof("")
	if size < small {
		return
	}
	from := uintptr(unsafe.Pointer(&texts[0]))
	skip := (page - from%page) % page
	b := unsafe.Slice((*byte)(unsafe.Pointer(&texts[0])), size)
	_ = unix.Madvise(b[skip:size-(from+size)%page], unix.MADV_HUGEPAGE)
}
