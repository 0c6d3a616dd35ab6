package draw

import (
	"strings"
	"sync"

	"codeberg.org/go-fonts/liberation/liberationsansbold"
	"codeberg.org/go-fonts/liberation/liberationsansregular"
	"golang.org/x/image/font/opentype"
	"gonum.org/v1/plot/font"
)

// Fonts of texts, read when the first text is measured.
var (
	plainFont = sync.OnceValue(func() font.Face { return face(liberationsansregular.TTF) })
	boldFont  = sync.OnceValue(func() font.Face { return face(liberationsansbold.TTF) })
)

// face reads a font that is part of the program.
func face(data []byte) font.Face {
	f, err := opentype.Parse(data)
	if err != nil {
		panic("draw: a font of the program cannot be read: " + err.Error())
	}
	return font.Face{Font: font.Font{Typeface: "Liberation", Variant: "Sans"}, Face: f}
}

// sized is the font in a size of the page.
func sized(size float64, bold bool) font.Face {
	f := plainFont()
	if bold {
		f = boldFont()
	}
	f.Font.Size = font.Length(size)
	return f
}

// width is how wide a text is on the page.
func width(text string, size float64, bold bool) float64 {
	f := sized(size, bold)
	return float64(f.Width(text))
}

// broken is a text in lines no wider than width, broken at blanks; a word that is
// wider is cut, so that every text lies on the page.
func broken(text string, most, size float64, bold bool) []string {
	var lines []string
	line := ""
	for _, word := range strings.Fields(text) {
		for width(word, size, bold) > most {
			if line != "" {
				lines, line = append(lines, line), ""
			}
			head := cut(word, most, size, bold)
			lines, word = append(lines, head), word[len(head):]
		}
		switch {
		case line == "":
			line = word
		case width(line+" "+word, size, bold) <= most:
			line += " " + word
		default:
			lines, line = append(lines, line), word
		}
	}
	if line != "" {
		lines = append(lines, line)
	}
	return lines
}

// cut is the longest beginning of a word that is no wider, at least one character.
func cut(word string, most, size float64, bold bool) string {
	end := 0
	for i := range word {
		if i > 0 && width(word[:i], size, bold) > most {
			break
		}
		if i > 0 {
			end = i
		}
	}
	if end == 0 {
		for i := range word {
			if i > 0 {
				return word[:i]
			}
		}
		return word
	}
	return word[:end]
}

// fitted is a text cut to a width, with dots where something is missing.
func fitted(text string, most, size float64, bold bool) string {
	if width(text, size, bold) <= most {
		return text
	}
	return cut(text, most-width("…", size, bold), size, bold) + "…"
}
