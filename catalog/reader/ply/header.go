package ply

import (
	"bytes"
	"encoding/binary"
	"math"
	"strconv"
	"strings"

	"nearcell/catalog/reader"
)

// kind is the type of a number.
type kind uint8

const (
	int8Kind kind = iota + 1
	uint8Kind
	int16Kind
	uint16Kind
	int32Kind
	uint32Kind
	float32Kind
	float64Kind
)

var kinds = map[string]kind{
	"char": int8Kind, "int8": int8Kind, "uchar": uint8Kind, "uint8": uint8Kind, "short": int16Kind, "int16": int16Kind,
	"ushort": uint16Kind, "uint16": uint16Kind, "int": int32Kind, "int32": int32Kind, "uint": uint32Kind, "uint32": uint32Kind,
	"float": float32Kind, "float32": float32Kind, "double": float64Kind, "float64": float64Kind,
}

var sizes = [...]int{0, 1, 1, 2, 2, 4, 4, 4, 8}

type property struct {
	name string
	kind kind
	list kind // of the length; 0: one number
}

type element struct {
	name       string
	count      int64
	properties []property
	line       int
}

type header struct {
	format   string
	elements []*element
	body     []byte
	line     int // of the first line of the body
	offset   int64
}

func (h *header) formatName() string {
	switch h.format {
	case "ascii":
		return "text"
	case "binary_big_endian":
		return "binary, high bytes first"
	}
	return "binary, low bytes first"
}

// readHeader reads the lines up to end_header.
func readHeader(data []byte) (*header, error) {
	h := &header{}
	rest := data
	for {
		h.line++
		n := bytes.IndexByte(rest, '\n')
		if n < 0 {
			return nil, &reader.MeshFault{Kind: reader.MeshCut, Line: h.line, Want: "end_header"}
		}
		line := rest[:n]
		rest = rest[n+1:]
		w := strings.Fields(string(line[:min(len(line), 1000)]))
		wrong := &reader.MeshFault{Kind: reader.MeshHeader, Line: h.line, Text: string(line[:min(len(line), 60)])}
		if len(w) == 0 {
			continue
		}
		switch {
		case h.line == 1:
			if w[0] != "ply" {
				return nil, wrong
			}
		case w[0] == "comment" || w[0] == "obj_info":
		case w[0] == "format" && len(w) >= 2 && (w[1] == "ascii" || w[1] == "binary_little_endian" || w[1] == "binary_big_endian"):
			h.format = w[1]
		case w[0] == "element" && len(w) == 3:
			n, err := strconv.ParseInt(w[2], 10, 64)
			if err != nil || n < 0 {
				return nil, wrong
			}
			h.elements = append(h.elements, &element{name: w[1], count: n, line: h.line})
		case w[0] == "property" && len(h.elements) > 0:
			p, ok := propertyOf(w[1:])
			if !ok {
				return nil, wrong
			}
			e := h.elements[len(h.elements)-1]
			e.properties = append(e.properties, p)
		case w[0] == "end_header":
			if h.format == "" {
				return nil, &reader.MeshFault{Kind: reader.MeshHeader, Line: h.line, Text: "end_header", Want: "format"}
			}
			h.body, h.offset = rest, int64(len(data)-len(rest))
			h.line++
			return h, nil
		default:
			return nil, wrong
		}
	}
}

func propertyOf(w []string) (p property, ok bool) {
	switch {
	case len(w) == 2:
		p = property{name: w[1], kind: kinds[w[0]]}
		return p, p.kind != 0
	case len(w) == 4 && w[0] == "list":
		p = property{name: w[3], kind: kinds[w[2]], list: kinds[w[1]]}
		return p, p.kind != 0 && p.list != 0
	}
	return p, false
}

// source gives the numbers behind the header.
type source interface {
	// begin begins item i of an element.
	begin(e *element, i int64) error
	value(k kind) (float64, error)
	fault(kind reader.MeshFaultKind, want string) error
	place() int // the line; 0 in binary files
}

func (h *header) source() source {
	switch h.format {
	case "ascii":
		return &textSource{rest: h.body, line: h.line}
	case "binary_big_endian":
		return &binarySource{body: h.body, offset: h.offset, order: binary.BigEndian}
	}
	return &binarySource{body: h.body, offset: h.offset, order: binary.LittleEndian}
}

type binarySource struct {
	body   []byte
	at     int
	offset int64
	order  binary.ByteOrder
	e      *element
	i      int64
}

func (s *binarySource) begin(e *element, i int64) error {
	s.e, s.i = e, i
	return nil
}

func (s *binarySource) place() int { return 0 }

func (s *binarySource) fault(kind reader.MeshFaultKind, want string) error {
	return &reader.MeshFault{Kind: kind, Offset: s.offset + int64(s.at), Text: s.e.name, Want: want, Got: s.i, Expected: s.e.count}
}

func (s *binarySource) value(k kind) (float64, error) {
	n := sizes[k]
	if len(s.body)-s.at < n {
		return 0, s.fault(reader.MeshCut, "")
	}
	b := s.body[s.at:]
	s.at += n
	switch k {
	case int8Kind:
		return float64(int8(b[0])), nil
	case uint8Kind:
		return float64(b[0]), nil
	case int16Kind:
		return float64(int16(s.order.Uint16(b))), nil
	case uint16Kind:
		return float64(s.order.Uint16(b)), nil
	case int32Kind:
		return float64(int32(s.order.Uint32(b))), nil
	case uint32Kind:
		return float64(s.order.Uint32(b)), nil
	case float32Kind:
		return float64(math.Float32frombits(s.order.Uint32(b))), nil
	}
	return math.Float64frombits(s.order.Uint64(b)), nil
}

type textSource struct {
	rest []byte
	line int
	word []byte
	e    *element
	i    int64
}

func (s *textSource) begin(e *element, i int64) error {
	s.e, s.i = e, i
	return nil
}

func (s *textSource) place() int { return s.line }

func (s *textSource) fault(kind reader.MeshFaultKind, want string) error {
	return &reader.MeshFault{Kind: kind, Line: s.line, Text: string(s.word[:min(len(s.word), 60)]), Want: want, Got: s.i, Expected: s.e.count}
}

func (s *textSource) value(k kind) (float64, error) {
	for len(s.rest) > 0 && (s.rest[0] <= ' ') {
		if s.rest[0] == '\n' {
			s.line++
		}
		s.rest = s.rest[1:]
	}
	if len(s.rest) == 0 {
		s.word = []byte(s.e.name)
		return 0, s.fault(reader.MeshCut, "")
	}
	n := 0
	for n < len(s.rest) && s.rest[n] > ' ' {
		n++
	}
	s.word, s.rest = s.rest[:n], s.rest[n:]
	x, err := strconv.ParseFloat(string(s.word), 64)
	if err != nil && !math.IsInf(x, 0) {
		return 0, s.fault(reader.MeshNumber, "a number")
	}
	if k < float32Kind && (math.IsNaN(x) || math.IsInf(x, 0)) {
		return 0, s.fault(reader.MeshNotFinite, "a number")
	}
	return x, nil
}
