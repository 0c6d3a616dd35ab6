// Package las reads points from LAS files, versions 1.0 to 1.4, point formats 0 to 10.
//
// # Model
//
// A file is a header, records of variable length that describe it, and point records of
// one length, all low bytes first (LAS Specification 1.4 R15, American Society for
// Photogrammetry and Remote Sensing, 2019). Every field of a point becomes a column:
// x, y, z, intensity, return_number, returns, class, scan_angle [°], user_data,
// point_source, and, as the point format has them, gps_time [s], red, green, blue, nir;
// the flags synthetic, key_point, withheld, overlap, edge and direction (of the scan)
// are BOOLEAN, channel is the scanner's. Extra bytes of a record are columns of
// their own where a record of the file describes them.
//
// # What is exact and what rounded
//
// A coordinate is a whole number times a scale plus an offset. Scale and offset stand
// there as float64 and mean the shortest decimals that read as these; the coordinate is
// worked out in decimals and rounded once: it is the REAL that reading the written
// decimal, such as 2600123.47, gives. scan_angle of formats 6 to 10 is the stored number
// times 0.006 in the same way.
//
// # Degenerate inputs
//
// Nothing is taken from the header that the size of the file does not bear out: a count
// of points beyond the end, records shorter than their format, a start inside the header
// are faults. A file without points is a table without rows. Bytes behind the last
// point that are no described records are counted in Facts.Unread, in whole points.
//
// # Limitations
//
// Compressed points (LAZ) are refused, as are waveforms: the fields that lead to them are
// passed over and told. The coordinate system that the file may name is not read; lengths
// carry no unit. GPS time is seconds as the file has them, of the week or of the
// standard GPS time less 10⁹.
package las
