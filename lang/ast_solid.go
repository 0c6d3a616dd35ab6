package lang

// Solid is a solid expression.
type Solid interface {
	Node
	solid()
}

// Point is (x, y, z).
type Point struct {
	At
	X, Y, Z Expr
}

// Corner is one corner (x, y) of a ring.
type Corner struct {
	At
	X, Y Expr
}

// Ring is ((x, y), (x, y), …).
type Ring struct {
	At
	Corners []*Corner
}

// BoxSolid is BOX point TO point.
type BoxSolid struct {
	At
	From, To *Point
}

// PrismSolid is PRISM ring [HOLE ring …] FROM v TO v, or with a file in place of the
// outer ring; exactly one of Outer and File is set.
type PrismSolid struct {
	At
	Outer    *Ring
	File     *Text
	Holes    []*Ring
	From, To Expr
}

// MeshSolid is MESH 'file' [UNIT word] [WELD v].
type MeshSolid struct {
	At
	File *Text
	Unit Name
	Weld Expr
}

// BoxesSolid is BOXES 'file'.
type BoxesSolid struct {
	At
	File *Text
}

// TerrainSolid is TERRAIN 'file' TO v.
type TerrainSolid struct {
	At
	File *Text
	To   Expr
}

// EnvelopeSolid is ENVELOPE OF name [MARGIN v].
type EnvelopeSolid struct {
	At
	Of     Name
	Margin Expr
}

// SolidName is the name of a solid made before.
type SolidName struct {
	At
	Name Name
}

// SolidOp is left PLUS right, or left MINUS right with Minus set.
type SolidOp struct {
	At
	Minus       bool
	Left, Right Solid
}

func (*BoxSolid) solid()      {}
func (*PrismSolid) solid()    {}
func (*MeshSolid) solid()     {}
func (*BoxesSolid) solid()    {}
func (*TerrainSolid) solid()  {}
func (*EnvelopeSolid) solid() {}
func (*SolidName) solid()     {}
func (*SolidOp) solid()       {}
