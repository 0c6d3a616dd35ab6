package draw

import (
	"bytes"
	"fmt"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"
)

// fontFamily is the font that texts are measured in, and others of its widths.
const fontFamily = "Liberation Sans, Arial, Helvetica, sans-serif"

// SVG is the picture as a file of its own, which can also stand within a page.
func (s *Scene) SVG() []byte {
	var b bytes.Buffer
	fmt.Fprintf(&b, `<svg xmlns="http://www.w3.org/2000/svg" role="img" width="%smm" height="%smm" viewBox="0 0 %s %s" font-family="%s">`+"\n",
		short(s.Width/perMillimetre), short(s.Height/perMillimetre), short(s.Width), short(s.Height), fontFamily)
	fmt.Fprintf(&b, "<title>%s</title>\n<desc>%s</desc>\n", escape(s.Title), escape(s.Description))
	for i := range s.Shapes {
		if s.Shapes[i].Text != "" {
			writeText(&b, &s.Shapes[i])
		} else if len(s.Shapes[i].Paths) > 0 {
			writePath(&b, &s.Shapes[i])
		}
	}
	b.WriteString("</svg>\n")
	return b.Bytes()
}

func writePath(b *bytes.Buffer, x *Shape) {
	b.WriteString(`<path`)
	writeFacts(b, x)
	b.WriteString(` d="`)
	for _, path := range x.Paths {
		for i, p := range path {
			b.WriteByte("ML"[min(i, 1)])
			b.WriteString(short(p.X) + " " + short(p.Y))
		}
		if x.Closed {
			b.WriteByte('Z')
		}
	}
	fmt.Fprintf(b, `" fill="%s"`, x.Fill)
	if !x.Stroke.none() {
		fmt.Fprintf(b, ` stroke="%s" stroke-width="%s" stroke-linejoin="round"`, x.Stroke, short(x.Line))
		if len(x.Dash) > 0 {
			var dashes []string
			for _, d := range x.Dash {
				dashes = append(dashes, short(d))
			}
			fmt.Fprintf(b, ` stroke-dasharray="%s"`, strings.Join(dashes, " "))
		}
	}
	if x.Tip == "" {
		b.WriteString("/>\n")
		return
	}
	fmt.Fprintf(b, "><title>%s</title></path>\n", escape(x.Tip))
}

func writeText(b *bytes.Buffer, x *Shape) {
	b.WriteString(`<text`)
	writeFacts(b, x)
	fmt.Fprintf(b, ` x="%s" y="%s" font-size="%s" fill="%s"`, short(x.At.X), short(x.At.Y), short(x.Size), x.Fill)
	if x.Anchor != Start {
		fmt.Fprintf(b, ` text-anchor="%s"`, [...]string{"start", "middle", "end"}[x.Anchor])
	}
	if x.Bold {
		b.WriteString(` font-weight="bold"`)
	}
	if x.Upward {
		fmt.Fprintf(b, ` transform="rotate(-90 %s %s)"`, short(x.At.X), short(x.At.Y))
	}
	if x.Halo {
		fmt.Fprintf(b, ` stroke="%s" stroke-width="2.5" stroke-linejoin="round" paint-order="stroke"`, paper)
	}
	fmt.Fprintf(b, ">%s</text>\n", escape(x.Text))
}

func writeFacts(b *bytes.Buffer, x *Shape) {
	if x.Class != "" {
		fmt.Fprintf(b, ` class="%s"`, escape(x.Class))
	}
	for _, d := range x.Data {
		fmt.Fprintf(b, ` data-%s="%s"`, d.Name, escape(d.Value))
	}
}

// short writes a coordinate to a hundredth, without zeros at its end.
func short(f float64) string {
	f = math.Round(f*100) / 100
	if f == 0 {
		f = 0 // not -0
		return "0"
	}
	return strconv.FormatFloat(f, 'f', -1, 64)
}

// escape makes a text safe in XML, as content and as an attribute; characters that XML
// cannot have become the sign for an unknown one.
func escape(text string) string {
	var b strings.Builder
	for _, r := range text {
		switch {
		case r == '&':
			b.WriteString("&amp;")
		case r == '<':
			b.WriteString("&lt;")
		case r == '>':
			b.WriteString("&gt;")
		case r == '"':
			b.WriteString("&quot;")
		case r == '\t', r == '\n', r == '\r':
			b.WriteByte(' ')
		case r < 0x20, r == 0xfffe, r == 0xffff:
			b.WriteRune(utf8.RuneError)
		default:
			b.WriteRune(r)
		}
	}
	return b.String()
}
