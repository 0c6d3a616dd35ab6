package lang

// Walk visits a node and all nodes below it, each before those below it and, within one
// node, in the order in which the struct names them. When visit says false, what is
// below that node is passed over. Names and texts are nodes too.
func Walk(n Node, visit func(Node) bool) {
	if n == nil || !visit(n) {
		return
	}
	each(n, func(child Node) { Walk(child, visit) })
}

// walker calls f for the children of one node.
type walker struct{ f func(Node) }

func each(n Node, f func(Node)) {
	w := walker{f}
	switch n := n.(type) {
	case *Script:
		nodes(w, n.Statements)
	case Statement:
		w.statement(n)
	case Expr:
		w.expr(n)
	case Clause:
		w.clause(n)
	case Reading:
		w.reading(n)
	case Solid:
		w.solid(n)
	default:
		w.part(n)
	}
}

func nodes[T Node](w walker, list []T) {
	for _, n := range list {
		w.f(n)
	}
}

// node visits a child that may be missing; a nil of any kind is passed over.
func child[T interface {
	comparable
	Node
}](w walker, n T) {
	var none T
	if n != none {
		w.f(n)
	}
}

func (w walker) exprs(list ...Expr) {
	for _, e := range list {
		if e != nil {
			w.f(e)
		}
	}
}

// name visits a name unless none was given.
func (w walker) name(n *Name) {
	if !n.IsZero() {
		w.f(n)
	}
}

func (w walker) names(list []Name) {
	for i := range list {
		w.f(&list[i])
	}
}

func (w walker) statement(s Statement) {
	switch s := s.(type) {
	case *QueryStatement:
		child(w, s.Query)
	case *CreateData:
		w.name(&s.Name)
		child(w, s.File)
		child(w, s.Files)
		child(w, s.Query)
		nodes(w, s.Readings)
	case *CreateSolid:
		w.name(&s.Name)
		child(w, s.Solid)
		w.name(&s.Frame)
	case *CreateView:
		w.name(&s.Name)
		child(w, s.Query)
	case *CreateFrame:
		w.name(&s.Name)
		child(w, s.File)
	case *Drop:
		w.name(&s.Name)
	case *Let:
		w.name(&s.Name)
		child(w, s.Value)
	case *Save:
		child(w, s.Query)
		child(w, s.To)
	case *Explain:
		child(w, s.Query)
	case *Require:
		child(w, s.Label)
		child(w, s.Condition)
		child(w, s.None)
	case *Describe:
		child(w, s.File)
		w.name(&s.Name)
		child(w, s.Operand)
	case *Draw:
		child(w, s.Relation)
		w.name(&s.Shaded)
		w.exprs(s.Limits...)
		w.name(&s.Along)
		w.names(s.Showing)
		child(w, s.Weight)
		w.exprs(s.Seen...)
		child(w, s.To)
	default:
		w.shortStatement(s)
	}
}

func (w walker) shortStatement(s Statement) {
	switch s := s.(type) {
	case *List:
		w.name(&s.What)
	case *Run:
		child(w, s.File)
	case *Set:
		w.name(&s.Name)
		child(w, s.Value)
		w.name(&s.Word)
	case *Help:
		w.names(s.Topic)
	case *Remark:
		child(w, s.Text)
	}
}

// part visits the children of queries, sources, relations and what stands within them.
func (w walker) part(n Node) {
	switch n := n.(type) {
	case *Query:
		nodes(w, n.With)
		child(w, n.Body)
		nodes(w, n.OrderBy)
		w.exprs(n.Limit, n.Offset)
	case *CTE:
		w.name(&n.Name)
		w.names(n.Columns)
		child(w, n.Query)
	case *Key:
		child(w, n.Expr)
	case *SetOp:
		child(w, n.Left)
		child(w, n.Right)
	case *Values:
		nodes(w, n.Rows)
	case *Row:
		w.exprs(n.Values...)
	case *Select:
		nodes(w, n.Items)
		nodes(w, n.From)
		w.exprs(n.Where)
		w.exprs(n.GroupBy...)
		w.exprs(n.Having)
	case *Item:
		w.name(&n.Qualifier)
		w.exprs(n.Expr)
		w.name(&n.Alias)
	case *Relation:
		w.name(&n.Noun)
		child(w, n.Operand)
		child(w, n.Between)
		child(w, n.And)
		nodes(w, n.Clauses)
	case Source:
		w.source(n)
	default:
		w.smallPart(n)
	}
}

