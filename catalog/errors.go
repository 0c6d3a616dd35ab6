package catalog

import "fmt"

// ErrExists says that the name is taken by an object of the kind.
type ErrExists struct {
	Kind Kind
	Name string
}

func (e *ErrExists) Error() string { return fmt.Sprintf("catalog: %s %s exists", e.Kind, e.Name) }

// ErrNoSuch says that there is no such object. Found, if not 0, is the kind of
// the object that has the name, where another kind was asked for.
type ErrNoSuch struct {
	Kind  Kind // the kind asked for, 0 for any
	Key   string
	Found Kind
}

func (e *ErrNoSuch) Error() string {
	if e.Found != 0 {
		return fmt.Sprintf("catalog: %s is a %s, not a %s", e.Key, e.Found, e.Kind)
	}
	return fmt.Sprintf("catalog: no object %s", e.Key)
}
