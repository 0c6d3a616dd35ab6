package reader

import (
	"errors"
	"io"
	"os"
	"runtime/debug"
	"time"
)

// MappedFrom is the size from which Map shows a file in memory instead of copying it there.
const MappedFrom = 16 << 20

// ErrChanged says that somebody changed a file while it was read.
var ErrChanged = errors.New("the file was changed while it was read")

// Source is a file in memory.
type Source struct {
	Name    string // as the user wrote it; faults carry it
	Data    []byte
	ModTime time.Time // zero where there is none
	Stored  *Stored   // where Data was unpacked: the file as it lies on the disk

	path    string
	release func()
	passed  int
}

// Open reads a file. name is what faults will call it, path where it is.
func Open(name, path string) (*Source, error) {
	info, err := os.Stat(path)
	if err != nil {
		return nil, err
	}
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	return &Source{Name: name, Data: data, ModTime: info.ModTime()}, nil
}

// Map is Open for files of any size: a large one is not copied, so that it takes no
// memory that is not given back when others need it. Whoever reads Data does so under
// Guard, keeps nothing of it, and calls Close.
func Map(name, path string) (*Source, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	defer f.Close() // the mapping outlives it
	info, err := f.Stat()
	if err != nil {
		return nil, err
	}
	s := &Source{Name: name, ModTime: info.ModTime(), path: path}
	if info.Mode().IsRegular() && info.Size() >= MappedFrom {
		if data, release, ok := mapFile(f, info.Size()); ok {
			s.Data, s.release = data, release
			return s, nil
		}
	}
	s.Data, err = io.ReadAll(f)
	return s, err
}

// Passed tells that Data up to a byte will not be looked at soon. Of a mapped file these
// pages no longer count as memory of the program; they come back when they are looked at.
func (s *Source) Passed(to int) {
	const step = 1 << 22
	from := s.passed
	if to < from {
		from = 0 // another pass
	}
	if to -= to % step; s.release != nil && from < to && to <= len(s.Data) {
		forget(s.Data[from:to])
		s.passed = to
	} else if to < s.passed {
		s.passed = to
	}
}

// Close lets a mapped file go; Data must not be used afterwards. The error is ErrChanged
// where the file is no longer what it was when it was opened: then what was read of it
// may be neither the old content nor the new.
func (s *Source) Close() error {
	if s.release == nil {
		return nil
	}
	s.release()
	size := len(s.Data)
	s.release, s.Data = nil, nil
	info, err := os.Stat(s.path)
	if err != nil || info.Size() != int64(size) || !info.ModTime().Equal(s.ModTime) {
		return ErrChanged
	}
	return nil
}

// Guard does work that looks at the data of mapped files. Where one of them was made
// shorter meanwhile there is nothing to look at, which is ErrChanged and not the end of
// the program.
func Guard(work func() error) (err error) {
	before := debug.SetPanicOnFault(true)
	defer func() {
		debug.SetPanicOnFault(before)
		p := recover()
		if p == nil {
			return
		}
		if _, fault := p.(interface{ Addr() uintptr }); !fault {
			panic(p)
		}
		err = ErrChanged
	}()
	return work()
}
