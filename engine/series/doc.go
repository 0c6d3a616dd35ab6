// Package series is the mathematics of readings over time: what a course of
// readings says at given instants, when it was over a limit, and how complete it
// is. It knows no query and no table.
//
// # Model
//
// A Course is the readings of one logger for one quantity: stamps in microseconds,
// ascending, each once, and a finite value for each. Between two readings that are
// not farther apart than the longest gap it runs straight; across a longer gap, before
// the first reading and behind the last nothing is known.
//
// A Grid is the instants at which loggers that never share a stamp are compared. Its
// slots are as long as its step, the last one may be cut off by the end. A row of a
// slot carries the slot's start or its end as its stamp; of centred windows it is the
// middle.
//
// # Laws
//
//  1. At a reading, Linear and Hold give the reading itself.
//  2. Linear never leaves the range of the two readings around an instant, Mean not
//     that of the readings around its window: equal readings give just that value.
//  3. Windows whose lengths divide a longer one have means that weight up to the
//     longer one's (up to rounding).
//  4. Excess is the integral of what is over the limit: it does not depend on bridging,
//     and cutting a course at a reading splits it into two that add up.
//  5. An excursion below a limit is one above the mirrored limit of the mirrored course.
//
// # Degenerate inputs
//
// Courses without any reading and with one, windows without a reading, equal
// readings, readings at the limit (which are not over it) and gaps as long as the
// longest allowed (which are filled) are normal input.
//
// # Exact and rounded
//
// Which readings stand around an instant, what is a gap and what is over a limit is
// decided on whole microseconds and on the readings as they are. Values between
// readings are rounded four times, times of crossing to the nearest microsecond.
//
// # Limitations
//
// Stamps must be within 2^62 microseconds of 1970.
package series