func (w walker) source(s Source) {
	switch s := s.(type) {
	case *NameSource:
		w.name(&s.Name)
	case *QuerySource:
		child(w, s.Query)
	case *RelationSource:
		child(w, s.Relation)
	case *JoinSource:
		child(w, s.Left)
		child(w, s.Right)
		w.exprs(s.On)
		w.names(s.Using)
	}
	a := s.Aliasing()
	w.name(&a.Alias)
	w.names(a.Columns)
}

func (w walker) smallPart(n Node) {
	switch n := n.(type) {
	case *When:
		w.exprs(n.Condition, n.Result)
	case *Window:
		w.exprs(n.PartitionBy...)
		nodes(w, n.OrderBy)
		child(w, n.Frame)
	case *Frame:
		child(w, n.Start)
		child(w, n.End)
	case *Bound:
		w.exprs(n.Offset)
	case *Point:
		w.exprs(n.X, n.Y, n.Z)
	case *Corner:
		w.exprs(n.X, n.Y)
	case *Ring:
		nodes(w, n.Corners)
	case *ColumnUnit:
		w.name(&n.Column)
		child(w, n.Unit)
	case *TimeColumn:
		w.name(&n.Column)
		child(w, n.Form)
		child(w, n.Zone)
	case *PreambleField:
		w.name(&n.Column)
		child(w, n.After)
	case *UncertaintyPart:
		w.name(&n.Column)
		w.exprs(n.Value)
	}
}

func (w walker) expr(e Expr) {
	switch e := e.(type) {
	case *Binary:
		w.exprs(e.Left, e.Right)
	case *Unary:
		w.exprs(e.Operand)
	case *Between:
		w.exprs(e.Operand, e.Low, e.High)
	case *In:
		w.exprs(e.Operand)
		w.exprs(e.List...)
		child(w, e.Query)
	case *Quantified:
		w.exprs(e.Operand)
		child(w, e.Query)
	case *Like:
		w.exprs(e.Operand, e.Pattern, e.Escape)
	case *Is:
		w.exprs(e.Operand, e.From)
	case *AtTimeZone:
		w.exprs(e.Operand, e.Zone)
	case *Timestamp:
		child(w, e.Text)
	case *Interval:
		child(w, e.Text)
		w.name(&e.Unit)
	case *Column:
		w.name(&e.Qualifier)
		w.name(&e.Name)
	case *Cast:
		w.exprs(e.Operand)
		w.name(&e.Type)
	case *Case:
		w.exprs(e.Operand)
		nodes(w, e.Whens)
		w.exprs(e.Else)
	case *Exists:
		child(w, e.Query)
	case *Subquery:
		child(w, e.Query)
	case *Overlaps:
		child(w, e.Left)
		child(w, e.Right)
	case *Call:
		w.name(&e.Name)
		w.exprs(e.Args...)
		nodes(w, e.OrderBy)
		w.exprs(e.Along, e.AtValue)
		w.name(&e.Outside)
		w.exprs(e.Filter, e.Weight)
		child(w, e.Over)
	}
}

