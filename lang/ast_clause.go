package lang

// Clause is one clause after a relation's operand. A relation has each clause at most
// once; ABOVE and BELOW count as one clause, and so do the two forms of AT.
type Clause interface {
	Node
	clause()
}

// WithinClause is WITHIN solid, or WITHIN (solid, solid, …) with Zones set: each
// solid then is a zone of its own. It is a clause of relations and of CREATE CAMPAIGN.
type WithinClause struct {
	At
	Solids []Solid
	Zones  bool
}

// UnclippedClause is UNCLIPPED: the open diagram although there is a solid.
type UnclippedClause struct{ At }

// StretchedClause is STRETCHED (x, y, z), a clause of relations and of CREATE CAMPAIGN.
type StretchedClause struct {
	At
	X, Y, Z Expr
}

// ForEachClause is FOR EACH t or FOR EACH (t, pass).
type ForEachClause struct {
	At
	Names []Name
}

// ForClause is FOR temp or FOR (temp, co2).
type ForClause struct {
	At
	Names []Name
}

// MethodClause is METHOD word or METHOD word(value); Argument is nil in the first form.
type MethodClause struct {
	At
	Name     Name
	Argument Expr
}

// MeasuredInClause is MEASURED IN part or MEASURED IN (part, part).
type MeasuredInClause struct {
	At
	Parts []Name
}

// OmittingClause is OMITTING ('L17') BECAUSE 'moved'.
type OmittingClause struct {
	At
	IDs     []*Text
	Because *Text
}

// KeepClause is KEEP ('L07').
type KeepClause struct {
	At
	IDs []*Text
}

// AmongClause is AMONG operand.
type AmongClause struct {
	At
	Operand Operand
}

// ExpectingClause is EXPECTING operand.
type ExpectingClause struct {
	At
	Operand Operand
}

// AgainstClause is AGAINST operand.
type AgainstClause struct {
	At
	Operand Operand
}

// AtPlaneClause is AT z = 1.1.
type AtPlaneClause struct {
	At
	Axis  Name
	Value Expr
}

// AtPointsClause is AT operand.
type AtPointsClause struct {
	At
	Operand Operand
}

// ThroughClause is THROUGH point NORMAL direction.
type ThroughClause struct {
	At
	Point, Normal *Point
}

// ThresholdsClause is THRESHOLDS (v, …).
type ThresholdsClause struct {
	At
	Values []Expr
}

// DistancesClause is DISTANCES (v, …).
type DistancesClause struct {
	At
	Values []Expr
}

// ClearanceClause is CLEARANCE v.
type ClearanceClause struct {
	At
	Value Expr
}

// NumberClause is NUMBER v.
type NumberClause struct {
	At
	Value Expr
}

// StepClause is STEP v.
type StepClause struct {
	At
	Value Expr
}

// AcrossClause is ACROSS v UP v.
type AcrossClause struct {
	At
	Across, Up Expr
}

// AboveClause is ABOVE v, or BELOW v with Below set.
type AboveClause struct {
	At
	Below bool
	Value Expr
}

// UntilClause is UNTIL ABOVE v, or UNTIL BELOW v with Below set.
type UntilClause struct {
	At
	Below bool
	Value Expr
}

// ByClause is BY logger, BY (a, b), either with ON t. On is the zero Name when not given.
type ByClause struct {
	At
	Names []Name
	On    Name
}

// EveryClause is EVERY v [FROM v TO v]; From and To are both given or both nil.
type EveryClause struct {
	At
	Value    Expr
	From, To Expr
}

// StampClause is STAMP AT word (START, INSTANT, END).
type StampClause struct {
	At
	Where Name
}

// LongestGapClause is LONGEST GAP v.
type LongestGapClause struct {
	At
	Value Expr
}

// BridgingClause is BRIDGING v.
type BridgingClause struct {
	At
	Value Expr
}

// WeightsClause is WEIGHTS word.
type WeightsClause struct {
	At
	Word Name
}

// UncertaintyClause is UNCERTAINTY name (a column), or UNCERTAINTY (part, …).
type UncertaintyClause struct {
	At
	Column Name
	Parts  []*UncertaintyPart
}

// UncertaintyPart is [name] v EACH, or [name] v COMMON with Common set.
type UncertaintyPart struct {
	At
	Column Name
	Value  Expr
	Common bool
}

func (*WithinClause) clause()      {}
func (*UnclippedClause) clause()   {}
func (*StretchedClause) clause()   {}
func (*ForEachClause) clause()     {}
func (*ForClause) clause()         {}
func (*MethodClause) clause()      {}
func (*MeasuredInClause) clause()  {}
func (*OmittingClause) clause()    {}
func (*KeepClause) clause()        {}
func (*AmongClause) clause()       {}
func (*ExpectingClause) clause()   {}
func (*AgainstClause) clause()     {}
func (*AtPlaneClause) clause()     {}
func (*AtPointsClause) clause()    {}
func (*ThroughClause) clause()     {}
func (*ThresholdsClause) clause()  {}
func (*DistancesClause) clause()   {}
func (*ClearanceClause) clause()   {}
func (*NumberClause) clause()      {}
func (*StepClause) clause()        {}
func (*AcrossClause) clause()      {}
func (*AboveClause) clause()       {}
func (*UntilClause) clause()       {}
func (*ByClause) clause()          {}
func (*EveryClause) clause()       {}
func (*StampClause) clause()       {}
func (*LongestGapClause) clause()  {}
func (*BridgingClause) clause()    {}
func (*WeightsClause) clause()     {}
func (*UncertaintyClause) clause() {}
