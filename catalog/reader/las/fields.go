package las

import (
	"encoding/binary"
	"math"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// field is a column of a point format.
type field struct {
	name    string
	kind    column.Type
	unit    *column.Unit
	meaning string
	at      int // of its bytes in a point
	shift   uint
	bits    uint
	decimal *decimal
	extra   *extraField
	none    int // values that the file declares to be none
	read    func(f *field, p []byte, b *column.Builder) reader.FaultKind
}

// fields are those of the file's point format.
func (h *header) fields() []field {
	var list []field
	for i, name := range [3]string{"x", "y", "z"} {
		list = append(list, field{name: name, kind: column.Real, at: 4 * i, decimal: newDecimal(h.scale[i], h.offset[i]), read: readCoordinate})
	}
	list = append(list, field{name: "intensity", kind: column.Integer, at: 12, read: readUint16})
	if h.format < 6 {
		list = append(list,
			bitsOf("return_number", 14, 0, 3), bitsOf("returns", 14, 3, 3), bitsOf("class", 15, 0, 5),
			flag("synthetic", 15, 5), flag("key_point", 15, 6), flag("withheld", 15, 7), flag("direction", 14, 6), flag("edge", 14, 7),
			field{name: "scan_angle", kind: column.Real, unit: column.ParseUnit("°"), at: 16, read: readRank},
			bitsOf("user_data", 17, 0, 8), field{name: "point_source", kind: column.Integer, at: 18, read: readUint16})
	} else {
		list = append(list,
			bitsOf("return_number", 14, 0, 4), bitsOf("returns", 14, 4, 4), bitsOf("class", 16, 0, 8),
			flag("synthetic", 15, 0), flag("key_point", 15, 1), flag("withheld", 15, 2), flag("overlap", 15, 3),
			bitsOf("channel", 15, 4, 2), flag("direction", 15, 6), flag("edge", 15, 7),
			field{name: "scan_angle", kind: column.Real, unit: column.ParseUnit("°"), at: 18, decimal: newDecimal(0.006, 0), read: readAngle},
			bitsOf("user_data", 17, 0, 8), field{name: "point_source", kind: column.Integer, at: 20, read: readUint16})
	}
	time, color, nir := -1, -1, -1
	switch h.format {
	case 1, 4:
		time = 20
	case 2:
		color = 20
	case 3, 5:
		time, color = 20, 28
	case 6, 9:
		time = 22
	case 7:
		time, color = 22, 30
	case 8, 10:
		time, color, nir = 22, 30, 36
	}
	if time >= 0 {
		list = append(list, field{name: "gps_time", kind: column.Real, unit: column.ParseUnit("s"), at: time, read: readFloat64})
	}
	if color >= 0 {
		for i, name := range [3]string{"red", "green", "blue"} {
			list = append(list, field{name: name, kind: column.Integer, at: color + 2*i, read: readUint16})
		}
	}
	if nir >= 0 {
		list = append(list, field{name: "nir", kind: column.Integer, at: nir, read: readUint16})
	}
	return list
}

func bitsOf(name string, at int, shift, bits uint) field {
	return field{name: name, kind: column.Integer, at: at, shift: shift, bits: bits, read: readBits}
}

func flag(name string, at int, shift uint) field {
	return field{name: name, kind: column.Boolean, at: at, shift: shift, bits: 1, read: readBits}
}

func readCoordinate(f *field, p []byte, b *column.Builder) reader.FaultKind {
	x, ok := f.decimal.value(int64(int32(binary.LittleEndian.Uint32(p[f.at:]))))
	if !ok {
		return reader.OutOfRange
	}
	b.AppendFloat(x)
	return reader.NoFault
}

func readAngle(f *field, p []byte, b *column.Builder) reader.FaultKind {
	x, _ := f.decimal.value(int64(int16(binary.LittleEndian.Uint16(p[f.at:]))))
	b.AppendFloat(x)
	return reader.NoFault
}

func readRank(f *field, p []byte, b *column.Builder) reader.FaultKind {
	b.AppendFloat(float64(int8(p[f.at])))
	return reader.NoFault
}

func readUint16(f *field, p []byte, b *column.Builder) reader.FaultKind {
	b.AppendInt(int64(binary.LittleEndian.Uint16(p[f.at:])))
	return reader.NoFault
}

func readBits(f *field, p []byte, b *column.Builder) reader.FaultKind {
	x := int64(p[f.at]) >> f.shift & (1<<f.bits - 1)
	if f.kind == column.Boolean {
		b.AppendBool(x != 0)
	} else {
		b.AppendInt(x)
	}
	return reader.NoFault
}

func readFloat64(f *field, p []byte, b *column.Builder) reader.FaultKind {
	x := math.Float64frombits(binary.LittleEndian.Uint64(p[f.at:]))
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return reader.NotFinite
	}
	b.AppendFloat(x)
	return reader.NoFault
}
