package reader

import (
	"bytes"
	"encoding/binary"
	"strings"
	"unicode/utf16"
	"unicode/utf8"
)

// Encoding is how the characters of a text file are written as bytes.
type Encoding string

const (
	UTF8        Encoding = "utf-8"
	UTF16Text   Encoding = "utf-16" // by its byte order mark, or by where the zeros are
	Latin1      Encoding = "latin1"
	Windows1252 Encoding = "windows-1252"
)

// Encodings are the ones there are.
var Encodings = []Encoding{UTF8, UTF16Text, Latin1, Windows1252}

var encodingNames = map[string]Encoding{
	"utf8": UTF8, "utf16": UTF16Text, "utf16le": UTF16Text, "utf16be": UTF16Text, "unicode": UTF16Text,
	"latin1": Latin1, "iso88591": Latin1, "windows1252": Windows1252, "cp1252": Windows1252, "ansi": Windows1252,
}

// ParseEncoding finds an encoding by one of its names; case and marks between
// letters do not count.
func ParseEncoding(name string) (Encoding, bool) {
	plain := strings.NewReplacer("-", "", "_", "", " ", "").Replace(strings.ToLower(name))
	e, ok := encodingNames[plain]
	return e, ok
}

// windows1252 are the characters of bytes 80 to 9F, U+FFFD where there is none
// (the code page as Microsoft published it).
var windows1252 = []rune("€\uFFFD‚ƒ„…†‡ˆ‰Š‹Œ\uFFFDŽ\uFFFD\uFFFD‘’“”•–—˜™š›œ\uFFFDžŸ")

// Decode turns bytes into UTF-8. A fault is at the first line that cannot be:
// latin1 has no printable characters at 80 to 9F, so bytes there mean that the
// file is written otherwise.
func Decode(data []byte, e Encoding) ([]byte, *Fault) {
	switch e {
	case Latin1:
		return decodeBytes(data, e, nil)
	case Windows1252:
		return decodeBytes(data, e, windows1252)
	case UTF16Text:
		return decodeUTF16(data)
	}
	return data, nil
}

func decodeBytes(data []byte, e Encoding, high []rune) ([]byte, *Fault) {
	out := make([]byte, 0, len(data)+len(data)/16)
	for _, c := range data {
		r := rune(c)
		if c >= 0x80 && c <= 0x9F {
			r = utf8.RuneError
			if high != nil {
				r = high[c-0x80]
			}
		}
		if r == utf8.RuneError {
			return nil, decodeFault(out, e)
		}
		out = utf8.AppendRune(out, r)
	}
	return out, nil
}

// decodeUTF16 reads either byte order; without a mark it is told by which half of
// the first characters is zero.
func decodeUTF16(data []byte) ([]byte, *Fault) {
	var order binary.ByteOrder = binary.LittleEndian
	switch {
	case bytes.HasPrefix(data, []byte{0xFF, 0xFE}):
		data = data[2:]
	case bytes.HasPrefix(data, []byte{0xFE, 0xFF}):
		order, data = binary.BigEndian, data[2:]
	case len(data) >= 2 && data[0] == 0 && data[1] != 0:
		order = binary.BigEndian
	}
	out := make([]byte, 0, len(data)/2+16)
	for i := 0; i+1 < len(data); i += 2 {
		r := rune(order.Uint16(data[i:]))
		if utf16.IsSurrogate(r) {
			low := rune(0)
			if i+3 < len(data) {
				low = rune(order.Uint16(data[i+2:]))
			}
			if r = utf16.DecodeRune(r, low); r == utf8.RuneError {
				return nil, decodeFault(out, UTF16Text)
			}
			i += 2
		}
		out = utf8.AppendRune(out, r)
	}
	if len(data)%2 != 0 {
		return nil, decodeFault(out, UTF16Text)
	}
	return out, nil
}

// decodeFault is at the place that decoding reached.
func decodeFault(out []byte, e Encoding) *Fault {
	start := bytes.LastIndexAny(out, "\r\n") + 1
	before := bytes.ReplaceAll(out[:start], []byte("\r\n"), []byte("\n"))
	line := 1 + bytes.Count(before, []byte("\n")) + bytes.Count(before, []byte("\r"))
	return &Fault{Kind: NotInEncoding, Line: line, Column: utf8.RuneCount(out[start:]) + 1, Source: string(out[start:]), Detail: string(e)}
}
