package las

import (
	"bytes"
	"encoding/binary"
	"math"
	"strconv"
	"strings"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// extraField is one that a record of the file describes.
type extraField struct {
	kind          byte // 1 to 10: uint8, int8, uint16 … uint64, int64, float32, float64
	hasNone       bool
	none          uint64 // as 8 bytes of the file
	scale, offset float64
	scaled        bool
}

// extraSize is the bytes of each kind.
var extraSize = [...]int{0, 1, 1, 2, 2, 4, 4, 8, 8, 4, 8}

// describedBytes are the fields behind those of the point format. What nothing
// describes is noted.
func (h *header) describedBytes(data []byte) ([]field, []reader.ColumnNote, *reader.Fault) {
	var fields []field
	var notes []reader.ColumnNote
	at, end := pointLength[h.format], h.length
	body, bad := h.extraRecord(data)
	if bad != nil {
		return nil, nil, bad
	}
	for ; len(body) >= 192 && at < end; body = body[192:] {
		kind, options := body[2], body[3]
		name := strings.TrimSpace(string(bytes.TrimRight(body[4:36], "\x00")))
		if i := strings.IndexByte(name, 0); i >= 0 {
			name = name[:i]
		}
		if name == "" {
			name = "extra_" + strconv.Itoa(at)
		}
		name = strings.ToValidUTF8(name, "?")
		if kind == 0 {
			notes = append(notes, reader.ColumnNote{Column: name, Kind: reader.NotRead, Detail: plainBytes(int(options))})
			at += int(options)
			continue
		}
		if kind > 30 {
			break
		}
		size := extraSize[(kind-1)%10+1] * (int(kind-1)/10 + 1)
		if at+size > end {
			return nil, nil, &reader.Fault{Kind: reader.Damaged, Text: "header", Got: end - at, Expected: size, Detail: "extra bytes"}
		}
		if kind > 10 {
			notes = append(notes, reader.ColumnNote{Column: name, Kind: reader.NotRead, Detail: "array"})
			at += size
			continue
		}
		x := &extraField{kind: kind, hasNone: options&1 != 0, none: binary.LittleEndian.Uint64(body[40:]), scale: 1}
		if options&8 != 0 {
			x.scale, x.scaled = math.Float64frombits(binary.LittleEndian.Uint64(body[112:])), true
		}
		if options&16 != 0 {
			x.offset, x.scaled = math.Float64frombits(binary.LittleEndian.Uint64(body[136:])), true
		}
		if !plausible(x.scale, x.offset) {
			return nil, nil, &reader.Fault{Kind: reader.Damaged, Text: "header", Detail: "scale or offset", FieldName: name}
		}
		f := field{name: name, kind: column.Integer, at: at, extra: x, read: readExtra}
		if x.scaled || kind > 8 {
			f.kind = column.Real
		}
		if x.scaled {
			f.decimal = newDecimal(x.scale, x.offset)
		}
		fields = append(fields, f)
		at += size
	}
	if at < end {
		notes = append(notes, reader.ColumnNote{Kind: reader.NotRead, Detail: plainBytes(end - at)})
	}
	if h.format == 4 || h.format == 5 || h.format >= 9 {
		notes = append(notes, reader.ColumnNote{Column: "waveform", Kind: reader.NotRead, Detail: "waveform"})
	}
	return fields, notes, nil
}

func plainBytes(n int) string { return strconv.Itoa(n) + " bytes" }

func finite(x float64) bool { return !math.IsNaN(x) && !math.IsInf(x, 0) }

// extraRecord is the record that describes the extra bytes, nil without one. All of
// the records must lie before the points, or behind them where LAS 1.4 puts them.
func (h *header) extraRecord(data []byte) ([]byte, *reader.Fault) {
	le := binary.LittleEndian
	found := []byte(nil)
	at, end := int64(h.size), min(h.start, int64(len(data))) // a header may say that they reach beyond the file
	for range h.records {
		if at+54 > end {
			return nil, &reader.Fault{Kind: reader.Damaged, Text: "header", Detail: "records before the points"}
		}
		r := data[at:]
		length := int64(le.Uint16(r[20:]))
		if at+54+length > end {
			return nil, &reader.Fault{Kind: reader.Damaged, Text: "header", Detail: "records before the points"}
		}
		if isExtra(r) {
			found = r[54 : 54+length]
		}
		at += 54 + length
	}
	if h.minor < 4 {
		return found, nil
	}
	if len(data) < 247 {
		return nil, &reader.Fault{Kind: reader.CutShort, Text: "header", Got: len(data), Expected: 375}
	}
	start, count := le.Uint64(data[235:]), le.Uint32(data[243:])
	for range count {
		if start > uint64(len(data)) || uint64(len(data))-start < 60 {
			return nil, &reader.Fault{Kind: reader.CutShort, Text: "records behind the points"}
		}
		r := data[start:]
		length := le.Uint64(r[20:])
		if length > uint64(len(r)-60) {
			return nil, &reader.Fault{Kind: reader.CutShort, Text: "records behind the points"}
		}
		if isExtra(r) {
			found = r[60 : 60+length]
		}
		start += 60 + length
	}
	return found, nil
}

func isExtra(r []byte) bool {
	return bytes.Equal(bytes.TrimRight(r[2:18], "\x00"), []byte("LASF_Spec")) && binary.LittleEndian.Uint16(r[18:]) == 4
}

// readExtra reads a described field.
func readExtra(f *field, p []byte, b *column.Builder) reader.FaultKind {
	x := f.extra
	n, real, isReal := int64(0), 0.0, false
	le := binary.LittleEndian
	raw := uint64(0) // as the record of the file writes its value for none
	switch x.kind {
	case 1:
		n, raw = int64(p[f.at]), uint64(p[f.at])
	case 2:
		n = int64(int8(p[f.at]))
		raw = uint64(n)
	case 3:
		n = int64(le.Uint16(p[f.at:]))
		raw = uint64(n)
	case 4:
		n = int64(int16(le.Uint16(p[f.at:])))
		raw = uint64(n)
	case 5:
		n = int64(le.Uint32(p[f.at:]))
		raw = uint64(n)
	case 6:
		n = int64(int32(le.Uint32(p[f.at:])))
		raw = uint64(n)
	case 7:
		raw = le.Uint64(p[f.at:])
		n = int64(raw)
	case 8:
		raw = le.Uint64(p[f.at:])
		n = int64(raw)
	case 9:
		real, isReal = float64(math.Float32frombits(le.Uint32(p[f.at:]))), true
		raw = math.Float64bits(real)
	case 10:
		real, isReal = math.Float64frombits(le.Uint64(p[f.at:])), true
		raw = math.Float64bits(real)
	}
	switch {
	case x.hasNone && raw == x.none, isReal && math.IsNaN(real):
		f.none++
		b.AppendNull()
		return reader.NoFault
	case x.kind == 7 && n < 0:
		return reader.BeyondInteger
	case isReal && !finite(real):
		return reader.NotFinite
	case isReal && x.scaled:
		real = float64(real*x.scale) + x.offset
		if !finite(real) {
			return reader.OutOfRange
		}
		b.AppendFloat(real)
	case isReal:
		b.AppendFloat(real)
	case x.scaled:
		v, ok := f.decimal.value(n)
		if !ok {
			return reader.OutOfRange
		}
		b.AppendFloat(v)
	default:
		b.AppendInt(n)
	}
	return reader.NoFault
}
