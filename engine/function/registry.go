package function

import (
	"slices"
	"strings"
)

// The registry is made once; nothing changes it later.
var (
	scalars     = sortedScalars(numberScalars(), realScalars(), textScalars(), timeScalars(), choiceScalars())
	aggregates  = sortedAggregates(countAggregates(), sumAggregates(), momentAggregates(), orderAggregates(), interpolateAggregates())
	scalarOf    = index(scalars, func(s *Scalar) []string { return append([]string{s.Name}, s.Aliases...) })
	aggregateOf = index(aggregates, func(a *Aggregate) []string { return []string{a.Name} })
	windows     = windowFunctions()
	windowOf    = index(windows, func(w *Window) []string { return []string{w.Name} })
)

// planned are functions of the language that have no engine yet.
var planned []string

// LookupScalar finds a scalar function by its name or alias, in any case; nil
// where there is none.
func LookupScalar(name string) *Scalar { return scalarOf[strings.ToUpper(name)] }

// LookupAggregate finds an aggregate by its name, in any case; nil where there
// is none.
func LookupAggregate(name string) *Aggregate { return aggregateOf[strings.ToUpper(name)] }

// LookupWindow finds a window function by its name, in any case; nil where there is
// none. (Aggregates are window functions, too, and are not among them.)
func LookupWindow(name string) *Window { return windowOf[strings.ToUpper(name)] }

// Windows are all window functions, sorted by name.
func Windows() []*Window { return slices.Clone(windows) }

// All are all scalar functions, sorted by name.
func All() []*Scalar { return slices.Clone(scalars) }

// Aggregates are all aggregates, sorted by name.
func Aggregates() []*Aggregate { return slices.Clone(aggregates) }

// Names are the names of all functions and aggregates, sorted, aliases too.
func Names() []string {
	var names []string
	for name := range scalarOf {
		names = append(names, name)
	}
	for name := range aggregateOf {
		names = append(names, name)
	}
	for name := range windowOf {
		names = append(names, name)
	}
	slices.Sort(names)
	return names
}

// Planned reports whether the language has a function of that name that has no
// engine yet; it is refused by its name.
func Planned(name string) bool { return slices.Contains(planned, strings.ToUpper(name)) }

func sortedScalars(groups ...[]*Scalar) []*Scalar {
	all := slices.Concat(groups...)
	slices.SortFunc(all, func(a, b *Scalar) int { return strings.Compare(a.Name, b.Name) })
	return all
}

func sortedAggregates(groups ...[]*Aggregate) []*Aggregate {
	all := slices.Concat(groups...)
	slices.SortFunc(all, func(a, b *Aggregate) int { return strings.Compare(a.Name, b.Name) })
	return all
}

func index[T any](list []T, names func(T) []string) map[string]T {
	of := map[string]T{}
	for _, x := range list {
		for _, name := range names(x) {
			if _, twice := of[name]; twice {
				panic("function: two functions are called " + name)
			}
			of[name] = x
		}
	}
	return of
}
