package prompt

import (
	"slices"
	"strings"
	"sync/atomic"
	"unicode/utf8"

	"github.com/clipperhouse/displaywidth"
)

// adapter gives the library what it may insert behind the cursor. The library
// only appends, and it divides by the number of candidates that fit beside each
// other: none may be wider than the terminal, also if that is made narrower.
type adapter struct {
	c        *completer
	gathered string // the lines of the statement before this one
	size     func() (width, height int)
	need     atomic.Int64 // width that the candidates on the screen need
}

const (
	// margin is what the library adds to the widest candidate.
	margin = 2
	// leastPiece is the least that a candidate is cut to.
	leastPiece = 4
	// leastWidth is what the library is told of a narrower terminal: it never
	// ends where the prompt alone takes a line.
	leastWidth = 12
)

// width is the terminal's, and never less than what is shown was cut to.
func (a *adapter) width() int {
	w, _ := a.size()
	return max(w, int(a.need.Load()), leastWidth)
}

// Do implements readline.AutoCompleter. A panic here would be one in the
// library's goroutine, with the terminal in raw mode.
func (a *adapter) Do(line []rune, pos int) (rest [][]rune, length int) {
	defer func() {
		if recover() != nil {
			rest, length = nil, 0
		}
	}()
	head := a.gathered + string(line[:pos])
	typed, list := a.c.complete(head+string(line[pos:]), len(head))
	length = utf8.RuneCountInString(typed)
	if displaywidth.String(typed) != length {
		length = 0 // it counts characters as columns
	}
	width, height := a.size()
	limit := width - length - margin
	if limit < leastPiece {
		length, limit = 0, width-margin
	}
	if limit < leastPiece {
		return nil, 0
	}
	rests := make([]string, len(list))
	for i, text := range list {
		rests[i] = cutTo(strings.TrimPrefix(text, typed), limit)
	}
	rests, widest := fitting(rests, length, width, height)
	a.need.Store(int64(widest + length + margin))
	for _, r := range rests {
		rest = append(rest, []rune(r))
	}
	return rest, length
}

// fitting drops what would scroll the line away; the first and the last of the
// alphabet stay, so that what all have in common stays the same.
func fitting(rests []string, length, width, height int) (kept []string, widest int) {
	for _, r := range rests {
		widest = max(widest, displaywidth.String(r))
	}
	columns := max(1, (width-1)/(widest+length+1))
	most := max(2, columns*max(1, height-4))
	if len(rests) <= most {
		return rests, widest
	}
	least, last := slices.Min(rests), slices.Max(rests)
	kept = append(kept, rests[:most-2]...)
	for _, r := range []string{least, last} {
		if !slices.Contains(kept, r) {
			kept = append(kept, r)
		}
	}
	return kept, widest
}

// cutTo shortens a text to a width; what is left can be completed again.
func cutTo(text string, width int) string {
	at, used := 0, 0
	for at < len(text) {
		_, size := utf8.DecodeRuneInString(text[at:])
		if used += max(1, displaywidth.String(text[at:at+size])); used > width {
			break
		}
		at += size
	}
	return text[:at]
}
