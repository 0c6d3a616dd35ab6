package lang

// clauseMakers has one entry for each clause that a relation can have once.
func (g *gen) clauseMakers() []func() Clause {
	return []func() Clause{
		func() Clause { return &UnclippedClause{} },
		func() Clause { return g.within() },
		func() Clause { return &StretchedClause{X: g.value(), Y: g.value(), Z: g.value()} },
		func() Clause { return &ForEachClause{Names: g.names()} },
		func() Clause { return &ForClause{Names: pick(g, g.names(), []Name{{Text: "each"}})} },
		func() Clause { return &MethodClause{Name: g.word(), Argument: maybe(g, g.value)} },
		func() Clause { return &MeasuredInClause{Parts: g.names()} },
		func() Clause { return &OmittingClause{IDs: g.texts(), Because: g.text()} },
		func() Clause { return &KeepClause{IDs: g.texts()} },
		func() Clause { return &AmongClause{Operand: g.operand()} },
		func() Clause { return &ExpectingClause{Operand: g.operand()} },
		func() Clause { return &AgainstClause{Operand: g.operand()} },
		func() Clause {
			if g.coin() {
				return &AtPlaneClause{Axis: g.word(), Value: g.value()}
			}
			return &AtPointsClause{Operand: g.operand()}
		},
		func() Clause { return &ThroughClause{Point: g.point(), Normal: g.point()} },
		func() Clause { return &ThresholdsClause{Values: g.values()} },
		func() Clause { return &DistancesClause{Values: g.values()} },
		func() Clause { return &ClearanceClause{Value: g.value()} },
		func() Clause { return &NumberClause{Value: g.value()} },
		func() Clause { return &StepClause{Value: g.value()} },
		func() Clause { return &AcrossClause{Across: g.value(), Up: g.value()} },
		func() Clause { return &AboveClause{Below: g.coin(), Value: g.value()} },
		func() Clause { return &UntilClause{Below: g.coin(), Value: g.value()} },
		func() Clause {
			c := &EveryClause{Value: g.value()}
			if g.coin() {
				c.From, c.To = g.value(), g.value()
			}
			return c
		},
		func() Clause { return &StampClause{Where: g.word()} },
		func() Clause { return &LongestGapClause{Value: g.value()} },
		func() Clause { return &BridgingClause{Value: g.value()} },
		func() Clause { return &WeightsClause{Word: g.word()} },
		g.uncertainty,
		func() Clause { return &ByClause{Names: g.names(), On: maybe(g, g.name)} },
	}
}

func (g *gen) uncertainty() Clause {
	if g.coin() {
		return &UncertaintyClause{Column: g.name()}
	}
	return &UncertaintyClause{Parts: some(g, 1, 2, func() *UncertaintyPart {
		return &UncertaintyPart{Column: maybe(g, g.name), Value: g.value(), Common: g.coin()}
	})}
}

func (g *gen) within() *WithinClause {
	if g.coin() {
		return &WithinClause{Zones: true, Solids: some(g, 2, 3, g.solid)}
	}
	return &WithinClause{Solids: []Solid{g.solid()}}
}

func (g *gen) solid() Solid {
	return deeper(g, func() Solid {
		if g.rarely() {
			return &SolidOp{Minus: g.coin(), Left: g.solid(), Right: g.solid()}
		}
		switch g.int(8) {
		case 0:
			return &BoxSolid{From: g.point(), To: g.point()}
		case 1:
			return &PrismSolid{Outer: g.ring(), Holes: some(g, 0, 2, g.ring), From: g.value(), To: g.value()}
		case 2:
			return &PrismSolid{File: g.text(), Holes: some(g, 0, 1, g.ring), From: g.value(), To: g.value()}
		case 3:
			return &MeshSolid{File: g.text(), Unit: maybe(g, g.word), Weld: maybe(g, g.value)}
		case 4:
			return &BoxesSolid{File: g.text()}
		case 5:
			return &TerrainSolid{File: g.text(), To: g.value()}
		case 6:
			return &EnvelopeSolid{Of: g.name(), Margin: maybe(g, g.value)}
		}
		return &SolidName{Name: g.name()}
	})
}

func (g *gen) ring() *Ring {
	return &Ring{Corners: some(g, 1, 3, func() *Corner { return &Corner{X: g.expr(), Y: g.expr()} })}
}

