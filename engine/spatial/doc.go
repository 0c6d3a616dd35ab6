// Package spatial is the mathematics of likeness between neighbours: whether values at
// places are more alike, or less, where the places touch, and where they are. It knows no
// query and no table.
//
// # Model
//
// A [Graph] joins places that touch, with a symmetric weight for each link and none from a
// place to itself. Over it are computed, with d the values less their mean, W the sum of
// all weights, each link counted both ways:
//
//   - Moran's I (Moran 1950), its expectation -1/(n-1), and its variance where the same
//     values are dealt to the places at random (Cliff and Ord 1981), which counts the
//     kurtosis of the values;
//   - Geary's c (Geary 1954): 1 where nothing is alike, towards 0 where neighbours are;
//   - of each place, the local I (Anselin 1995), whose sum is W I, and G* in the form of a
//     z-score (Ord and Getis 1995): the place's own value counts with the largest weight
//     that joins it to a neighbour, and the variance of the values divides by n.
//
// Probabilities come from permutations, with a fixed seed: of the values over all places;
// for one place, of the others' values over its neighbours, its own held (Anselin 1995).
// They are two-sided, by the distance from the expectation, and count the observed
// arrangement as one of them: p = (1 + as far) / (1 + permutations).
//
// # Laws
//
//  1. All weights times one number leave I, its variance, c, G* and p as they are.
//  2. The values times a number, and a number more, leave everything as it is (a negative
//     one turns the sign of G*).
//  3. The local I add up to W I.
//
// # Degenerate inputs
//
// Values that are all equal, no links, and fewer than three or four places leave statistics
// undefined: NaN, which the caller turns into NULL. A place without links has none either.
// A place that touches all others alike has no G*. Ties among permutations count as far as
// the observed one, up to rounding.
//
// # Exact and rounded
//
// Sums run in the order of places and links. Every permutation, and every place, has its
// own stream of random numbers, so that any number of goroutines gives the same bits.
//
// # Limitations
//
// With R permutations no probability below 1/(R+1) exists. Whether a field rises evenly or
// has a hot spot, I does not tell.
package spatial
