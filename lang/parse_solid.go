package lang

// solid reads a solid expression: PLUS and MINUS from left to right.
func (p *parser) solid() Solid {
	start := p.start()
	return p.solidChain(start, p.solidPart())
}

// solidChain reads what is added to or taken from a solid that was read already.
func (p *parser) solidChain(start int, left Solid) Solid {
	count := 0
	for p.isOneOf(kPlus, kMinus) {
		p.link(&count)
		minus := p.next().Type == kMinus
		right := p.solidPart()
		left = &SolidOp{At: p.since(start), Minus: minus, Left: left, Right: right}
	}
	return left
}

func (p *parser) solidPart() Solid {
	p.enter()
	defer p.leave()
	if p.is(tokLeft) {
		opened := p.next()
		s := p.solid()
		p.close(opened, "PLUS, MINUS")
		return s
	}
	switch {
	case p.follows(kBox, tokLeft):
		return p.box()
	case p.follows(kPrism, tokLeft), p.follows(kPrism, tokText):
		return p.prism()
	case p.follows(kMesh, tokText):
		return p.mesh()
	case p.follows(kBoxes, tokText):
		start := p.next().Pos.Offset
		file := p.text("a file name")
		return &BoxesSolid{At: p.since(start), File: file}
	case p.follows(kTerrain, tokText):
		return p.terrain()
	case p.follows(kEnvelope, kOf):
		return p.envelope()
	}
	first := p.tok()
	name := p.name("a solid: BOX, PRISM, MESH, BOXES, TERRAIN, ENVELOPE or the name of one,")
	if p.is(tokLeft) || p.is(tokText) {
		p.i--
		p.failHint("BOX, PRISM, MESH, BOXES, TERRAIN or the name of a solid",
			nearHint(first, []string{"BOX", "PRISM", "MESH", "BOXES", "TERRAIN"}))
	}
	return &SolidName{At: name.At, Name: name}
}

func (p *parser) box() Solid {
	start := p.next().Pos.Offset
	b := &BoxSolid{From: p.point("a corner (x, y, z)")}
	p.needWord(kTo)
	b.To = p.point("the opposite corner (x, y, z)")
	b.At = p.since(start)
	return b
}

func (p *parser) prism() Solid {
	start := p.next().Pos.Offset
	s := &PrismSolid{}
	if p.is(tokText) {
		s.File = p.text("a file name")
	} else {
		s.Outer = p.ring()
	}
	for p.take(kHole) {
		s.Holes = append(s.Holes, p.ring())
	}
	if !p.is(kFrom) {
		p.failHint("HOLE, or FROM and the height of the floor", "PRISM ((0,0), (4,0), (4,3)) FROM 0 TO 7.5")
	}
	p.next()
	s.From = p.value("the height of the floor")
	p.needWord(kTo)
	s.To = p.value("the height of the ceiling")
	s.At = p.since(start)
	return s
}

// ring reads ((x, y), (x, y), …).
func (p *parser) ring() *Ring {
	start := p.start()
	opened := p.open("( and the corners of a ring")
	r := &Ring{}
	for {
		at := p.start()
		if !p.is(tokLeft) {
			p.failHint("a corner (x, y)", "a ring is ((x, y), (x, y), (x, y))")
		}
		corner := p.next()
		c := &Corner{X: p.expr()}
		p.need(tokComma, "a comma and y")
		c.Y = p.expr()
		p.close(corner, "")
		c.At = p.since(at)
		r.Corners = append(r.Corners, c)
		if !p.take(tokComma) {
			break
		}
	}
	p.close(opened, "a comma")
	r.At = p.since(start)
	return r
}

func (p *parser) mesh() Solid {
	start := p.next().Pos.Offset
	m := &MeshSolid{File: p.text("a file name")}
	if p.take(kUnit) {
		m.Unit = p.word("a unit of length, such as mm,")
	}
	if p.take(kWeld) {
		m.Weld = p.value("a distance")
	}
	m.At = p.since(start)
	return m
}

func (p *parser) terrain() Solid {
	start := p.next().Pos.Offset
	s := &TerrainSolid{File: p.text("a file name")}
	p.needWord(kTo)
	s.To = p.value("a height")
	s.At = p.since(start)
	return s
}

func (p *parser) envelope() Solid {
	start := p.next().Pos.Offset
	p.next()
	s := &EnvelopeSolid{Of: p.name("the name of a campaign")}
	if p.take(kMargin) {
		s.Margin = p.value("a distance")
	}
	s.At = p.since(start)
	return s
}
