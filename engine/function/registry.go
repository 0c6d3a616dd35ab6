package function

// LookupScalar finds a scalar function by its name or alias, in any case.
func LookupScalar(name string) *Scalar { return nil }

// LookupAggregate finds an aggregate by its name, in any case.
func LookupAggregate(name string) *Aggregate { return nil }

// Scalars are all scalar functions, sorted by name.
func Scalars() []*Scalar { return nil }

// Aggregates are all aggregates, sorted by name.
func Aggregates() []*Aggregate { return nil }

// Names are the names of all functions and aggregates, sorted, aliases too.
func Names() []string { return nil }

// Planned reports whether the language has a function of that name that has no
// engine yet; it is refused by its name.
func Planned(name string) bool { return false }
