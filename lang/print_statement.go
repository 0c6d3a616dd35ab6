package lang

import "strings"

func (w *printer) statement(s Statement) {
	switch s := s.(type) {
	case *QueryStatement:
		w.query(s.Query)
	case *CreateData:
		w.createData(s)
	case *CreateSolid:
		w.create(s.Replace, "SOLID ", s.Name)
		w.put(" AS ")
		w.solid(s.Solid, false)
		w.optional(" IN FRAME ", s.Frame)
	case *CreateView:
		w.create(s.Replace, "VIEW ", s.Name)
		w.put(" AS ")
		w.bracketedQuery(s.Query)
	case *CreateFrame:
		w.create(s.Replace, "FRAME ", s.Name)
		w.put(" MATCHING ")
		w.text(s.File)
	case *Drop:
		w.put("DROP ", string(s.Kind))
		w.optional(" ", s.Name)
	case *Let:
		w.put("LET ")
		w.anyWord(s.Name)
		w.put(" = ")
		w.expr(s.Value, levelOr)
	case *Save:
		w.save(s)
	case *Explain:
		w.put("EXPLAIN ")
		if s.Measured {
			w.put("MEASURED ")
		}
		w.query(s.Query)
	case *Require:
		w.require(s)
	case *Draw:
		w.draw(s)
	default:
		w.shortStatement(s)
	}
}

func (w *printer) shortStatement(s Statement) {
	switch s := s.(type) {
	case *List:
		w.put("LIST ")
		w.name(s.What)
	case *Describe:
		w.put("DESCRIBE ")
		switch {
		case s.File != nil:
			w.put("FILE ")
			w.text(s.File)
		case s.Operand != nil:
			w.name(s.Name)
			w.put(" OF ")
			w.operand(s.Operand)
		default:
			w.anyWord(s.Name)
		}
	case *Run:
		w.put("RUN ")
		w.text(s.File)
	case *Set:
		w.put("SET ")
		w.name(s.Name)
		w.put(" ")
		if t, isText := s.Value.(*Text); isText {
			w.text(t)
		} else if s.Value != nil {
			w.value(s.Value)
		} else {
			w.name(s.Word)
		}
	case *Help:
		w.put("HELP")
		for _, word := range s.Topic {
			w.put(" ")
			w.anyWord(word)
		}
	case *Quit:
		w.put("QUIT")
	case *Remark:
		if s.Title {
			w.put("TITLE ")
		} else {
			w.put("TEXT ")
		}
		w.text(s.Text)
	}
}

func (w *printer) create(replace bool, kind string, name Name) {
	w.put("CREATE ")
	if replace {
		w.put("OR REPLACE ")
	}
	w.put(kind)
	w.name(name)
}

func (w *printer) createData(s *CreateData) {
	w.create(s.Replace, string(s.Kind)+" ", s.Name)
	switch {
	case s.File != nil:
		w.put(" FROM ")
		w.text(s.File)
	case s.Files != nil:
		w.put(" FROM FILES ")
		w.text(s.Files)
	default:
		w.put(" AS ")
		w.bracketedQuery(s.Query)
	}
	for _, r := range s.Readings {
		w.put(" ")
		w.reading(r)
	}
}

func (w *printer) save(s *Save) {
	w.put("SAVE ")
	w.query(s.Query)
	w.put(" TO ")
	w.text(s.To)
	for _, option := range []struct {
		on   bool
		text string
	}{{s.Overwrite, " OVERWRITE"}, {s.WithUnits, " WITH UNITS"}, {s.WithProvenance, " WITH PROVENANCE"}, {s.QuoteFormulas, " QUOTE FORMULAS"}} {
		if option.on {
			w.put(option.text)
		}
	}
}

func (w *printer) require(s *Require) {
	w.put("REQUIRE ")
	w.text(s.Label)
	w.put(" ")
	if s.None != nil {
		w.put("NONE ")
		w.bracketedQuery(s.None)
		return
	}
	condition := &printer{}
	condition.expr(s.Condition, levelOr)
	text := condition.String()
	if len(text) > 5 && strings.EqualFold(text[:5], "NONE(") {
		text = "(" + text + ")" // a function called NONE is not the word NONE
	}
	w.put(text)
}

