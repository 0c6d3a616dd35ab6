package las

import (
	"bytes"
	"context"
	"encoding/binary"
	"errors"
	"fmt"
	"math"
	"strconv"
	"testing"

	"pgregory.net/rapid"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// made writes a LAS file from the tables of the specification, independently of the reader.
type made struct {
	minor, format byte
	scale, offset [3]float64
	points        [][]byte
	extra         int    // bytes behind each point
	records       []byte // of variable length
	nRecords      uint32
	wide          bool // 1.4: the legacy count is 0
}

// length is that of the specification's point formats.
var length = map[byte]int{0: 20, 1: 28, 2: 26, 3: 34, 4: 57, 5: 63, 6: 30, 7: 36, 8: 38, 9: 59, 10: 67}

func (m *made) bytes() []byte {
	size := map[byte]int{0: 227, 1: 227, 2: 227, 3: 235, 4: 375}[m.minor]
	h := make([]byte, size)
	le := binary.LittleEndian
	copy(h, "LASF")
	h[24], h[25] = 1, m.minor
	le.PutUint16(h[94:], uint16(size))
	le.PutUint32(h[96:], uint32(size+len(m.records)))
	le.PutUint32(h[100:], m.nRecords)
	h[104] = m.format
	le.PutUint16(h[105:], uint16(length[m.format]+m.extra))
	if !m.wide {
		le.PutUint32(h[107:], uint32(len(m.points)))
	}
	for i := range 3 {
		le.PutUint64(h[131+8*i:], math.Float64bits(m.scale[i]))
		le.PutUint64(h[155+8*i:], math.Float64bits(m.offset[i]))
	}
	if m.minor == 4 {
		le.PutUint64(h[247:], uint64(len(m.points)))
	}
	h = append(h, m.records...)
	for _, p := range m.points {
		h = append(h, p...)
	}
	return h
}

// point is one whose every field tells which it is.
func point(format byte, x, y, z int32, extra int) []byte {
	p := make([]byte, length[format]+extra)
	le := binary.LittleEndian
	for i, c := range []int32{x, y, z} {
		le.PutUint32(p[4*i:], uint32(c))
	}
	le.PutUint16(p[12:], 1234)
	rest := 20
	if format < 6 {
		p[14], p[15], p[16], p[17] = 2|3<<3|1<<6, 6|1<<7, 0xF6, 77 // return 2 of 3, class 6 withheld, -10°
		le.PutUint16(p[18:], 501)
	} else {
		p[14], p[15], p[16], p[17] = 9|12<<4, 1<<3|2<<4|1<<7, 200, 77 // return 9 of 12, overlap, channel 2, edge
		le.PutUint16(p[18:], uint16(0x10000-2500))                    // -15°
		le.PutUint16(p[20:], 501)
		rest = 22
	}
	if format != 0 && format != 2 {
		le.PutUint64(p[rest:], math.Float64bits(98765.25))
		rest += 8
	}
	if map[byte]bool{2: true, 3: true, 5: true, 7: true, 8: true, 10: true}[format] {
		for i, c := range []uint16{65535, 256, 1} {
			le.PutUint16(p[rest+2*i:], c)
		}
		rest += 6
	}
	if format == 8 || format == 10 {
		le.PutUint16(p[rest:], 4000)
	}
	return p
}

func read(data []byte) (*reader.Result, error) {
	return Reader{}.Read(context.Background(), &reader.Source{Name: "hall.las", Data: data}, reader.Options{})
}

func TestFormats(t *testing.T) {
	for format := byte(0); format <= 10; format++ {
		for _, minor := range []byte{2, 3, 4} {
			m := &made{minor: minor, format: format, scale: [3]float64{0.001, 0.001, 0.01}, offset: [3]float64{2600000, 1200000, 0}, wide: minor == 4}
			m.points = [][]byte{point(format, 123470, -5, 412, 0), point(format, math.MinInt32, math.MaxInt32, 0, 0)}
			r, err := read(m.bytes())
			if err != nil {
				t.Fatalf("format %d of 1.%d: %v", format, minor, err)
			}
			want := map[string]any{"x": 2600123.47, "y": 1199999.995, "z": 4.12, "intensity": int64(1234), "user_data": int64(77), "point_source": int64(501)}
			if format < 6 {
				for k, v := range map[string]any{"return_number": int64(2), "returns": int64(3), "class": int64(6), "withheld": true, "synthetic": false, "direction": true, "scan_angle": -10.0} {
					want[k] = v
				}
			} else {
				for k, v := range map[string]any{"return_number": int64(9), "returns": int64(12), "class": int64(200), "overlap": true, "channel": int64(2), "edge": true, "scan_angle": -15.0} {
					want[k] = v
				}
			}
			if format != 0 && format != 2 {
				want["gps_time"] = 98765.25
			}
			if format == 8 || format == 10 {
				want["nir"], want["red"], want["green"], want["blue"] = int64(4000), int64(65535), int64(256), int64(1)
			}
			if r.Table.N != 2 {
				t.Errorf("format %d: %d points", format, r.Table.N)
			}
			got := cells(r.Table, 0)
			for name, w := range want {
				if got[name] != w {
					t.Errorf("format %d of 1.%d: %s is %v, want %v", format, minor, name, got[name], w)
				}
			}
			if x := cells(r.Table, 1)["x"]; x != 2600000-2147483.648 {
				t.Errorf("format %d: the least x is %v", format, x)
			}
		}
	}
}

func cells(t *column.Table, row int) map[string]any {
	m := map[string]any{}
	for i := range t.Cols {
		v := t.Cols[i].Value(row)
		switch {
		case v.Null:
			m[t.Schema[i].Name] = nil
		case v.Type == column.Real:
			m[t.Schema[i].Name] = v.F
		case v.Type == column.Boolean:
			m[t.Schema[i].Name] = v.I != 0
		default:
			m[t.Schema[i].Name] = v.I
		}
	}
	return m
}

// A coordinate is the REAL that its decimal reads as, for any scale and offset with
// few digits.
func TestDecimals(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		digits := rapid.IntRange(0, 8).Draw(t, "digits")
		s := rapid.Int64Range(1, 99).Draw(t, "s")
		o := rapid.Int64Range(-1e12, 1e12).Draw(t, "o")
		n := int64(rapid.Int32().Draw(t, "n"))
		e := "e-" + strconv.Itoa(digits)
		scale, _ := strconv.ParseFloat(strconv.FormatInt(s, 10)+e, 64)
		offset, _ := strconv.ParseFloat(strconv.FormatInt(o, 10)+e, 64)
		want, _ := strconv.ParseFloat(strconv.FormatInt(n*s+o, 10)+e, 64)
		if got, ok := newDecimal(scale, offset).value(n); !ok || got != want {
			t.Fatalf("%d × %v + %v is %v, want %v", n, scale, offset, got, want)
		}
	})
	// the US survey foot, 1200/3937 m, as some files have it for a scale
	d := newDecimal(0.3048006096012192, 100)
	if got, _ := d.value(1_000_000); got != 304900.6096012192 {
		t.Errorf("a scale of many digits gives %v", got)
	}
}

