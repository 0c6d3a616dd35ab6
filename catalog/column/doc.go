// Package column holds typed columns: the pure data that readers produce, the
// store keeps and the engine computes with. It knows no file, no query and no
// geometry, and imports nothing of the project.
//
// # Model
//
// A Vector is one column laid out as Apache Arrow lays it out, so that a memory
// mapped file can be read through it without a copy: validity as a bitmap with
// the least significant bit first, texts as codes into a dictionary, time
// stamps and intervals as 64-bit counts of microseconds, points as three
// interleaved float64.
//
// A NULL slot holds the zero of its type, and a Valid of nil says that there is
// no NULL at all. Bits beyond N are zero in every bitmap that this package makes.
// Vector.Validate checks these rules.
//
// # Ownership
//
// Vectors that come out of a table are read-only views. Whoever wants to keep
// or change one copies it first. Dictionaries are shared between vectors and
// never change once a vector has them.
//
// # Text forms
//
// Value.String is how values are saved: numbers as the shortest decimal that
// reads back to the same bits, time stamps in UTC as 2031-04-07 08:15:00,
// intervals as hours, minutes and seconds. ParseTimestamp, ParseInterval and
// ParseUnit read these back.
//
// # Degenerate inputs
//
// A vector may be empty. A text vector of nothing but NULLs has a dictionary of
// one empty text, since the code of a NULL slot is 0. Dictionaries made elsewhere
// may hold a text twice; comparisons, ranks and keys go by the texts. Negative
// zero is a value of its own for Equal and Key, as are the infinities; NaN is no
// value at all.
//
// # Limitations
//
// Intervals have no months or years: their length would depend on the date. Time
// is counted without leap seconds, in the Gregorian calendar throughout. Units
// are labels: m and cm are two units, and nothing converts between them. Row
// numbers in Gather have 32 bits.
package column
