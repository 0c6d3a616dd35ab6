// Package draw makes pictures of numbers that others have computed: maps of a plane
// through a partition, courses over time, histograms, profiles by height.
//
// # Model
//
// A picture's data (Section, Course, Histogram, Profile) come in as plain numbers. They
// are laid out once into a Scene, a list of filled paths, lines and texts on a page as
// wide as the text of an A4 sheet; SVG and PNG are two ways to write the same Scene, so
// that they cannot differ. Section has a third way, Characters, for the terminal.
//
// Space, cells as convex polyhedra, is laid out as a still: what hides what is found by
// splitting space along the walls (Fuchs, Kedem and Naylor, 1980), which is right for rooms
// of any shape, whole and cut open. engine/view makes a page of the same data.
//
// A Scene's unit is a quarter of a millimetre. Its paper is white in all surroundings.
//
// # Colours and marks
//
// Values without limits take the scale YlGnBu of ColorBrewer (Harrower and Brewer, 2003),
// interpolated in CIELAB along its lightness, which falls throughout; values between two limits a diverging
// scale after Moreland (2009), whose middle is the middle between the limits. Lines take
// the eight colours of Okabe and Ito (2008) and a dash each. All of them are told apart
// with the usual kinds of colour blindness. Nothing is said by colour alone: over a
// limit, under it, without a value and out of reach are hatched, each in its own way,
// with a word in the legend.
//
// # Laws
//
//  1. The same data give the same bytes: nothing in a picture is a time, a random
//     number, or an order of a map.
//  2. The polygons of a map, measured in its file, have the areas that it says.
//  3. Every text is escaped, and lies on the page.
//
// # Degenerate inputs
//
// Values that are all equal get a range about them. A value that is missing breaks a
// line and hatches a cell. Names that find no room are left out and counted.
//
// # Exact and rounded
//
// Coordinates in an SVG are rounded to a hundredth of a unit; what a cell's attributes
// say (area, value) is not rounded. Texts are rounded for reading.
//
// # Limitations
//
// Texts are measured in Liberation Sans; a viewer with other fonts may set them wider.
package draw
