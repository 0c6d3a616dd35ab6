package bind

import (
	"slices"
	"strings"

	"nearcell/engine/function"
	"nearcell/engine/relation"
)

// elsewhere is the way out for a name that is no column of a source and near to
// none: it is the column of a relation, or a function, or else these are the
// columns that there are.
func elsewhere(name, source string, columns []string) string {
	for _, d := range relation.All() {
		for _, c := range d.Computed {
			if strings.EqualFold(c.Name, name) && c.Name != "id" && !strings.HasPrefix(source, d.Noun+" ") {
				return d.Noun + " OF " + sitesOf(source) + " has it"
			}
		}
	}
	if f := function.LookupAggregate(name); f != nil {
		return "a function is written with brackets: " + f.Signature
	}
	if f := function.LookupScalar(name); f != nil {
		return "a function is written with brackets: " + f.Signature
	}
	has := "it has "
	if strings.Contains(source, " or ") {
		has = "they have "
	}
	return listColumns(has, columns)
}

// sitesOf is what stands behind OF, if the source can stand there as it is.
func sitesOf(source string) string {
	if _, sites, ok := strings.Cut(source, " OF "); ok {
		source = sites
	}
	if strings.ContainsAny(source, " (") {
		return "…"
	}
	return source
}

// listColumns lists the columns that there are, the first of many.
func listColumns(has string, columns []string) string {
	const most = 12
	columns = slices.Compact(slices.Clone(columns))
	switch {
	case len(columns) == 0:
		return ""
	case len(columns) > most:
		return has + strings.Join(columns[:most], ", ") + " and " + count(len(columns)-most, "other")
	}
	return has + strings.Join(columns, ", ")
}
