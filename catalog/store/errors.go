package store

import "fmt"

// DamagedError says that a file of the folder is not what was written.
type DamagedError struct {
	Path   string
	Reason string // a technical text
}

func (e *DamagedError) Error() string {
	return fmt.Sprintf("store: %s is damaged: %s", e.Path, e.Reason)
}

// NewerError says that a newer program has written the folder.
type NewerError struct {
	Path            string
	Version, Newest int // the version there, and the newest one that is understood
}

func (e *NewerError) Error() string {
	return fmt.Sprintf("store: %s has version %d, beyond %d", e.Path, e.Version, e.Newest)
}

// LockedError says that another program has kept the folder locked for too long.
type LockedError struct{ Path string }

func (e *LockedError) Error() string { return fmt.Sprintf("store: %s is locked", e.Path) }
