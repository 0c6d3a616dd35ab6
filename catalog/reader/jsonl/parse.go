package jsonl

import (
	"bytes"
	"encoding/json"
	"unicode/utf8"

	"nearcell/catalog/reader"
)

// kind is what a value is.
type kind uint8

const (
	null kind = iota
	boolean
	number
	text
)

// value is one of an object, its key written whole.
type value struct {
	key  int
	kind kind
	raw  []byte // of numbers and of truth values; of texts what they say
	at   int    // its first byte in the file
}

const maxDepth = 64

// parser reads the objects of a file.
type parser struct {
	src  []byte
	pos  int
	list bool // the file is one list
	some bool // an object has been read

	keys   map[string]int
	names  []string
	values []value // of the object that was read
	seen   []int   // of each key: the object that had it last
	object int
	path   []byte
}

func newParser(src []byte) *parser {
	p := &parser{src: bytes.TrimPrefix(src, []byte("\xEF\xBB\xBF")), keys: map[string]int{}}
	p.space()
	if p.pos < len(p.src) && p.src[p.pos] == '[' {
		p.list = true
		p.pos++
	}
	return p
}

// next reads an object; more is false behind the last. A fault has its place in at, which
// mend moves on from.
func (p *parser) next() (more bool, bad *fault) {
	p.space()
	if p.list {
		if p.peek() == ']' {
			p.pos++
			if p.space(); p.pos < len(p.src) {
				return false, p.fail(reader.NotJSON, p.pos, "the end")
			}
			return false, nil
		}
		if p.some {
			if p.peek() != ',' {
				return false, p.fail(reader.NotJSON, p.pos, "',' or ']'")
			}
			p.pos++
			p.space()
		}
	} else if p.pos >= len(p.src) {
		return false, nil
	}
	p.some = true
	p.object++
	p.values, p.path = p.values[:0], p.path[:0]
	if p.peek() != '{' {
		if p.pos >= len(p.src) {
			return false, p.fail(reader.NotJSON, p.pos, "an object")
		}
		return true, p.fail(reader.NotObject, p.pos, "an object")
	}
	return true, p.readObject(0)
}

// fault is one with the byte that it stands at.
type fault struct {
	reader.Fault
	at int
}

func (p *parser) fail(k reader.FaultKind, at int, want string) *fault {
	end := at
	for end < len(p.src) && end-at < 30 && p.src[end] != '\n' && p.src[end] != '\r' {
		end++
	}
	if k == reader.NotJSON && at >= len(p.src) {
		return &fault{reader.Fault{Kind: reader.CutShort, Text: "JSON", Detail: want}, len(p.src)}
	}
	return &fault{reader.Fault{Kind: k, Text: string(bytes.ToValidUTF8(p.src[at:end], []byte("?"))), Detail: want}, at}
}

// mend goes to the next line, behind an object at fault.
func (p *parser) mend(start int) bool {
	n := bytes.IndexByte(p.src[max(start, 0):], '\n')
	if p.list || n < 0 {
		return false
	}
	p.pos = start + n + 1
	return true
}

func (p *parser) space() {
	for p.pos < len(p.src) && (p.src[p.pos] == ' ' || p.src[p.pos] == '\t' || p.src[p.pos] == '\n' || p.src[p.pos] == '\r') {
		p.pos++
	}
}

// peek is the byte at the place, 0 at the end.
func (p *parser) peek() byte {
	if p.pos < len(p.src) {
		return p.src[p.pos]
	}
	return 0
}

