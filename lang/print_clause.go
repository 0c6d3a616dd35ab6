package lang

// value writes an expression where only a value may stand: anything else in brackets.
func (w *printer) value(e Expr) {
	switch e := e.(type) {
	case *Unary:
		if e.Op != Not {
			w.put(string(e.Op))
			w.unsignedValue(e.Operand)
			return
		}
	case *Interval, *Timestamp:
		w.atom(e)
		return
	}
	w.unsignedValue(e)
}

func (w *printer) unsignedValue(e Expr) {
	switch e := e.(type) {
	case *Number, *Param, *Subquery:
		w.expr(e, levelPrimary)
		return
	}
	w.put("(")
	w.expr(e, levelOr)
	w.put(")")
}

func (w *printer) values(values []Expr) {
	w.put("(")
	list(w, values, w.value)
	w.put(")")
}

// word and a value.
func (w *printer) worded(word string, value Expr) {
	w.put(word, " ")
	w.value(value)
}

func aboveOrBelow(below bool) string {
	if below {
		return "BELOW"
	}
	return "ABOVE"
}

func (w *printer) clause(c Clause) {
	switch c := c.(type) {
	case *WithinClause:
		w.within(c)
	case *UnclippedClause:
		w.put("UNCLIPPED")
	case *StretchedClause:
		w.put("STRETCHED ")
		w.values([]Expr{c.X, c.Y, c.Z})
	case *ForEachClause:
		w.put("FOR EACH ")
		w.nameList(c.Names, "")
	case *ForClause:
		w.put("FOR ")
		w.nameList(c.Names, "EACH")
	case *MethodClause:
		w.put("METHOD ")
		w.name(c.Name)
		if c.Argument != nil {
			w.values([]Expr{c.Argument})
		}
	case *MeasuredInClause:
		w.put("MEASURED IN ")
		w.nameList(c.Parts, "")
	case *OmittingClause:
		w.put("OMITTING ")
		w.texts(c.IDs)
		w.put(" BECAUSE ")
		w.text(c.Because)
	case *KeepClause:
		w.put("KEEP ")
		w.texts(c.IDs)
	case *AmongClause:
		w.put("AMONG ")
		w.operand(c.Operand)
	case *ExpectingClause:
		w.put("EXPECTING ")
		w.operand(c.Operand)
	case *AgainstClause:
		w.put("AGAINST ")
		w.operand(c.Operand)
	case *AtPointsClause:
		w.put("AT ")
		w.operand(c.Operand)
	case *AtPlaneClause:
		w.put("AT ")
		w.name(c.Axis)
		w.put(" = ")
		w.value(c.Value)
	case *ThroughClause:
		w.put("THROUGH ")
		w.point(c.Point)
		w.put(" NORMAL ")
		w.point(c.Normal)
	default:
		w.numberedClause(c)
	}
}

// numberedClause writes the clauses that are mostly values.
func (w *printer) numberedClause(c Clause) {
	switch c := c.(type) {
	case *ThresholdsClause:
		w.put("THRESHOLDS ")
		w.values(c.Values)
	case *DistancesClause:
		w.put("DISTANCES ")
		w.values(c.Values)
	case *ClearanceClause:
		w.worded("CLEARANCE", c.Value)
	case *NumberClause:
		w.worded("NUMBER", c.Value)
	case *StepClause:
		w.worded("STEP", c.Value)
	case *AcrossClause:
		w.worded("ACROSS", c.Across)
		w.worded(" UP", c.Up)
	case *AboveClause:
		w.worded(aboveOrBelow(c.Below), c.Value)
	case *UntilClause:
		w.worded("UNTIL "+aboveOrBelow(c.Below), c.Value)
	case *ByClause:
		w.put("BY ")
		w.nameList(c.Names, "")
		w.optional(" ON ", c.On)
	case *EveryClause:
		w.worded("EVERY", c.Value)
		if c.From != nil {
			w.worded(" FROM", c.From)
			w.worded(" TO", c.To)
		}
	case *StampClause:
		w.optional("STAMP AT ", c.Where)
	case *LongestGapClause:
		w.worded("LONGEST GAP", c.Value)
	case *BridgingClause:
		w.worded("BRIDGING", c.Value)
	case *WeightsClause:
		w.optional("WEIGHTS ", c.Word)
	case *UncertaintyClause:
		w.put("UNCERTAINTY ")
		if len(c.Parts) == 0 {
			w.name(c.Column)
			return
		}
		w.put("(")
		list(w, c.Parts, w.uncertaintyPart)
		w.put(")")
	}
}

func (w *printer) uncertaintyPart(u *UncertaintyPart) {
	if !u.Column.IsZero() {
		w.name(u.Column)
		w.put(" ")
	}
	w.value(u.Value)
	if u.Common {
		w.put(" COMMON")
	} else {
		w.put(" EACH")
	}
}

func (w *printer) within(c *WithinClause) {
	w.put("WITHIN ")
	if c.Zones {
		w.put("(")
		list(w, c.Solids, func(s Solid) { w.solid(s, false) })
		w.put(")")
		return
	}
	w.solid(c.Solids[0], false)
}

// solid writes a solid expression; the right side of PLUS and MINUS stands in brackets
// when it is one itself.
func (w *printer) solid(s Solid, right bool) {
	switch s := s.(type) {
	case *BoxSolid:
		w.put("BOX ")
		w.point(s.From)
		w.put(" TO ")
		w.point(s.To)
	case *PrismSolid:
		w.prism(s)
	case *MeshSolid:
		w.put("MESH ")
		w.text(s.File)
		w.optional(" UNIT ", s.Unit)
		if s.Weld != nil {
			w.worded(" WELD", s.Weld)
		}
	case *BoxesSolid:
		w.put("BOXES ")
		w.text(s.File)
	case *TerrainSolid:
		w.put("TERRAIN ")
		w.text(s.File)
		w.worded(" TO", s.To)
	case *EnvelopeSolid:
		w.put("ENVELOPE OF ")
		w.name(s.Of)
		if s.Margin != nil {
			w.worded(" MARGIN", s.Margin)
		}
	case *SolidName:
		w.name(s.Name)
	case *SolidOp:
		w.solidOp(s, right)
	}
}

func (w *printer) solidOp(s *SolidOp, right bool) {
	if right {
		w.put("(")
		defer w.put(")")
	}
	w.solid(s.Left, false)
	if s.Minus {
		w.put(" MINUS ")
	} else {
		w.put(" PLUS ")
	}
	w.solid(s.Right, true)
}

func (w *printer) prism(s *PrismSolid) {
	w.put("PRISM ")
	if s.File != nil {
		w.text(s.File)
	} else {
		w.ring(s.Outer)
	}
	for _, hole := range s.Holes {
		w.put(" HOLE ")
		w.ring(hole)
	}
	w.worded(" FROM", s.From)
	w.worded(" TO", s.To)
}

func (w *printer) point(p *Point) { w.values([]Expr{p.X, p.Y, p.Z}) }

func (w *printer) ring(r *Ring) {
	w.put("(")
	list(w, r.Corners, w.corner)
	w.put(")")
}

func (w *printer) corner(c *Corner) {
	w.put("(")
	w.exprs([]Expr{c.X, c.Y})
	w.put(")")
}
