package xlsx

import (
	"archive/zip"
	"bytes"
	"encoding/xml"
	"errors"
	"io"
	"path"
	"strconv"
	"strings"

	"nearcell/catalog/reader"
)

// MaxPart is how much one file of the archive may unpack to.
const MaxPart = 4 << 30

// book is an opened workbook.
type book struct {
	files   map[string]*zip.File
	sheets  []sheetInfo
	from04  bool     // days count from 1904
	texts   []string // shared
	dates   []bool   // of each style: shown as a date or a time
	maxPart int64
}

type sheetInfo struct {
	name   string
	hidden bool
	part   string // its file in the archive
}

var (
	errTooLarge = errors.New("more bytes than the limit")
	errNotThere = errors.New("not in the archive")
)

// open reads all of a workbook but its cells.
func open(src *reader.Source) (*book, *reader.Fault) {
	if len(src.Data) == 0 {
		return nil, &reader.Fault{Kind: reader.EmptyFile}
	}
	if bytes.HasPrefix(src.Data, []byte{0xD0, 0xCF, 0x11, 0xE0}) {
		return nil, &reader.Fault{Kind: reader.NotSupported, Text: "xls", Detail: "XLSX"}
	}
	archive, err := zip.NewReader(bytes.NewReader(src.Data), int64(len(src.Data)))
	if err != nil {
		if bytes.HasPrefix(src.Data, []byte("PK\x03\x04")) {
			return nil, &reader.Fault{Kind: reader.Damaged, Text: "archive", Detail: err.Error()}
		}
		return nil, &reader.Fault{Kind: reader.NotTheFormat, Detail: "XLSX"}
	}
	b := &book{files: map[string]*zip.File{}, maxPart: MaxPart}
	for _, f := range archive.File {
		b.files[strings.ToLower(strings.TrimPrefix(strings.ReplaceAll(f.Name, `\`, "/"), "/"))] = f
	}
	return b, b.readParts()
}

// readParts reads the list of sheets, the shared texts and the styles.
func (b *book) readParts() *reader.Fault {
	main := "xl/workbook.xml"
	links, _ := b.links("", "") // some programs write none
	for _, l := range links {
		if strings.HasSuffix(l.Type, "/officeDocument") {
			main = l.Target
		}
	}
	if b.file(main) == nil {
		if b.file("xl/workbook.bin") != nil {
			return &reader.Fault{Kind: reader.NotSupported, Text: "xlsb", Detail: "XLSX"}
		}
		return &reader.Fault{Kind: reader.NotTheFormat, Detail: "XLSX"}
	}
	var w struct {
		Pr struct {
			Date1904 string `xml:"date1904,attr"`
		} `xml:"workbookPr"`
		Sheets []struct {
			Name  string     `xml:"name,attr"`
			State string     `xml:"state,attr"`
			Attrs []xml.Attr `xml:",any,attr"`
		} `xml:"sheets>sheet"`
	}
	if bad := b.decode(main, &w); bad != nil {
		return bad
	}
	b.from04 = w.Pr.Date1904 == "1" || w.Pr.Date1904 == "true"
	parts := map[string]string{}
	shared, styles := "xl/sharedstrings.xml", "xl/styles.xml"
	links, bad := b.links(path.Dir(main), path.Base(main))
	if bad != nil {
		return bad
	}
	for _, l := range links {
		parts[l.ID] = l.Target
		switch {
		case strings.HasSuffix(l.Type, "/sharedStrings"):
			if shared = l.Target; b.file(shared) == nil {
				return partFault(shared, errNotThere)
			}
		case strings.HasSuffix(l.Type, "/styles"):
			if styles = l.Target; b.file(styles) == nil { // dates would be read as numbers
				return partFault(styles, errNotThere)
			}
		case strings.HasSuffix(l.Type, "/chartsheet"), strings.HasSuffix(l.Type, "/dialogsheet"):
			delete(parts, l.ID)
		}
	}
	for _, s := range w.Sheets {
		for _, a := range s.Attrs {
			if part, ok := parts[a.Value]; ok && a.Name.Local == "id" {
				b.sheets = append(b.sheets, sheetInfo{name: s.Name, hidden: s.State == "hidden" || s.State == "veryHidden", part: part})
			}
		}
	}
	if bad := b.readTexts(shared); bad != nil {
		return bad
	}
	return b.readStyles(styles)
}

type link struct {
	ID     string `xml:"Id,attr"`
	Type   string `xml:"Type,attr"`
	Target string `xml:"Target,attr"`
}

// links are the relationships of a part, with whole names as targets.
func (b *book) links(folder, base string) ([]link, *reader.Fault) {
	name := path.Join(folder, "_rels", base+".rels")
	var r struct {
		List []link `xml:"Relationship"`
	}
	if b.file(name) == nil {
		return nil, partFault(name, errNotThere)
	}
	if bad := b.decode(name, &r); bad != nil {
		return nil, bad
	}
	for i := range r.List {
		t := &r.List[i].Target
		if strings.HasPrefix(*t, "/") {
			*t = path.Clean((*t)[1:])
		} else {
			*t = path.Join(folder, *t)
		}
	}
	return r.List, nil
}

func (b *book) file(name string) *zip.File { return b.files[strings.ToLower(name)] }

// open starts to read a part.
func (b *book) open(name string) (io.ReadCloser, error) {
	f := b.file(name)
	if f == nil {
		return nil, errNotThere
	}
	in, err := f.Open()
	if err != nil {
		return nil, err
	}
	return &limited{in: in, left: b.maxPart}, nil
}

// limited refuses to unpack more than it may.
type limited struct {
	in   io.ReadCloser
	left int64
}

func (l *limited) Read(p []byte) (int, error) {
	if l.left <= 0 {
		return 0, errTooLarge
	}
	n, err := l.in.Read(p)
	l.left -= int64(n)
	return n, err
}

func (l *limited) Close() error { return l.in.Close() }

// decode reads a small part as a whole.
func (b *book) decode(name string, into any) *reader.Fault {
	in, err := b.open(name)
	if err != nil {
		return partFault(name, err)
	}
	defer in.Close()
	if err := xml.NewDecoder(in).Decode(into); err != nil {
		return partFault(name, err)
	}
	return nil
}

func partFault(name string, err error) *reader.Fault {
	x := &reader.Fault{Kind: reader.Damaged, Text: name, Detail: err.Error()}
	switch {
	case errors.Is(err, errTooLarge):
		x.Kind, x.Expected = reader.TooLarge, MaxPart
	case errors.Is(err, io.ErrUnexpectedEOF):
		x.Kind = reader.CutShort
	}
	return x
}

// readTexts reads the shared texts; a workbook without any has no such part.
func (b *book) readTexts(name string) *reader.Fault {
	if b.file(name) == nil {
		return nil
	}
	in, err := b.open(name)
	if err != nil {
		return partFault(name, err)
	}
	defer in.Close()
	d := xml.NewDecoder(in)
	for {
		token, err := d.Token()
		if err == io.EOF {
			return nil
		}
		if err != nil {
			return partFault(name, err)
		}
		if start, ok := token.(xml.StartElement); ok && start.Name.Local == "si" {
			text, err := richText(d)
			if err != nil {
				return partFault(name, err)
			}
			b.texts = append(b.texts, text)
		}
	}
}

// richText joins the runs of a text up to its end; what tells the pronunciation of
// East Asian writing is no part of it.
func richText(d *xml.Decoder) (string, error) {
	var text strings.Builder
	depth, inText, skip := 1, false, 0
	for depth > 0 {
		token, err := d.Token()
		if err != nil {
			return "", err
		}
		switch t := token.(type) {
		case xml.StartElement:
			depth++
			if t.Name.Local == "rPh" {
				skip++
			}
			inText = t.Name.Local == "t" && skip == 0
		case xml.EndElement:
			depth--
			inText = false
			if t.Name.Local == "rPh" {
				skip--
			}
		case xml.CharData:
			if inText {
				text.Write(t)
			}
		}
	}
	return unescape(text.String()), nil
}

// unescape reads _x000D_ and the like, as texts hold characters that XML cannot.
func unescape(s string) string {
	if !strings.Contains(s, "_x") {
		return s
	}
	var out strings.Builder
	for i := 0; i < len(s); {
		if strings.HasPrefix(s[i:], "_x") && len(s) >= i+7 && s[i+6] == '_' {
			if n, err := strconv.ParseUint(s[i+2:i+6], 16, 16); err == nil {
				out.WriteRune(rune(n))
				i += 7
				continue
			}
		}
		out.WriteByte(s[i])
		i++
	}
	return out.String()
}

// readStyles finds the styles that show dates.
func (b *book) readStyles(name string) *reader.Fault {
	if b.file(name) == nil {
		return nil
	}
	var s struct {
		Formats []struct {
			ID   int    `xml:"numFmtId,attr"`
			Code string `xml:"formatCode,attr"`
		} `xml:"numFmts>numFmt"`
		Cells []struct {
			Format int `xml:"numFmtId,attr"`
		} `xml:"cellXfs>xf"`
	}
	if bad := b.decode(name, &s); bad != nil {
		return bad
	}
	shown := map[int]bool{}
	for _, id := range []int{14, 15, 16, 17, 18, 19, 20, 21, 22, 45, 46, 47, 27, 28, 29, 30, 31, 32, 33, 34, 35, 36, 50, 51, 52, 53, 54, 55, 56, 57, 58} {
		shown[id] = id != 46 // 46 is a span of time, [h]:mm:ss
	}
	for _, f := range s.Formats {
		shown[f.ID] = showsDate(f.Code)
	}
	for _, c := range s.Cells {
		b.dates = append(b.dates, shown[c.Format])
	}
	return nil
}

// showsDate reports whether a number format shows a date or a time of day: one of the
// letters y, m, d, h, s outside of quoted texts and brackets. Spans such as [h]:mm are numbers.
func showsDate(code string) bool {
	code, _, _ = strings.Cut(code, ";")
	date := false
	for i := 0; i < len(code); i++ {
		switch c := code[i] | 0x20; {
		case code[i] == '"':
			for i++; i < len(code) && code[i] != '"'; i++ {
			}
		case code[i] == '\\' || code[i] == '_' || code[i] == '*':
			i++
		case code[i] == '[':
			end := strings.IndexByte(code[i:], ']')
			if end < 0 {
				return date
			}
			if in := strings.ToLower(code[i+1 : i+end]); strings.Trim(in, "h") == "" || strings.Trim(in, "m") == "" || strings.Trim(in, "s") == "" {
				return false
			}
			i += end
		case strings.HasPrefix(strings.ToLower(code[i:]), "general"):
			return false
		case c == 'y' || c == 'm' || c == 'd' || c == 'h' || c == 's':
			date = true
		case code[i] == '0' && !date, code[i] == '#':
			return false
		}
	}
	return date
}