// readObject reads an object whose brace stands here.
func (p *parser) readObject(depth int) *fault {
	start := p.pos
	if depth >= maxDepth {
		return p.fail(reader.NestedList, start, "")
	}
	p.pos++
	prefix := len(p.path)
	for first := true; ; first = false {
		p.space()
		if p.peek() == '}' && (first || depth < 0) {
			p.pos++
			if depth > 0 {
				return p.fail(reader.NestedList, start, "")
			}
			return nil
		}
		keyAt := p.pos
		if p.peek() != '"' {
			return p.fail(reader.NotJSON, p.pos, "a key in quotation marks")
		}
		key, bad := p.readText()
		if bad != nil {
			return bad
		}
		p.space()
		if p.peek() != ':' {
			return p.fail(reader.NotJSON, p.pos, "':'")
		}
		p.pos++
		p.space()
		if prefix > 0 {
			p.path = append(p.path, '.')
		}
		p.path = append(p.path, key...)
		if bad := p.readValue(keyAt, depth); bad != nil {
			if bad.FieldName == "" {
				bad.FieldName = string(p.path)
			}
			return bad
		}
		p.path = p.path[:prefix]
		p.space()
		switch p.peek() {
		case ',':
			p.pos++
			if p.space(); p.peek() == '}' {
				return p.fail(reader.NotJSON, p.pos, "a key in quotation marks")
			}
		case '}':
			p.pos++
			return nil
		default:
			return p.fail(reader.NotJSON, p.pos, "',' or '}'")
		}
	}
}

// readValue reads the value of the key in path.
func (p *parser) readValue(keyAt, depth int) *fault {
	at := p.pos
	v := value{at: at}
	switch c := p.peek(); {
	case c == '{':
		return p.readObject(depth + 1)
	case c == '[':
		return p.fail(reader.NestedList, at, "")
	case c == '"':
		t, bad := p.readText()
		if bad != nil {
			return bad
		}
		v.kind, v.raw = text, t
	case c == '-' || c >= '0' && c <= '9':
		n := numberLen(p.src[p.pos:])
		if n == 0 {
			return p.fail(reader.NotJSON, at, "a number")
		}
		v.kind, v.raw = number, p.src[at:at+n]
		p.pos += n
	case bytes.HasPrefix(p.src[at:], []byte("null")):
		p.pos += 4
	case bytes.HasPrefix(p.src[at:], []byte("true")):
		v.kind, v.raw = boolean, p.src[at:at+4]
		p.pos += 4
	case bytes.HasPrefix(p.src[at:], []byte("false")):
		v.kind, v.raw = boolean, p.src[at:at+5]
		p.pos += 5
	default:
		return p.fail(reader.NotJSON, at, "a value")
	}
	k, known := p.keys[string(p.path)]
	if !known {
		k = len(p.names)
		name := string(p.path)
		p.keys[name] = k
		p.names, p.seen = append(p.names, name), append(p.seen, 0)
	}
	if p.seen[k] == p.object {
		return &fault{reader.Fault{Kind: reader.KeyRepeated, Text: p.names[k], FieldName: p.names[k]}, keyAt}
	}
	p.seen[k], v.key = p.object, k
	p.values = append(p.values, v)
	return nil
}

// numberLen is the length of the number at the start of b by the grammar of JSON, 0
// where there is none.
func numberLen(b []byte) int {
	digits := func(i int) int {
		for i < len(b) && b[i] >= '0' && b[i] <= '9' {
			i++
		}
		return i
	}
	i := 0
	if b[0] == '-' {
		i++
	}
	whole := digits(i)
	if whole == i || whole > i+1 && b[i] == '0' {
		return 0
	}
	i = whole
	if i < len(b) && b[i] == '.' {
		end := digits(i + 1)
		if end == i+1 {
			return 0
		}
		i = end
	}
	if i < len(b) && b[i]|0x20 == 'e' {
		k := i + 1
		if k < len(b) && (b[k] == '+' || b[k] == '-') {
			k++
		}
		end := digits(k)
		if end == k {
			return 0
		}
		i = end
	}
	return i
}

// readText reads a string whose quotation mark stands here.
func (p *parser) readText() ([]byte, *fault) {
	start := p.pos
	plain := true
	for i := start + 1; i < len(p.src); i++ {
		switch c := p.src[i]; {
		case c == '\\':
			plain = false
			i++
		case c == '"':
			raw := p.src[start+1 : i]
			p.pos = i + 1
			if !utf8.Valid(raw) {
				return nil, p.fail(reader.NotUTF8, start, "")
			}
			if plain {
				return raw, nil
			}
			var s string
			if json.Unmarshal(p.src[start:i+1], &s) != nil {
				return nil, p.fail(reader.NotJSON, start, "a string")
			}
			return []byte(s), nil
		case c < ' ':
			return nil, p.fail(reader.NotJSON, i, "a string without control characters")
		}
	}
	return nil, p.fail(reader.NotJSON, len(p.src), "'\"'")
}
