package expr

import (
	"fmt"
	"strconv"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/lang"
)

// Levels of binding, from the loosest to the tightest.
const (
	bindOr = iota + 1
	bindAnd
	bindNot
	bindCompare
	bindIs
	bindAdd
	bindTimes
	bindSign
	bindPower
	bindPrimary
)

func level(e Expr) int {
	switch e := e.(type) {
	case *Logic:
		if e.Op == lang.Or {
			return bindOr
		}
		return bindAnd
	case *Not:
		return bindNot
	case *Compare, *Between, *In, *Like:
		return bindCompare
	case *Subquery:
		if e.Kind == InQuery {
			return bindCompare
		}
	case *Is, *Distinct:
		return bindIs
	case *Concat:
		return bindAdd
	case *Arith:
		switch e.Op {
		case lang.Plus, lang.Minus:
			return bindAdd
		case lang.Power:
			return bindPower
		}
		return bindTimes
	case *Neg:
		return bindSign
	case *Literal:
		if negative(e) {
			return bindSign
		}
	case *Cast:
		if e.implicit {
			return level(e.X)
		}
	}
	return bindPrimary
}

func negative(e *Literal) bool {
	return !e.Value.Null && (e.Value.Type == column.Integer && e.Value.I < 0 || e.Value.Type == column.Real && e.Value.F < 0)
}

// inside writes e so that it can stand where at least the given binding is
// wanted.
func inside(e Expr, binding int) string {
	if level(e) < binding {
		return "(" + e.String() + ")"
	}
	return e.String()
}

func infix(l Expr, op string, r Expr, left, right int) string {
	return inside(l, left) + " " + op + " " + inside(r, right)
}

func notWord(not bool) string {
	if not {
		return "NOT "
	}
	return ""
}

// String is the column's name, in quotes where it needs them.
func (e *Column) String() string { return quoteName(e.Field.Name) }

// String is the constant as the language writes it.
func (e *Literal) String() string {
	v := e.Value
	if v.Null {
		return "NULL"
	}
	switch v.Type {
	case column.Text:
		return quoteText(v.S)
	case column.Timestamp:
		return "TIMESTAMP " + quoteText(column.FormatTimestamp(v.I))
	case column.Interval:
		return writeInterval(v.I)
	case column.Real:
		if e.whole {
			return column.FormatReal(v.F)
		}
		return writeReal(v.F)
	}
	return v.String()
}

// writeReal writes a REAL so that it does not look like an INTEGER.
func writeReal(f float64) string {
	s := column.FormatReal(f)
	if strings.ContainsAny(s, ".eIN") {
		return s
	}
	return s + ".0"
}

func quoteText(s string) string { return "'" + strings.ReplaceAll(s, "'", "''") + "'" }

// writeInterval uses the largest of the units that divides the interval.
func writeInterval(us int64) string {
	for _, u := range []struct {
		us   int64
		name string
	}{{86400e6, "DAY"}, {3600e6, "HOUR"}, {60e6, "MINUTE"}, {1e6, "SECOND"}} {
		if us%u.us == 0 && us != 0 {
			return "INTERVAL '" + strconv.FormatInt(us/u.us, 10) + "' " + u.name
		}
	}
	sign, u := "", uint64(us)
	if us < 0 {
		sign, u = "-", -u
	}
	fraction := strings.TrimRight(fmt.Sprintf(".%06d", u%1e6), ".0")
	return "INTERVAL '" + sign + strconv.FormatUint(u/1e6, 10) + fraction + "' SECOND"
}

var reserved = map[string]bool{}

func init() {
	for w := range strings.FieldsSeq("SELECT DISTINCT ALL FROM WHERE HAVING UNION INTERSECT EXCEPT WITH AS JOIN ON AND OR NOT IN IS LIKE BETWEEN EXISTS CASE WHEN THEN ELSE CAST NULL TRUE FALSE") {
		reserved[w] = true
	}
}

// quoteName puts a name in quotes unless it is a bare word.
func quoteName(s string) string {
	bare := s != "" && !reserved[strings.ToUpper(s)]
	for i, c := range []byte(s) {
		letter := 'a' <= c && c <= 'z' || 'A' <= c && c <= 'Z' || c == '_'
		bare = bare && (letter || i > 0 && ('0' <= c && c <= '9' || c == '.'))
	}
	if bare {
		return s
	}
	return `"` + strings.ReplaceAll(s, `"`, `""`) + `"`
}

// String is -x.
func (e *Neg) String() string { return "-" + inside(e.X, bindSign+1) }

