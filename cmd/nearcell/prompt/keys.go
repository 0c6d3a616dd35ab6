package prompt

import (
	"bytes"
	"io"
	"unicode"

	"github.com/chzyer/readline"
)

// keyDelete stands for the Delete key, which the library takes for Ctrl-D.
const keyDelete = '\uF003'

// sequences are what terminals send for keys that the library does not know, or
// takes for others, and what it is to read instead.
var sequences = []struct {
	sent string
	read string
}{
	{"\x1b[3~", string(keyDelete)},
	{"\x1b[1~", "\x01"}, {"\x1b[7~", "\x01"}, // Home
	{"\x1b[4~", "\x05"}, {"\x1b[8~", "\x05"}, // End
	{"\x1b[1;5C", "\x1bf"}, {"\x1b[1;5D", "\x1bb"}, // a word right, left
	{pasteBegins, ""}, {pasteEnds, ""},
}

// What a terminal sends around pasted text once it was asked to.
const (
	pasteBegins = "\x1b[200~"
	pasteEnds   = "\x1b[201~"
	askForPaste = "\x1b[?2004h"
	noMorePaste = "\x1b[?2004l"
)

// keys reads a terminal and mends what the library would misread. Pasted tabs
// become blanks, so that they do not ask for completion.
type keys struct {
	in      io.Reader
	held    []byte // the begin of a sequence that has not come whole
	ready   []byte
	pasting bool
}

// Read implements io.Reader.
func (k *keys) Read(p []byte) (int, error) {
	for len(k.ready) == 0 {
		raw := make([]byte, max(len(p), 64))
		n, err := k.in.Read(raw)
		k.translate(raw[:n])
		if err != nil {
			if len(k.ready) == 0 {
				return 0, err
			}
			break
		}
	}
	n := copy(p, k.ready)
	k.ready = k.ready[n:]
	return n, nil
}

// Close implements io.Closer; the terminal stays open.
func (k *keys) Close() error { return nil }

func (k *keys) translate(raw []byte) {
	raw = append(k.held, raw...)
	k.held = nil
	for len(raw) > 0 {
		if raw[0] == 0x1b {
			taken, partial := k.sequence(raw)
			if partial {
				k.held = bytes.Clone(raw)
				return
			}
			if taken > 0 {
				raw = raw[taken:]
				continue
			}
		}
		c := raw[0]
		if k.pasting && c == '\t' {
			c = ' '
		}
		k.ready = append(k.ready, c)
		raw = raw[1:]
	}
}

// sequence takes a sequence from the begin of raw; partial tells that more may come.
func (k *keys) sequence(raw []byte) (taken int, partial bool) {
	for _, s := range sequences {
		switch {
		case bytes.HasPrefix(raw, []byte(s.sent)):
			k.ready = append(k.ready, s.read...)
			switch s.sent {
			case pasteBegins:
				k.pasting = true
			case pasteEnds:
				k.pasting = false
			}
			return len(s.sent), false
		case len(raw) > 1 && bytes.HasPrefix([]byte(s.sent), raw):
			partial = true
		}
	}
	return 0, partial
}

// edits are the control keys that the library has a meaning for; it would put
// the others into the line.
var edits = map[rune]bool{
	readline.CharLineStart: true, readline.CharBackward: true, readline.CharInterrupt: true, readline.CharDelete: true,
	readline.CharLineEnd: true, readline.CharForward: true, readline.CharBell: true, readline.CharCtrlH: true,
	readline.CharTab: true, readline.CharCtrlJ: true, readline.CharKill: true, readline.CharCtrlL: true,
	readline.CharEnter: true, readline.CharNext: true, readline.CharPrev: true, readline.CharBckSearch: true,
	readline.CharFwdSearch: true, readline.CharTranspose: true, readline.CharCtrlU: true, readline.CharCtrlW: true,
	readline.CharCtrlY: true, readline.CharBackspace: true,
	readline.MetaBackward: true, readline.MetaForward: true, readline.MetaDelete: true, readline.MetaBackspace: true,
}

// filter says what a key does in a line of so many characters; false drops it.
func filter(r rune, length int, suspend func()) (rune, bool) {
	switch {
	case r == keyDelete:
		return readline.CharDelete, length > 0
	case r == readline.CharTranspose: // it dies of a line with one character
		return r, length > 1
	case r == readline.CharCtrlZ:
		suspend()
		return r, false
	case r == 0, edits[r]: // 0 is the end of the input
		return r, true
	case r < 0, unicode.IsControl(r), r == unicode.ReplacementChar:
		return r, false
	}
	return r, true
}
