// Package function is the one registry of scalar and aggregate functions:
// signature, unit rule, meaning, example, kernel. The binder, HELP, LIST
// FUNCTIONS and completion read it, so that they cannot drift apart.
//
// # Model
//
// A Scalar computes a vector of results from vectors of arguments; NULL
// arguments have been dealt with before it is called. Functions of one text are
// computed once for each text of the dictionary, not for each row. COALESCE and
// NULLIF are Lazy: they are registered here and computed by package expr.
//
// An Aggregate makes an Accumulator that holds the state of many groups, takes
// batches, and is merged with others of its kind in the order of the chunks of
// rows that they have seen.
//
// A Window is a function of a row's place in its partition, or of another row there.
// Every Aggregate can be computed over frames as well (Slide), whose values are those of
// an Accumulator of the frame's rows, to the bit.
//
// # Laws
//
//  1. SUM, AVG, the variances, CORR, MKT, SHARE and the weights are added up in
//     double-double, about 32 digits, and rounded once in the end. Any order of
//     the rows and any cut into chunks gives the same bits, unless a result lies
//     within 1e-30 of the middle between two float64, or terms cancel to less
//     than 1e-14 of their size.
//  2. A SUM of INTEGERs is exact (128 bits) and is an error only if the sum
//     itself leaves 64 bits.
//  3. A group among others has the value that it has alone.
//  4. No result is NaN. Infinity among the values makes a sum infinite; Infinity
//     and -Infinity together, and the variance of an infinite value, are errors.
//  5. NULL values are left out together with their weight, and that weight is
//     told in WeightFacts. A weight that is negative, infinite or NULL is an
//     error of its row, also where the value is NULL.
//
// # Definitions
//
// VAR_POP divides by the weight W = Σw (without weights, n), VAR_SAMP by
// W - Σw²/W (n-1): reliability weights. QUANTILE(x, p) is the smallest x up to
// which lies p of the weight, the inverse of the distribution function, without
// interpolation; p counts as the decimal number that it is written as, sums of
// weights that reach p W to within 1e-12 W count as reaching it (weights are
// measured volumes, and are not better than that), and p = 0 is the minimum of
// the rows that have weight. MKT is in mkt.go. FIRST and LAST leave out rows
// without a value or without a key; of rows with equal keys the first and the
// last in the order of the rows count.
//
// INTERPOLATE puts its rows in the order of x and takes the straight line at v (knots.go).
// Rows with a NULL are no points of it; those of one x are one point, their mean, and are
// told of where they differ. A group has one v.
//
// ROUND and FLOOR_TO compute on the decimal number that people see, the shortest
// one that reads back to the same float64: ROUND(2.675, 2) is 2.68 and
// FLOOR_TO(0.3, 0.1) is 0.3. Angles are in radians.
//
// # What is exact and what is rounded
//
// Exact: sums, minima, maxima, quantiles and counts of INTEGER, TIMESTAMP and
// INTERVAL. Rounded once: ABS, SQRT, ROUND, FLOOR_TO, HOURS, sums and means of
// REAL. To within an ulp or two: LN, EXP, POWER, the trigonometric functions.
//
// # Limitations
//
// QUANTILE, MEDIAN and INTERPOLATE keep all their values until the end. Sums of finite
// numbers that leave the range of float64 on their way are errors, even if they
// would come back. EXTRACT knows time stamps only, and all its fields are in
// UTC. UPPER and LOWER map letter by letter, without the rules of a language.
package function