// described is a record of variable length for extra bytes.
func described(kind, options byte, name string, none uint64, scale, offset float64) []byte {
	b := make([]byte, 192)
	b[2], b[3] = kind, options
	copy(b[4:36], name)
	binary.LittleEndian.PutUint64(b[40:], none)
	binary.LittleEndian.PutUint64(b[112:], math.Float64bits(scale))
	binary.LittleEndian.PutUint64(b[136:], math.Float64bits(offset))
	return b
}

func record(user string, id uint16, body []byte) []byte {
	h := make([]byte, 54)
	copy(h[2:18], user)
	binary.LittleEndian.PutUint16(h[18:], id)
	binary.LittleEndian.PutUint16(h[20:], uint16(len(body)))
	return append(h, body...)
}

func TestExtraBytes(t *testing.T) {
	m := &made{minor: 4, format: 6, scale: [3]float64{1, 1, 1}, extra: 2 + 4 + 3 + 5}
	body := append(described(4, 1|8|16, "height", uint64(0xFFFF_FFFF_FFFF_FFFF), 0.01, 5), described(9, 0, "range", 0, 0, 0)...)
	body = append(body, described(11, 0, "normal", 0, 0, 0)[:192]...) // two of uint8
	m.records = append(record("somebody", 4, []byte("hello")), record("LASF_Spec", 4, body)...)
	m.nRecords = 2
	for _, h := range []int16{250, -1} {
		p := point(6, 1, 2, 3, m.extra)
		binary.LittleEndian.PutUint16(p[30:], uint16(h))
		binary.LittleEndian.PutUint32(p[32:], math.Float32bits(0.5))
		m.points = append(m.points, p)
	}
	r, err := read(m.bytes())
	if err != nil {
		t.Fatal(err)
	}
	a, b := cells(r.Table, 0), cells(r.Table, 1)
	if a["height"] != 7.5 || a["range"] != 0.5 || b["height"] != nil {
		t.Errorf("extra bytes are %v and %v", a, b)
	}
	told := fmt.Sprint(r.Facts.Columns)
	for _, want := range []string{"normal", "6 bytes", "height"} {
		if !bytes.Contains([]byte(told), []byte(want)) {
			t.Errorf("the notes %s do not tell of %s", told, want)
		}
	}
}