// String is left op right.
func (e *Arith) String() string {
	switch b := level(e); b {
	case bindPower:
		return infix(e.Left, "^", e.Right, bindPower+1, bindSign)
	default:
		return infix(e.Left, string(e.Op), e.Right, b, b+1)
	}
}

// String is left || right.
func (e *Concat) String() string { return infix(e.Left, "||", e.Right, bindAdd, bindAdd+1) }

// String is left op right.
func (e *Compare) String() string {
	return infix(e.Left, string(e.Op), e.Right, bindAdd, bindAdd)
}

// String is left AND right, or left OR right.
func (e *Logic) String() string {
	b := level(e)
	return infix(e.Left, string(e.Op), e.Right, b, b+1)
}

// String is NOT x.
func (e *Not) String() string { return "NOT " + inside(e.X, bindNot) }

// String is x IS what.
func (e *Is) String() string {
	return inside(e.X, bindIs) + " IS " + notWord(e.Not) + string(e.What)
}

// String is left IS DISTINCT FROM right.
func (e *Distinct) String() string {
	return inside(e.Left, bindIs) + " IS " + notWord(e.Not) + "DISTINCT FROM " + inside(e.Right, bindAdd)
}

// String is x BETWEEN low AND high.
func (e *Between) String() string {
	return inside(e.X, bindAdd) + " " + notWord(e.Not) + "BETWEEN " + infix(e.Low, "AND", e.High, bindAdd, bindAdd)
}

// String is x IN (…).
func (e *In) String() string {
	return inside(e.X, bindAdd) + " " + notWord(e.Not) + "IN (" + list(e.List) + ")"
}

func list(items []Expr) string {
	texts := make([]string, len(items))
	for i, e := range items {
		texts[i] = e.String()
	}
	return strings.Join(texts, ", ")
}

// String is x LIKE pattern.
func (e *Like) String() string {
	s := inside(e.X, bindAdd) + " " + notWord(e.Not) + "LIKE " + inside(e.Pattern, bindAdd)
	if e.Escape != nil {
		s += " ESCAPE " + inside(e.Escape, bindAdd)
	}
	return s
}

// String is CASE … END.
func (e *Case) String() string {
	var b strings.Builder
	b.WriteString("CASE")
	if e.Operand != nil {
		b.WriteString(" " + e.Operand.String())
	}
	for _, arm := range e.Whens {
		b.WriteString(" WHEN " + arm.Cond.String() + " THEN " + arm.Result.String())
	}
	if e.written {
		b.WriteString(" ELSE " + e.Otherwise.String())
	}
	b.WriteString(" END")
	return b.String()
}

// String is CAST(x AS type); what the program casts by itself is not written.
func (e *Cast) String() string {
	if e.implicit {
		return e.X.String()
	}
	return "CAST(" + e.X.String() + " AS " + e.typ.String() + ")"
}

// String is COALESCE(…).
func (e *Coalesce) String() string { return "COALESCE(" + list(e.Args) + ")" }

// String is NULLIF(left, right).
func (e *NullIf) String() string { return "NULLIF(" + list(e.Children()) + ")" }

// String is NAME(…), as the function is called.
func (e *Call) String() string {
	if e.Fn.Name == "EXTRACT" {
		if l, ok := e.Args[0].(*Literal); ok {
			return "EXTRACT(" + strings.ToUpper(l.Value.S) + " FROM " + e.Args[1].String() + ")"
		}
	}
	if e.Fn.Name == "TRIM" && len(e.Args) == 2 {
		return "TRIM(" + e.Args[0].String() + " FROM " + e.Args[1].String() + ")"
	}
	if e.Fn == function.Zoned {
		return inside(e.Args[0], bindPrimary) + " " + e.Fn.Name + " " + inside(e.Args[1], bindPrimary)
	}
	return e.Fn.Name + "(" + list(e.Args) + ")"
}

// String is POINT(x, y, z).
func (e *MakePoint) String() string { return "POINT(" + list(e.Children()) + ")" }

// String is (a, b) OVERLAPS (c, d).
func (e *Overlaps) String() string {
	return "(" + list(e.Ends[:2]) + ") OVERLAPS (" + list(e.Ends[2:]) + ")"
}

// String is outer(name).
func (e *Outer) String() string { return "outer(" + quoteName(e.Field.Name) + ")" }

// String is (query), x IN (query) or EXISTS (query).
func (e *Subquery) String() string {
	switch e.Kind {
	case InQuery:
		return inside(e.X, bindAdd) + " " + notWord(e.Not) + "IN " + e.Query.String()
	case ExistsQuery:
		return "EXISTS " + e.Query.String()
	}
	return e.Query.String()
}
