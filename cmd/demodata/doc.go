// Command demodata makes the invented demo campaign in testdata/demo: the
// loggers of Brackwater Depot, Hall 4, their readings of one week, the same after
// the fans were re-balanced, and a walk with a handheld probe. There is no such
// depot; no value comes from an instrument.
//
//	go run ./cmd/demodata            writes the files into testdata/demo
//	go run ./cmd/demodata -to DIR    writes them elsewhere
//
// # Model
//
// The air of the hall is a smooth function of place and time: a set point with
// warm air above and cold below, two evaporators that throw cold air and defrost
// in turn, a compressor cycle, sun on the roof, a plant room that leaks heat, a
// corner behind the racks where the air hardly moves, and a dock door through
// which warm air flows in along the ceiling while lorries are loaded (air.go). A
// logger reads that air with a calibration error of its own and a slow noise
// (logger.go). Into this a campaign's usual troubles are put on purpose: one
// logger drifts, one dies on day five, one was keyed in outside the wall, a few
// readings are missing, and half of the loggers hang in the quarter of the hall
// around the dock.
//
// # What is exact
//
// The files are the same bytes on every machine and with every compiler. Random
// numbers come from PCG with a fixed seed and one stream for each instrument, so
// that a change in one does not shift the others; only its 64-bit outputs are
// used. Temperatures pass through exponentials and products that another
// processor may round differently in the last bits; each value is then rounded to
// whole hundredths or tenths, and the generator stops with an error if one lies so
// near to a tie that those last bits could decide it. The test regenerates all
// files and compares bytes.
//
// # Limitations
//
// It is scenery for a tool, no model of a chilled store: the air does not obey
// any balance of heat, walls do not shade, and the numbers must not be used to
// judge a real one.
package main
