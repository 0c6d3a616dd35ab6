package delaunay

import (
	"reflect"
	"syscall"
)

// AdviseHugePages asks for pages of 2 MiB behind a large slice. A build touches all of
// its memory once and then jumps about in it: with pages of 4 KiB a third of the time
// can go into the kernel's page faults, more than a hundred thousand of them for a
// million sites. It is advice: where the kernel does not take it nothing is lost.
func AdviseHugePages[E any](s []E) {
	const huge, madvHugePage = 1 << 21, 14
	bytes := uintptr(len(s)) * reflect.TypeFor[E]().Size()
	if bytes < 2*huge {
		return
	}
	begin := reflect.ValueOf(s).Pointer()
	end := (begin + bytes) &^ (huge - 1)
	begin = (begin + huge - 1) &^ (huge - 1)
	_, _, _ = syscall.Syscall(syscall.SYS_MADVISE, begin, end-begin, madvHugePage)
}