func (g *gen) statement() Statement {
	switch g.int(20) {
	case 0, 1:
		return &QueryStatement{Query: g.query()}
	case 2, 3:
		return g.createData()
	case 4:
		return &CreateSolid{Replace: g.coin(), Name: g.name(), Solid: g.solid(), Frame: maybe(g, g.name)}
	case 5:
		return &CreateView{Replace: g.coin(), Name: g.name(), Query: g.query()}
	case 6:
		return &CreateFrame{Replace: g.coin(), Name: g.name(), File: g.text()}
	case 7:
		if g.coin() {
			return &Drop{Kind: Diagrams}
		}
		return &Drop{Kind: pick(g, Campaign, Table, SolidOb, View, FrameOb), Name: g.name()}
	case 8:
		return &Let{Name: g.anyWord(), Value: g.expr()}
	case 9:
		return &Save{Query: g.query(), To: g.text(), Overwrite: g.coin(), WithUnits: g.coin(), WithProvenance: g.coin(), QuoteFormulas: g.coin()}
	case 10:
		return &Explain{Measured: g.coin(), Query: g.query()}
	case 11:
		if g.coin() {
			return &Require{Label: g.text(), None: g.query()}
		}
		if g.coin() {
			return &Require{Label: g.text(), Condition: &Call{Name: Name{Text: "none"}, Args: g.exprs()}}
		}
		return &Require{Label: g.text(), Condition: g.expr()}
	case 12:
		return &List{What: g.word()}
	case 13:
		return g.describe()
	case 14:
		return &Run{File: g.text()}
	case 15:
		return g.setting()
	case 16:
		return &Help{Topic: some(g, 0, 3, g.anyWord)}
	case 17:
		return &Quit{}
	case 18:
		d := &Draw{Show: g.coin(), Relation: g.relation(), Shaded: maybe(g, g.name), Limits: maybe(g, g.values), Along: maybe(g, g.name),
			Showing: maybe(g, g.names), Weight: maybe(g, g.weight), To: maybe(g, g.text)}
		if g.coin() {
			d.Seen = some(g, 3, 3, g.value)
		}
		d.Overwrite = d.To != nil && g.coin()
		return d
	}
	return &Remark{Title: g.coin(), Text: g.text()}
}

func (g *gen) setting() Statement {
	s := &Set{Name: g.word()}
	switch g.int(3) {
	case 0:
		s.Word = g.word()
	case 1:
		s.Value = g.text()
	default:
		s.Value = g.value()
	}
	return s
}

func (g *gen) describe() Statement {
	switch g.int(3) {
	case 0:
		return &Describe{File: g.text()}
	case 1:
		return &Describe{Name: g.word(), Operand: g.operand()}
	}
	return &Describe{Name: g.anyWord()}
}

func (g *gen) createData() Statement {
	s := &CreateData{Kind: pick(g, Campaign, Table), Replace: g.coin(), Name: g.name()}
	switch g.int(3) {
	case 0:
		s.File = g.text()
	case 1:
		s.Files = g.text()
	default:
		s.Query = g.query()
	}
	all := g.readingMakers()
	at := g.int(len(all)) - 1
	for range g.int(6) {
		at += 1 + g.int(4)
		if at >= len(all) {
			break
		}
		s.Readings = append(s.Readings, all[at]())
	}
	return s
}

func (g *gen) readingMakers() []func() Reading {
	return []func() Reading{
		func() Reading { return &IDReading{Name: g.name()} },
		g.position,
		func() Reading {
			return &UnitsReading{Units: some(g, 1, 3, func() *ColumnUnit { return &ColumnUnit{Column: g.anyWord(), Unit: g.text()} })}
		},
		func() Reading {
			if g.coin() {
				return &CoordinatesReading{Text: g.text()}
			}
			return &CoordinatesReading{Word: g.word()}
		},
		func() Reading { return g.within() },
		func() Reading { return &StretchedClause{X: g.value(), Y: g.value(), Z: g.value()} },
		func() Reading {
			return &DuplicatesReading{Policy: pick(g, DuplicatesSplit, DuplicatesMean, DuplicatesFirst, DuplicatesFail)}
		},
		func() Reading { return &ToleranceReading{Value: g.value()} },
		func() Reading { return &DelimiterReading{Text: g.text()} },
		func() Reading { return &DecimalMarkReading{Text: g.text()} },
		func() Reading { return &MissingReading{Marks: g.texts()} },
		func() Reading { return &RefusedReading{File: g.text()} },
		func() Reading { return &HeadingReading{Line: g.value()} },
		func() Reading { return &SheetReading{Text: g.text()} },
		func() Reading { return &EncodingReading{Text: g.text()} },
		func() Reading {
			return &TimeReading{Columns: some(g, 1, 2, func() *TimeColumn { return &TimeColumn{Column: g.name(), Form: g.text(), Zone: maybe(g, g.text)} })}
		},
		func() Reading {
			return &PreambleReading{Fields: some(g, 1, 2, func() *PreambleField { return &PreambleField{Column: g.name(), After: g.text()} })}
		},
		func() Reading { return &CensoredReading{Columns: g.names()} },
		func() Reading { return &UnpivotReading{Value: g.name(), Label: g.name(), Columns: g.names()} },
	}
}

func (g *gen) position() Reading {
	p := &PositionReading{X: g.expr(), Y: g.expr(), Z: g.expr()}
	switch g.int(3) {
	case 0:
		p.Geographic = true
		if g.int(2) == 0 {
			p.Latitude, p.Longitude = g.expr(), g.expr()
		}
	case 1:
		p.Frame = g.name()
	}
	return p
}