func sample() []byte {
	m := &made{minor: 4, format: 7, scale: [3]float64{0.01, 0.01, 0.01}, extra: 2}
	m.records, m.nRecords = record("LASF_Spec", 4, described(3, 0, "height", 0, 0, 0)), 1
	for i := range int32(20) {
		m.points = append(m.points, point(7, i, i*i, -i, 2))
	}
	return m.bytes()
}

// A file that ends anywhere before its last point is a fault, never a shorter table.
func TestCut(t *testing.T) {
	whole := sample()
	if _, err := read(whole); err != nil {
		t.Fatal(err)
	}
	for n := range whole {
		var faults *reader.Faults
		if r, err := read(whole[:n]); !errors.As(err, &faults) {
			t.Fatalf("cut to %d of %d bytes it is read: %v rows, %v", n, len(whole), r != nil, err)
		}
	}
}

func TestRefused(t *testing.T) {
	change := func(at int, b ...byte) []byte {
		data := sample()
		copy(data[at:], b)
		return data
	}
	for name, c := range map[string]struct {
		data []byte
		kind reader.FaultKind
	}{
		"empty":            {nil, reader.EmptyFile},
		"another format":   {[]byte("x,y,z\n1,2,3\n"), reader.NotTheFormat},
		"LAZ":              {change(104, 7|0x80), reader.NotSupported},
		"LAS 1.5":          {change(25, 5), reader.NotSupported},
		"point format 11":  {change(104, 11), reader.NotSupported},
		"short points":     {change(105, 35, 0), reader.Damaged},
		"points in header": {change(96, 10, 0, 0, 0), reader.Damaged},
		"many points":      {change(107, 0, 0, 0, 0x7F), reader.Damaged},
		"many of 1.4":      {change(107, append([]byte{0, 0, 0, 0}, change(0)[111:247]...)...), reader.NoFault},
		"scale 0":          {change(131, make([]byte, 8)...), reader.Damaged},
		"header size":      {change(94, 200, 0), reader.Damaged},
		"many records":     {change(100, 0xFF, 0xFF, 0xFF, 0xFF), reader.Damaged},
	} {
		_, err := read(c.data)
		var faults *reader.Faults
		if c.kind == reader.NoFault {
			if err != nil {
				t.Errorf("%s: %v", name, err)
			}
			continue
		}
		if !errors.As(err, &faults) || faults.List[0].Kind != c.kind {
			t.Errorf("%s: %v, want %s", name, err, c.kind)
		}
	}
}

func FuzzRead(f *testing.F) {
	f.Add(sample())
	for format := range byte(11) {
		m := &made{minor: 3, format: format, scale: [3]float64{1, 0.5, 0.25}, points: [][]byte{point(format, 1, 2, 3, 0)}}
		f.Add(m.bytes())
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		r, err := read(data)
		var faults *reader.Faults
		if err != nil && !errors.As(err, &faults) {
			t.Fatal(err)
		}
		if err == nil {
			if err := r.Table.Validate(); err != nil {
				t.Fatal(err)
			}
		}
	})
}

// A flipped bit is a fault or gives a table that holds together.
func TestFlipped(t *testing.T) {
	whole := sample()
	for i := range whole {
		for _, bit := range []byte{1, 0x80} {
			data := bytes.Clone(whole)
			data[i] ^= bit
			r, err := read(data)
			var faults *reader.Faults
			if err != nil && !errors.As(err, &faults) {
				t.Fatalf("byte %d: %v", i, err)
			}
			if err == nil {
				if err := r.Table.Validate(); err != nil {
					t.Fatalf("byte %d: %v", i, err)
				}
			}
		}
	}
}
