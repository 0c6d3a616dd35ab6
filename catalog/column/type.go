package column

// Type is the type of a column or of a single value.
type Type uint8

// The types of the language. Null is the type of a bare NULL before its
// context has given it one.
const (
	Null      Type = iota
	Integer        // int64
	Real           // float64, never NaN in a valid slot
	Text           // code into a dictionary
	Boolean        // bit
	Timestamp      // int64, microseconds since 1970-01-01T00:00:00Z
	Interval       // int64, microseconds
	Point          // three float64
)

var typeNames = [...]string{"NULL", "INTEGER", "REAL", "TEXT", "BOOLEAN", "TIMESTAMP", "INTERVAL", "POINT"}

// String is the name of the type as the language writes it.
func (t Type) String() string {
	if int(t) < len(typeNames) {
		return typeNames[t]
	}
	return "?"
}

// Numeric reports whether arithmetic applies to the type.
func (t Type) Numeric() bool { return t == Integer || t == Real }

// Counted reports whether values of the type are kept as int64 (Vector.I).
func (t Type) Counted() bool { return t == Integer || t == Timestamp || t == Interval }

// Field describes a column: what it is called, what it holds and what it means.
type Field struct {
	Name    string
	Type    Type
	Unit    *Unit   // nil: no unit known
	Meaning string  // one line for DESCRIBE, may be empty
	System  *System // of coordinates: what they count from; nil for anything else
}

// System is what coordinates count from. It travels with a query and is not kept with a
// table: the catalog keeps one for each object.
type System struct {
	Of   string // the campaign, table or solid that has them, for messages
	Text string // as the catalog keeps it; "" for coordinates as they came
	// Loose: as they came in a table or a solid, so that they may have been meant to
	// count from anywhere.
	Loose bool
}

// Schema is the ordered list of a table's columns.
type Schema []Field
