package view

import (
	"encoding/base64"
	"encoding/binary"
	"encoding/json"
	"math"

	"nearcell/engine/draw"
)

// Data is what the page's program reads. Arrays are little-endian numbers in base64.
type Data struct {
	Value      string    `json:"value"`
	Unit       string    `json:"unit"`
	Length     string    `json:"length"`
	VolumeUnit string    `json:"volumeUnit"`
	Middle     draw.Spot `json:"middle"` // of the room; corners are relative to it
	Lo         draw.Spot `json:"lo"`
	Hi         draw.Spot `json:"hi"`
	From       draw.Spot `json:"from"` // the direction that it is seen from at first
	Limits     []float64 `json:"limits"`
	IDs        []string  `json:"ids"`     // of rows
	Values     []string  `json:"values"`  // of rows, "" where missing
	Volumes    []string  `json:"volumes"` // of rows
	Places     []string  `json:"places"`  // of bodies
	Rows       Array     `json:"rows"`    // int32: the body of each row
	Exact      Array     `json:"exact"`   // float64: value (NaN: missing) and volume of each row
	Paint      Array     `json:"paint"`   // uint8: red, green, blue, mark of each body
	Sites      Array     `json:"sites"`   // float32: x, y, z of each body
	Hulls      Array     `json:"hulls"`   // int32: body, corners, faces of each hull
	Others     Array     `json:"others"`  // int32: of each face the body behind it, -1 a wall, -2 a seam, -3 a seam with patches
	Counts     Array     `json:"counts"`  // uint16: corners of each face
	Loops      Array     `json:"loops"`   // uint16: the corners of the faces, by their number in the hull
	Points     Array     `json:"points"`  // float32: x, y, z of the corners
	Patches    Array     `json:"patches"` // int32: body and corners of each wall within a seam
	Patched    Array     `json:"patched"` // float32: their corners
	Edges      Array     `json:"edges"`   // float32: both ends of each edge of the room
}

// Array is little-endian numbers.
type Array []byte

// MarshalText writes base64.
func (a Array) MarshalText() ([]byte, error) {
	return base64.StdEncoding.AppendEncode(nil, a), nil
}

// UnmarshalText reads base64.
func (a *Array) UnmarshalText(text []byte) (err error) {
	*a, err = base64.StdEncoding.AppendDecode(nil, text)
	return err
}

func (a *Array) int32(v int32)     { *a = binary.LittleEndian.AppendUint32(*a, uint32(v)) }
func (a *Array) uint16(v int)      { *a = binary.LittleEndian.AppendUint16(*a, uint16(v)) }
func (a *Array) float64(v float64) { *a = binary.LittleEndian.AppendUint64(*a, math.Float64bits(v)) }
func (a *Array) spot(p, middle draw.Spot) {
	for k := range 3 {
		*a = binary.LittleEndian.AppendUint32(*a, math.Float32bits(float32(p[k]-middle[k])))
	}
}

// dataOf brings a space into the form of the page.
func dataOf(x *draw.Space) *Data {
	lo, hi := x.Bounds()
	from, _ := x.Seen()
	d := &Data{Value: x.Value, Unit: x.Unit, Length: x.Length, VolumeUnit: x.Volume, Lo: lo, Hi: hi, From: from, Limits: x.Limits,
		IDs: []string{}, Values: []string{}, Volumes: []string{}, Places: []string{}}
	for k := range 3 {
		d.Middle[k] = lo[k]/2 + hi[k]/2
	}
	scale := x.Scale()
	for i := range x.Bodies {
		d.body(x, scale, i)
	}
	for _, e := range x.RoomEdges() {
		d.Edges.spot(e[0], d.Middle)
		d.Edges.spot(e[1], d.Middle)
	}
	return d
}

// partSeam is a seam that is a wall in part.
const partSeam = -3

// body adds a body with its rows and hulls.
func (d *Data) body(x *draw.Space, scale *draw.Scale, i int) {
	b := &x.Bodies[i]
	for _, r := range b.Rows {
		d.IDs = append(d.IDs, r.ID)
		d.Volumes = append(d.Volumes, x.Text(r.Volume))
		value, text := math.NaN(), ""
		if !r.Missing {
			value, text = r.Value, x.Text(r.Value)
		}
		d.Values = append(d.Values, text)
		d.Rows.int32(int32(i))
		d.Exact.float64(value)
		d.Exact.float64(r.Volume)
	}
	c := x.Fill(scale, b)
	d.Paint = append(d.Paint, c.R, c.G, c.B, byte(x.Mark(b)))
	d.Sites.spot(b.At, d.Middle)
	d.Places = append(d.Places, "("+x.Text(b.At[0])+", "+x.Text(b.At[1])+", "+x.Text(b.At[2])+")")
	for k := range b.Hulls {
		h := &b.Hulls[k]
		d.Hulls.int32(int32(i))
		d.Hulls.int32(int32(len(h.Corners)))
		d.Hulls.int32(int32(len(h.Faces)))
		for _, c := range h.Corners {
			d.Points.spot(c, d.Middle)
		}
		for _, f := range h.Faces {
			other := f.Other
			if len(f.Walls) > 0 {
				other = partSeam
			}
			d.Others.int32(other)
			d.Counts.uint16(len(f.Loop))
			for _, c := range f.Loop {
				d.Loops.uint16(int(c))
			}
			for _, w := range f.Walls {
				d.Patches.int32(int32(i))
				d.Patches.int32(int32(len(w)))
				for _, c := range w {
					d.Patched.spot(c, d.Middle)
				}
			}
		}
	}
}

// json is the object; "<" never stands in it.
func (d *Data) json() ([]byte, error) { return json.Marshal(d) }