func (w *printer) draw(s *Draw) {
	if s.Show {
		w.put("SHOW ")
	} else {
		w.put("DRAW ")
	}
	w.relation(s.Relation)
	w.optional(" SHADED BY ", s.Shaded)
	if len(s.Limits) > 0 {
		w.put(" LIMITS ")
		w.values(s.Limits)
	}
	w.optional(" ALONG ", s.Along)
	if len(s.Showing) > 0 {
		w.put(" SHOWING ")
		list(w, s.Showing, w.name)
	}
	if s.Weight != nil {
		w.put(" WEIGHTED BY ")
		w.weight(s.Weight)
	}
	if len(s.Seen) > 0 {
		w.put(" SEEN FROM ")
		w.values(s.Seen)
	}
	if s.To != nil {
		w.put(" TO ")
		w.text(s.To)
		if s.Overwrite {
			w.put(" OVERWRITE")
		}
	}
}

func (w *printer) reading(r Reading) {
	switch r := r.(type) {
	case *WithinClause:
		w.within(r)
	case *StretchedClause:
		w.clause(r)
	case *IDReading:
		w.optional("ID ", r.Name)
	case *PositionReading:
		w.put("POSITION (")
		w.exprs([]Expr{r.X, r.Y, r.Z})
		w.put(")")
		if r.Geographic {
			w.put(" GEOGRAPHIC")
			if r.Latitude != nil {
				w.put(" ORIGIN (")
				w.exprs([]Expr{r.Latitude, r.Longitude})
				w.put(")")
			}
		}
		w.optional(" IN FRAME ", r.Frame)
	case *UnitsReading:
		w.put("UNITS (")
		list(w, r.Units, w.columnUnit)
		w.put(")")
	case *CoordinatesReading:
		w.put("COORDINATES IN ")
		if r.Text != nil {
			w.text(r.Text)
		} else {
			w.name(r.Word)
		}
	case *DuplicatesReading:
		w.put("DUPLICATES ", string(r.Policy))
	case *ToleranceReading:
		w.worded("TOLERANCE", r.Value)
	case *HeadingReading:
		w.worded("HEADING AT LINE", r.Line)
	default:
		w.fileReading(r)
	}
}

// fileReading writes the clauses that say how a file is laid out.
func (w *printer) fileReading(r Reading) {
	texted := func(word string, t *Text) {
		w.put(word)
		w.text(t)
	}
	switch r := r.(type) {
	case *DelimiterReading:
		texted("DELIMITER ", r.Text)
	case *DecimalMarkReading:
		texted("DECIMAL MARK ", r.Text)
	case *MissingReading:
		if len(r.Marks) == 1 {
			texted("MISSING ", r.Marks[0])
			return
		}
		w.put("MISSING ")
		w.texts(r.Marks)
	case *RefusedReading:
		texted("REFUSED TO ", r.File)
	case *SheetReading:
		texted("SHEET ", r.Text)
	case *EncodingReading:
		texted("ENCODING ", r.Text)
	case *TimeReading:
		w.put("TIME (")
		list(w, r.Columns, w.timeColumn)
		w.put(")")
	case *PreambleReading:
		w.put("PREAMBLE (")
		list(w, r.Fields, w.preambleField)
		w.put(")")
	case *CensoredReading:
		w.put("CENSORED ")
		w.names(r.Columns)
	case *UnpivotReading:
		w.put("UNPIVOT (")
		w.name(r.Value)
		w.put(" FOR ")
		w.name(r.Label)
		w.put(" IN ")
		w.names(r.Columns)
		w.put(")")
	}
}

func (w *printer) columnUnit(u *ColumnUnit) {
	w.anyWord(u.Column)
	w.put(" ")
	w.text(u.Unit)
}

func (w *printer) timeColumn(c *TimeColumn) {
	w.name(c.Column)
	w.put(" ")
	w.text(c.Form)
	if c.Zone != nil {
		w.put(" ZONE ")
		w.text(c.Zone)
	}
}

func (w *printer) preambleField(f *PreambleField) {
	w.name(f.Column)
	w.put(" AFTER ")
	w.text(f.After)
}
