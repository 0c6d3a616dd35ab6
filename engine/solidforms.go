package engine

// solidEntries are the forms in which a solid is written.
func solidEntries() []entry {
	return []entry{
		{
			name: "BOX", syntax: []string{"BOX (x, y, z) TO (x, y, z)"},
			meaning: "An upright box between two opposite corners.",
			example: "CREATE SOLID body AS BOX (0, 0, 0) TO (30, 18, 7.5);",
		},
		{
			name: "PRISM", also: []string{"HOLE"},
			syntax:  []string{"PRISM ((x, y), (x, y), …) [HOLE ((x, y), …)] FROM z TO z", "PRISM 'plan.csv' FROM z TO z"},
			meaning: "A floor plan raised from one height to another. The corners go round the plan, in either sense; the plan may have re-entrant corners and holes. A file has the columns x and y, a corner on each line.",
			example: "CREATE SOLID body AS\n  PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18))\n  HOLE ((0, 0), (4, 0), (4, 3), (0, 3)) FROM 0 TO 7.5;",
		},
		{
			name: "ENVELOPE", also: []string{"MARGIN"}, syntax: []string{"ENVELOPE OF campaign [MARGIN length]"},
			meaning: "The box around the sites of a campaign, widened on all sides by the margin. It closes the cells where the room is not known; the volumes at the rim then hang on the margin.",
			example: "CREATE SOLID body AS ENVELOPE OF hall MARGIN 1;",
		},
		{
			name: "MINUS", syntax: []string{"solid MINUS solid"},
			meaning: "One solid without another. The second may reach beyond the first or touch it; the result may be hollow or in several pieces. A chain is read from left to right, and MINUS and PLUS bind alike: brackets say otherwise.",
			example: "CREATE SOLID body AS air MINUS BOX (0, 0, 0) TO (4, 3, 7.5);",
		},
		{
			name: "PLUS", syntax: []string{"solid PLUS solid"},
			meaning: "Two solids as one. Space that both have counts once, and walls that one has inside the other, or against it, are none.",
			example: "CREATE SOLID body AS air PLUS BOX (18, 12, 0) TO (20, 14, 3);",
		},
		{
			name: "MESH", also: []string{"WELD"}, syntax: []string{"MESH 'file.stl' [UNIT mm] [WELD length]"},
			meaning: "A closed mesh of triangles from a file: STL (binary or text), PLY (text or binary) or OBJ, whose polygons are cut into triangles. UNIT is that of the file: m if not said, dm, cm, mm, um, km, in, ft or yd. " +
				"Corners with equal coordinates are one; WELD joins those within a distance, too. A mesh with a hole in it, or that overlaps itself, is refused with the place; one that is inside out is turned, and a note says so. The catalog keeps the triangles: the file is not needed again.",
			example: "CREATE SOLID body AS MESH 'hall.stl' UNIT mm;",
		},
		{
			name: "BOXES", syntax: []string{"BOXES 'racks.csv'"},
			meaning: "Boxes with names from a file with the columns name, x_from, x_to, y_from, y_to, z_from and z_to, a box on each line. They may touch and overlap; boxes of one name are one part.",
			example: "CREATE SOLID body AS BOXES 'racks.csv';",
		},
		{
			name: "TERRAIN", syntax: []string{"TERRAIN 'bed.csv' TO height"},
			meaning: "The space between a surveyed surface and a height: the water over a bed, a heap on a floor. The file has the columns x, y and z, a point on each line; between the points the surface is plane over the triangles of their Delaunay triangulation in plan, and it ends at their hull.",
			example: "CREATE SOLID body AS TERRAIN 'bed.csv' TO 0;",
		},
	}
}
