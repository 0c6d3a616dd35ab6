package reader

import (
	"encoding/binary"
	"testing"
	"unicode/utf16"
	"unicode/utf8"

	"pgregory.net/rapid"
)

// Texts that the standard library writes as UTF-16, in either order and with or
// without a mark, are read back.
func TestDecodeUTF16(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := "a" + rapid.String().Draw(t, "text") // an ASCII character tells the order without a mark
		var order binary.AppendByteOrder = binary.LittleEndian
		if rapid.Bool().Draw(t, "big end first") {
			order = binary.BigEndian
		}
		var data []byte
		if rapid.Bool().Draw(t, "mark") {
			data = order.AppendUint16(data, 0xFEFF)
		}
		for _, u := range utf16.Encode([]rune(text)) {
			data = order.AppendUint16(data, u)
		}
		got, bad := Decode(data, UTF16Text)
		if bad != nil || string(got) != string([]rune(text)) {
			t.Fatalf("%q, %v", got, bad)
		}
		if _, bad := Decode(append(data, 'x'), UTF16Text); bad == nil || bad.Kind != NotInEncoding {
			t.Fatal("an odd number of bytes passed")
		}
	})
}

// Every byte of latin1 is the character of that number; 80 to 9F are refused.
// Some of windows-1252 (code page of Microsoft, from memory).
func TestDecodeBytes(t *testing.T) {
	for c := range 256 {
		got, bad := Decode([]byte{'x', '\r', '\n', byte(c)}, Latin1)
		if c >= 0x80 && c <= 0x9F {
			if bad == nil || bad.Line != 2 || bad.Column != 1 {
				t.Errorf("%x: %q, %v", c, got, bad)
			}
			continue
		}
		if r, _ := utf8.DecodeRune(got[3:]); bad != nil || r != rune(c) {
			t.Errorf("%x: %q, %v", c, got, bad)
		}
	}
	for c, want := range map[byte]string{0x80: "€", 0x85: "…", 0x96: "–", 0x9F: "Ÿ", 0xB0: "°", 0xFC: "ü"} {
		if got, bad := Decode([]byte{c}, Windows1252); bad != nil || string(got) != want {
			t.Errorf("%x: %q, %v", c, got, bad)
		}
	}
	if len(windows1252) != 32 {
		t.Errorf("%d characters", len(windows1252))
	}
	if _, bad := Decode([]byte{0x81}, Windows1252); bad == nil {
		t.Error("81 is no character")
	}
}

func TestParseEncoding(t *testing.T) {
	for name, want := range map[string]Encoding{"UTF-8": UTF8, "utf16": UTF16Text, "UTF-16LE": UTF16Text, "Latin-1": Latin1, "ISO-8859-1": Latin1, "cp1252": Windows1252, "Windows_1252": Windows1252} {
		if got, ok := ParseEncoding(name); !ok || got != want {
			t.Errorf("%s: %s", name, got)
		}
	}
	if _, ok := ParseEncoding("ebcdic"); ok {
		t.Error("ebcdic")
	}
}
