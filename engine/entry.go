package engine

// entry is a line of the registries of the language: of statements, parts of
// queries, clauses of CREATE and forms of solids. HELP, LIST STATEMENTS and
// completion read them. Whether a thing is there yet stands nowhere: the program
// asks itself, with the example (there.go).
type entry struct {
	name    string   // "CREATE CAMPAIGN"
	also    []string // other words under which HELP finds it
	syntax  []string // how it is written, line by line
	meaning string   // what it does; the first sentence alone is a summary
	more    []string // further paragraphs
	example string   // statements that run, on the setting of the examples
	forms   []form   // parts that may be missing while the rest is there
	see     []string // other topics
}

// form is a way to write a part of something, with an example for itself.
type form struct{ written, example string }

// missing are the forms that are not there yet.
func missing(forms []form) []string {
	var list []string
	for _, f := range forms {
		if !there(f.example) {
			list = append(list, f.written)
		}
	}
	return list
}
