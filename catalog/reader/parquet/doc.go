// Package parquet reads Parquet files (the Apache Parquet format), through a library that
// knows their pages, encodings and compressions.
//
// # Model
//
// The file says the type of each column: whole numbers are INTEGER, floating-point numbers
// REAL, truth values BOOLEAN, strings, enumerations, JSON and UUID TEXT, time stamps (of
// milli-, micro- and nanoseconds, and the older 96-bit ones) and dates TIMESTAMP, times of
// day INTERVAL since midnight. Decimals are INTEGER where they have no digits behind the
// point and at most 18, else REAL. Columns of a group that does not repeat are
// called by both names: a.b. Bytes that nothing calls a text are one if they are UTF-8.
//
// # What is exact and what rounded
//
// A decimal is rounded once to the nearest REAL; where its digits cannot be had back from
// that it is counted as Inexact. Nanoseconds are rounded to the nearest microsecond and
// counted where that changes them. Unsigned whole numbers beyond 63 bits, and times
// outside the years 1 to 9999, are faults, with their row.
//
// # NULL
//
// NaN is NULL, as programs write missing values so, and counted; an infinity is a fault.
//
// # Degenerate inputs
//
// Lists, maps and what else is not read is left out and told; a file of nothing else is
// a fault. A damaged file is a fault, whatever the library makes of it. Columns that
// do not have as many values as their row group has rows are faults. A file that
// promises more rows than a thousand for each of its bytes (and a million) is refused.
//
// # Limitations
//
// Encrypted files are refused. A page may unpack to 2 GiB, as the format allows.
package parquet
