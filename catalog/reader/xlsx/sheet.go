package xlsx

import (
	"context"
	"encoding/xml"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
	"time"

	"nearcell/catalog/reader"
)

// The sheet's size by the format, and how much its texts may take.
const (
	maxRows    = 1 << 20
	maxColumns = 1 << 14
)

// cell is one with a value.
type cell struct {
	column int // from 0
	text   string
	quoted bool // a text, not a number
}

// line is a row with at least one value.
type line struct {
	row   int // from 1
	cells []cell
}

// sheet is what was read of one.
type sheet struct {
	name  string
	lines []line
	used  []bool // columns with a value

	errors, formulas, merged         int
	errorAt, errorText, formulaAt, m string // the first of each
}

// choose finds the sheet that is asked for.
func (b *book) choose(want string) (int, *reader.Fault) {
	var names []string
	first := -1
	for i, s := range b.sheets {
		if s.name == want && want != "" {
			return i, nil
		}
		if !s.hidden && first < 0 {
			first = i
		}
		names = append(names, s.name)
	}
	for i, s := range b.sheets {
		if want != "" && strings.EqualFold(s.name, want) {
			return i, nil
		}
	}
	if n, err := strconv.Atoi(want); err == nil && n >= 1 && n <= len(b.sheets) {
		return n - 1, nil
	}
	if want != "" || len(b.sheets) == 0 {
		return 0, &reader.Fault{Kind: reader.NoSheet, Text: want, Detail: strings.Join(names, ", ")}
	}
	return max(first, 0), nil
}

// read reads the cells of sheet i.
func (b *book) read(ctx context.Context, i int, mark rune) (*sheet, *reader.Fault, error) {
	info := b.sheets[i]
	s := &sheet{name: info.name}
	in, err := b.open(info.part)
	if err != nil {
		return nil, partFault(info.part, err), nil
	}
	defer in.Close()
	d := xml.NewDecoder(in)
	row, column := 0, 0
	for n := 0; ; n++ {
		if n&1023 == 0 && ctx.Err() != nil {
			return nil, nil, ctx.Err()
		}
		token, err := d.Token()
		if err == io.EOF {
			break
		}
		if err != nil {
			return nil, partFault(info.part, err), nil
		}
		start, ok := token.(xml.StartElement)
		if !ok {
			continue
		}
		switch start.Name.Local {
		case "row":
			row, column = row+1, 0
			if r := attr(start, "r"); r != "" {
				next, err := strconv.Atoi(r)
				if err != nil || next < row || next > maxRows {
					return nil, &reader.Fault{Kind: reader.Damaged, Text: info.part, Detail: "row " + strconv.Quote(r)}, nil
				}
				row = next
			}
		case "c":
			bad := s.cell(b, d, start, row, &column, mark)
			if bad != nil {
				if bad.Text == "" {
					bad.Text = info.part
				}
				return nil, bad, nil
			}
		case "mergeCell":
			s.merge(attr(start, "ref"))
		}
	}
	if len(s.lines) == 0 {
		return nil, &reader.Fault{Kind: reader.NoRows, Text: info.name}, nil
	}
	return s, nil, nil
}

func attr(e xml.StartElement, name string) string {
	for _, a := range e.Attr {
		if a.Name.Local == name && a.Name.Space == "" {
			return a.Value
		}
	}
	return ""
}

// cell reads one cell; next is the column after the one before it.
func (s *sheet) cell(b *book, d *xml.Decoder, start xml.StartElement, row int, next *int, mark rune) *reader.Fault {
	at := *next
	if r := attr(start, "r"); r != "" {
		c, rr, ok := place(r)
		if !ok || rr != row || c < at {
			return &reader.Fault{Kind: reader.Damaged, Detail: "cell " + strconv.Quote(r)}
		}
		at = c
	}
	if at >= maxColumns || row < 1 {
		return &reader.Fault{Kind: reader.Damaged, Detail: "cell"}
	}
	*next = at + 1
	kind, style := attr(start, "t"), 0
	if x := attr(start, "s"); x != "" {
		style, _ = strconv.Atoi(x)
	}
	value, formula, has, err := cellValue(d)
	if err != nil {
		return partFault("", err)
	}
	name := Cell(at, row)
	if !has {
		if formula {
			s.formulas++
			keep(&s.formulaAt, name)
		}
		return nil
	}
	c := cell{column: at, text: value}
	switch kind {
	case "s":
		n, err := strconv.Atoi(strings.TrimSpace(value))
		if err != nil || n < 0 || n >= len(b.texts) {
			return &reader.Fault{Kind: reader.Damaged, Detail: "shared text " + strconv.Quote(value), Cell: s.name + "!" + name}
		}
		c.text, c.quoted = b.texts[n], true
	case "inlineStr", "str":
		c.text, c.quoted = unescape(value), true
	case "b":
		c.text = "false"
		if strings.TrimSpace(value) == "1" || value == "true" {
			c.text = "true"
		}
	case "e":
		s.errors++
		if s.errorAt == "" {
			s.errorAt, s.errorText = name, value
		}
		return nil
	case "d":
		c.text = strings.TrimSpace(value)
	default:
		c.text = b.number(strings.TrimSpace(value), style >= 0 && style < len(b.dates) && b.dates[style], mark)
	}
	if c.text == "" {
		return nil
	}
	s.put(row, c)
	return nil
}

