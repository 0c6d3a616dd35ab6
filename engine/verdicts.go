package engine

import (
	"nearcell/catalog/column"
)

// verdictsName is the source that lists what REQUIRE came to.
const verdictsName = "VERDICTS"

// verdictTable lists the requirements of the session, in their order.
func (s *Session) verdictTable() *column.Table {
	meaning := func(f column.Field, m string) column.Field { f.Meaning = m; return f }
	r := newRows(
		meaning(text("requirement"), "what is required, as REQUIRE calls it"),
		meaning(text("verdict"), "PASS, FAIL or NOT DECIDED"),
		meaning(whole("rows"), "offending rows, of NONE (query); NULL of a condition"),
		meaning(text("reason"), "why it failed or is not decided"),
		meaning(text("script"), "the script that requires it"),
		meaning(whole("line"), "its line there"))
	for i := range s.verdicts {
		v := &s.verdicts[i]
		rows := column.NullOf(column.Integer)
		if v.none {
			rows = column.Int(v.rows)
		}
		r.add(column.String(v.label), column.String(v.result), rows, maybe(v.reason), column.String(v.script), column.Int(int64(v.line)))
	}
	return r.table()
}

// verdictWarnings are what was warned of when the verdicts were reached.
func (s *Session) verdictWarnings() []string {
	var list []string
	for i := range s.verdicts {
		v := &s.verdicts[i]
		for _, w := range v.warnings {
			list = append(list, "'"+v.label+"': "+w)
		}
	}
	return list
}
