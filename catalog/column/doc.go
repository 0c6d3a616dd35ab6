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
//
// # Ownership
//
// Vectors that come out of a table are read-only views. Whoever wants to keep
// or change one copies it first.
//
// # Limitations
//
// Intervals have no months or years: their length would depend on the date.
package column