func keep(first *string, text string) {
	if *first == "" {
		*first = text
	}
}

func (s *sheet) put(row int, c cell) {
	if n := len(s.lines); n == 0 || s.lines[n-1].row != row {
		s.lines = append(s.lines, line{row: row})
	}
	l := &s.lines[len(s.lines)-1]
	l.cells = append(l.cells, c)
	for len(s.used) <= c.column {
		s.used = append(s.used, false)
	}
	s.used[c.column] = true
}

// cellValue reads up to the end of a cell.
func cellValue(d *xml.Decoder) (value string, formula, has bool, err error) {
	for {
		token, err := d.Token()
		if err != nil {
			return "", false, false, err
		}
		switch t := token.(type) {
		case xml.EndElement:
			return value, formula, has, nil
		case xml.StartElement:
			switch t.Name.Local {
			case "v", "is":
				if value, err = richOrPlain(d, t.Name.Local == "is"); err != nil {
					return "", false, false, err
				}
				has = value != "" || t.Name.Local == "is"
			default:
				formula = formula || t.Name.Local == "f"
				if err := d.Skip(); err != nil {
					return "", false, false, err
				}
			}
		}
	}
}

func richOrPlain(d *xml.Decoder, rich bool) (string, error) {
	if rich {
		return richText(d)
	}
	var text strings.Builder
	for {
		token, err := d.Token()
		if err != nil {
			return "", err
		}
		switch t := token.(type) {
		case xml.CharData:
			text.Write(t)
		case xml.StartElement:
			if err := d.Skip(); err != nil {
				return "", err
			}
		case xml.EndElement:
			return text.String(), nil
		}
	}
}

// number is a number as its decimals, or the time that it is shown as.
func (b *book) number(text string, date bool, mark rune) string {
	x, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return text // a fault of the column, if it is one of numbers
	}
	if date {
		if t, ok := b.dateOf(x); ok {
			return t
		}
	}
	// Programs write 17 digits; the shortest decimal that reads as the same float64
	// is what was typed.
	plain := strconv.FormatFloat(x, 'g', -1, 64)
	if a := math.Abs(x); a >= 1e-6 && a < 1e15 || a == 0 {
		plain = strconv.FormatFloat(x, 'f', -1, 64)
	}
	if mark != '.' {
		plain = strings.Replace(plain, ".", string(mark), 1)
	}
	return plain
}

const msOfDay = 86_400_000

// dateOf is a count of days as a time stamp, or as a time of day where it is below 1.
func (b *book) dateOf(x float64) (string, bool) {
	if !(x >= 0 && x < 2_958_466) { // up to the year 9999
		return "", false
	}
	whole := math.Floor(x)
	ms := int64(math.Round((x - whole) * msOfDay))
	days := int64(whole)
	if days == 0 && !b.from04 && ms < msOfDay {
		return clock(ms), true
	}
	if ms == msOfDay {
		days, ms = days+1, 0
	}
	base := time.Date(1904, 1, 1, 0, 0, 0, 0, time.UTC)
	if !b.from04 {
		base = time.Date(1899, 12, 30, 0, 0, 0, 0, time.UTC)
		switch {
		case days == 60: // a day that never was
			return "", false
		case days < 60:
			days++
		}
	}
	day := base.AddDate(0, 0, int(days)).Format("2006-01-02")
	if ms == 0 {
		return day + " 00:00:00", true
	}
	return day + " " + clock(ms), true
}

func clock(ms int64) string {
	text := fmt.Sprintf("%02d:%02d:%02d", ms/3_600_000, ms/60_000%60, ms/1000%60)
	if ms%1000 != 0 {
		text += fmt.Sprintf(".%03d", ms%1000)
	}
	return text
}

// place reads B7 as column 1 and row 7.
func place(r string) (column, row int, ok bool) {
	i := 0
	for ; i < len(r) && i < 4 && r[i]|0x20 >= 'a' && r[i]|0x20 <= 'z'; i++ {
		column = column*26 + int(r[i]|0x20-'a') + 1
	}
	row, err := strconv.Atoi(r[i:])
	return column - 1, row, err == nil && column > 0 && row > 0
}

// Cell is the name of a cell by its column, from 0, and its row, from 1.
func Cell(column, row int) string {
	name := ""
	for c := column + 1; c > 0; c = (c - 1) / 26 {
		name = string(rune('A'+(c-1)%26)) + name
	}
	return name + strconv.Itoa(row)
}

// merge counts the cells that a merged range covers beside its first.
func (s *sheet) merge(ref string) {
	from, to, ok := strings.Cut(ref, ":")
	if !ok {
		return
	}
	c1, r1, ok1 := place(from)
	c2, r2, ok2 := place(to)
	if !ok1 || !ok2 || c2 < c1 || r2 < r1 || r2 > maxRows || c2 >= maxColumns {
		return
	}
	s.merged += (c2-c1+1)*(r2-r1+1) - 1
	keep(&s.m, ref)
}
