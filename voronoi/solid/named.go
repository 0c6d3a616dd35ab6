package solid

// Part is a piece of a solid that has a name.
type Part struct {
	Name  string
	Solid Solid
}

// Parted is a solid that is made of pieces with names.
type Parted interface {
	Solid
	// Parts are the pieces, in the order in which they were given. They may touch and
	// overlap one another. The slice is a view.
	Parts() []Part
}
