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
			name: "MINUS", syntax: []string{"solid MINUS solid"}, meaning: "One solid without another.",
			example: "CREATE SOLID body AS air MINUS BOX (0, 0, 0) TO (4, 3, 7.5);",
		},
		{
			name: "PLUS", syntax: []string{"solid PLUS solid"}, meaning: "Two solids as one.",
			example: "CREATE SOLID body AS air PLUS BOX (18, 12, 0) TO (20, 14, 3);",
		},
		{
			name: "MESH", also: []string{"WELD"}, syntax: []string{"MESH 'file.stl' [UNIT mm] [WELD length]"},
			meaning: "A closed mesh of triangles from a file: STL, PLY or OBJ.",
			example: "CREATE SOLID body AS MESH 'hall.stl' UNIT mm;",
		},
		{
			name: "BOXES", syntax: []string{"BOXES 'racks.csv'"}, meaning: "Boxes with names from a file, one part each under MEASURED IN.",
			example: "CREATE SOLID body AS BOXES 'racks.csv';",
		},
		{
			name: "TERRAIN", syntax: []string{"TERRAIN 'bed.csv' TO height"}, meaning: "The space between a surveyed surface and a height.",
			example: "CREATE SOLID body AS TERRAIN 'bed.csv' TO 0;",
		},
	}
}
