package report

import (
	"bytes"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"strings"
)

// drawn are the elements of a still picture.
var drawn = map[string]bool{"svg": true, "g": true, "path": true, "line": true, "polyline": true, "polygon": true, "rect": true,
	"circle": true, "ellipse": true, "text": true, "tspan": true, "title": true, "desc": true, "defs": true, "clipPath": true,
	"pattern": true, "linearGradient": true, "stop": true, "use": true, "style": true, "marker": true, "symbol": true, "mask": true, "image": true}

const svgSpace = "http://www.w3.org/2000/svg"

// inline is a picture to stand in the page: without what would run or reach out of it,
// and with names of its own, since all pictures of a page share theirs.
func (r *Report) inline(svg []byte, caption string) (string, error) {
	r.pictures++
	w := &inliner{prefix: fmt.Sprintf("p%d-", r.pictures), caption: clean(caption)}
	d := xml.NewDecoder(bytes.NewReader(svg))
	for {
		token, err := d.Token()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			return "", fmt.Errorf("a picture cannot be read back: %w", err)
		}
		if err := w.put(token); err != nil {
			return "", err
		}
	}
	if !w.rooted {
		return "", errors.New("a picture has no drawing in it")
	}
	return w.out.String(), nil
}

type inliner struct {
	out             strings.Builder
	prefix, caption string
	rooted          bool
	inStyle         bool
}

func (w *inliner) put(token xml.Token) error {
	switch t := token.(type) {
	case xml.StartElement:
		return w.start(t)
	case xml.EndElement:
		w.inStyle = false
		w.out.WriteString("</" + t.Name.Local + ">")
	case xml.CharData:
		text := string(t)
		if !w.rooted {
			return nil
		}
		if w.inStyle && (strings.ContainsAny(text, "@<&") || strings.Contains(text, "url(")) {
			return errors.New("the style of a picture reaches out of it")
		}
		return xml.EscapeText(&w.out, []byte(lines(text)))
	}
	return nil // comments, the XML declaration
}

func (w *inliner) start(t xml.StartElement) error {
	name := t.Name.Local
	if !drawn[name] || t.Name.Space != svgSpace && t.Name.Space != "" {
		return fmt.Errorf("a picture holds a <%s>, which is no drawing", name)
	}
	w.inStyle = name == "style"
	w.out.WriteString("<" + name)
	if !w.rooted {
		w.out.WriteString(` xmlns="` + svgSpace + `" role="img" aria-label="`)
		if err := xml.EscapeText(&w.out, []byte(w.caption)); err != nil {
			return err
		}
		w.out.WriteString(`"`)
		w.rooted = true
	}
	for _, a := range t.Attr {
		value, keep, err := w.attribute(a)
		if err != nil {
			return err
		}
		if !keep {
			continue
		}
		w.out.WriteString(" " + a.Name.Local + `="`)
		if err := xml.EscapeText(&w.out, []byte(clean(value))); err != nil {
			return err
		}
		w.out.WriteString(`"`)
	}
	w.out.WriteString(">")
	return nil
}

// attribute is the value that an attribute has in the page, if it stays.
func (w *inliner) attribute(a xml.Attr) (value string, keep bool, err error) {
	name := a.Name.Local
	switch {
	case name == "xmlns" || a.Name.Space == "xmlns" || a.Name.Space == "xml" || name == "role" || name == "aria-label" || name == "aria-labelledby":
		return "", false, nil
	case strings.HasPrefix(strings.ToLower(name), "on"):
		return "", false, fmt.Errorf("a picture holds %s, which would run", name)
	case name == "id":
		return w.prefix + a.Value, true, nil
	case name == "href":
		if id, own := strings.CutPrefix(a.Value, "#"); own {
			return "#" + w.prefix + id, true, nil
		}
		if strings.HasPrefix(a.Value, "data:image/png;base64,") {
			return a.Value, true, nil
		}
		return "", false, errors.New("a picture reaches out of itself")
	}
	if rest := strings.ReplaceAll(a.Value, "url(#", ""); strings.Contains(rest, "url(") {
		return "", false, errors.New("a picture reaches out of itself")
	}
	return strings.ReplaceAll(a.Value, "url(#", "url(#"+w.prefix), true, nil
}
