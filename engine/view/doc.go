// Package view writes cells in space as a page in which they can be turned, cut, picked and
// singled out. It knows nothing of queries; it gets a draw.Space.
//
// # Model
//
// [Page] writes one file that needs nothing else: markup, style, the page's program and the
// data, under a content security policy that names the one program and the one style by
// their SHA-256 and forbids every request. Without WebGL, without scripts and on paper the
// page shows the still picture that draw.Space lays out, inline.
//
// The data are one JSON object: texts in lists, numbers as little-endian arrays in base64.
// A row is a site as the table of cells has it, with the table's exact value and volume; a
// body is the cell of the sites at one place; a body has convex hulls, a hull has faces, and
// a face knows the body on its other side. [Data] is the object, so that it can be read
// back.
//
// In the page only what can be seen is drawn: of the bodies that are shown, the faces that
// are walls or towards a body that is not shown. What lies before the cutting plane is left
// out point by point, and the faces that the cut opens (the caps) are computed from the
// hulls that the plane passes through, so that the cut is closed and has an area. A pick is
// a ray against the planes of the hulls, not a colour read back. Colours are not shaded by
// light, so that they are those of the legend; what is over or under a limit or has no value
// is hatched as well.
//
// # Degenerate inputs
//
// Sites at one place are one body, coloured by their mean; their rows are listed each.
// Texts are escaped in the markup, and JSON escapes "<", so that no identifier ends the
// data. Equal values get a scale of some width (draw.NewScale).
//
// # What is exact and what is rounded
//
// Values and volumes are the table's, to the bit; as texts they have the table's digits.
// Corners are float32 relative to the middle of the room: a ten-millionth of its size.
//
// # Limitations
//
// WebGL 1 is needed for turning. Lines are one pixel wide. Faces of one colour that overlap
// (zones that share space) hide one another by depth alone.
package view