func (w walker) clause(c Clause) {
	switch c := c.(type) {
	case *WithinClause:
		nodes(w, c.Solids)
	case *StretchedClause:
		w.exprs(c.X, c.Y, c.Z)
	case *ForEachClause:
		w.names(c.Names)
	case *ForClause:
		w.names(c.Names)
	case *MethodClause:
		w.name(&c.Name)
		w.exprs(c.Argument)
	case *MeasuredInClause:
		w.names(c.Parts)
	case *OmittingClause:
		nodes(w, c.IDs)
		child(w, c.Because)
	case *KeepClause:
		nodes(w, c.IDs)
	case *AmongClause:
		child(w, c.Operand)
	case *ExpectingClause:
		child(w, c.Operand)
	case *AgainstClause:
		child(w, c.Operand)
	case *AtPlaneClause:
		w.name(&c.Axis)
		w.exprs(c.Value)
	case *AtPointsClause:
		child(w, c.Operand)
	case *ThroughClause:
		child(w, c.Point)
		child(w, c.Normal)
	default:
		w.numberedClause(c)
	}
}

func (w walker) numberedClause(c Clause) {
	switch c := c.(type) {
	case *ThresholdsClause:
		w.exprs(c.Values...)
	case *DistancesClause:
		w.exprs(c.Values...)
	case *ClearanceClause:
		w.exprs(c.Value)
	case *NumberClause:
		w.exprs(c.Value)
	case *StepClause:
		w.exprs(c.Value)
	case *AcrossClause:
		w.exprs(c.Across, c.Up)
	case *AboveClause:
		w.exprs(c.Value)
	case *UntilClause:
		w.exprs(c.Value)
	case *ByClause:
		w.names(c.Names)
		w.name(&c.On)
	case *EveryClause:
		w.exprs(c.Value, c.From, c.To)
	case *StampClause:
		w.name(&c.Where)
	case *LongestGapClause:
		w.exprs(c.Value)
	case *BridgingClause:
		w.exprs(c.Value)
	case *WeightsClause:
		w.name(&c.Word)
	case *UncertaintyClause:
		w.name(&c.Column)
		nodes(w, c.Parts)
	}
}

func (w walker) reading(r Reading) {
	switch r := r.(type) {
	case *IDReading:
		w.name(&r.Name)
	case *PositionReading:
		w.exprs(r.X, r.Y, r.Z)
		if r.Latitude != nil {
			w.exprs(r.Latitude, r.Longitude)
		}
		w.name(&r.Frame)
	case *UnitsReading:
		nodes(w, r.Units)
	case *CoordinatesReading:
		w.name(&r.Word)
		child(w, r.Text)
	case *ToleranceReading:
		w.exprs(r.Value)
	case *DelimiterReading:
		child(w, r.Text)
	case *DecimalMarkReading:
		child(w, r.Text)
	case *MissingReading:
		nodes(w, r.Marks)
	case *RefusedReading:
		child(w, r.File)
	case *HeadingReading:
		w.exprs(r.Line)
	case *SheetReading:
		child(w, r.Text)
	case *EncodingReading:
		child(w, r.Text)
	case *TimeReading:
		nodes(w, r.Columns)
	case *PreambleReading:
		nodes(w, r.Fields)
	case *CensoredReading:
		w.names(r.Columns)
	case *UnpivotReading:
		w.name(&r.Value)
		w.name(&r.Label)
		w.names(r.Columns)
	}
}

func (w walker) solid(s Solid) {
	switch s := s.(type) {
	case *BoxSolid:
		child(w, s.From)
		child(w, s.To)
	case *PrismSolid:
		child(w, s.Outer)
		child(w, s.File)
		nodes(w, s.Holes)
		w.exprs(s.From, s.To)
	case *MeshSolid:
		child(w, s.File)
		w.name(&s.Unit)
		w.exprs(s.Weld)
	case *BoxesSolid:
		child(w, s.File)
	case *TerrainSolid:
		child(w, s.File)
		w.exprs(s.To)
	case *EnvelopeSolid:
		w.name(&s.Of)
		w.exprs(s.Margin)
	case *SolidName:
		w.name(&s.Name)
	case *SolidOp:
		child(w, s.Left)
		child(w, s.Right)
	}
}
