// Package frame owns the ways from other coordinates to the site's: a drawing's, by pairs
// of points that are known in both, and geographic ones.
//
// # Model
//
// A [Similarity] turns, scales, moves and, where the drawing is mirrored, mirrors. [Fit]
// finds the one that brings the drawing's points to the site's with the least sum of
// squared distances (Umeyama 1991; Horn 1987 for the rotation), and says how far each pair
// is off.
//
// Points with two coordinates make a frame in plan: heights pass through as they are.
// Points with three make one in space. Where these all lie at about one height, upright
// stays upright: what they could not tell, whether up is up, is not left to their last
// digits. Heights then are scaled as lengths in plan are.
//
// [East] turns latitude, longitude and height above the WGS 84 ellipsoid into metres
// east, north and up of an origin.
//
// # Degenerate input
//
// Fewer than three pairs, or points on one line, leave open whether the drawing is
// mirrored: they are refused, as are points in one plane that is not level, points that
// all but coincide, and numbers that are not finite. A latitude beyond 90 or a longitude
// beyond 180 degrees (360 where the survey counts eastwards only) is refused; so is a place
// more than 100 km from the middle of the others with latitude and longitude exchanged or
// both 0, and any more than 1000 km away.
//
// # Exact and rounded
//
// Everything is rounded: a frame to about 1e-15 of the extent of its points, local metres
// to about 1e-9 m, which is what a coordinate that counts from the centre of the earth
// holds.
//
// # Limitations
//
// No other ellipsoid, no map projection, no model of sea level. No weights for points.
package frame
