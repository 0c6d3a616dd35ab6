// Package packed unpacks files that gzip or zstd have packed.
//
// # Model
//
// The ending of the name says that a file is packed, its first bytes say how. What was
// unpacked is read as if it lay there under the name without the ending; size and
// checksum stay those of the file on the disk, which is what a user can compare.
// A gzip file may have several members and a zstd file several frames, one after the
// other, as tools write them that add to a file.
//
// # Degenerate inputs
//
// A file that ends within a member, has a wrong checksum or anything behind its last
// member is a fault: half a file is not read as a whole one. Memory grows with what
// comes out, never with what a header promises, up to a limit; a zstd window larger
// than 128 MiB is refused.
//
// # Limitations
//
// The unpacked bytes are held in memory. Other packers and archives of several files
// are not read.
package packed

import (
	"bytes"
	"compress/gzip"
	"errors"
	"io"
	"path/filepath"
	"strings"

	"github.com/klauspost/compress/zstd"

	"nearcell/catalog/reader"
)

// MaxBytes is how much a file may hold when it is unpacked.
const MaxBytes = 64 << 30

const maxWindow = 128 << 20

// Ending reports whether a name is that of a packed file; inner is the name without
// the ending.
func Ending(name string) (inner string, packed bool) {
	ext := filepath.Ext(name)
	switch strings.ToLower(ext) {
	case ".gz", ".gzip", ".zst", ".zstd":
		return strings.TrimSuffix(name, ext), true
	}
	return name, false
}

// Unpack is the source with its bytes unpacked; most is how many there may be, 0:
// MaxBytes. The error is a *reader.Faults.
func Unpack(src *reader.Source, most int64) (*reader.Source, error) {
	if most <= 0 {
		most = MaxBytes
	}
	form, in, err := open(src.Data)
	if err != nil {
		return nil, fault(src, form, most, err)
	}
	defer in.Close()
	var out bytes.Buffer
	_, err = io.Copy(&out, io.LimitReader(in, most+1))
	if err == nil && int64(out.Len()) > most {
		err = errTooLarge
	}
	if err != nil {
		return nil, fault(src, form, most, err)
	}
	return &reader.Source{
		Name: src.Name, Data: out.Bytes(), ModTime: src.ModTime,
		Stored: &reader.Stored{SHA256: src.SHA256(), Bytes: int64(len(src.Data)), Form: form},
	}, nil
}

var (
	errTooLarge = errors.New("more bytes than the limit")
	errNotOne   = errors.New("neither gzip nor zstd")
)

// open finds out how the bytes are packed.
func open(data []byte) (string, io.ReadCloser, error) {
	switch {
	case len(data) >= 2 && data[0] == 0x1F && data[1] == 0x8B:
		r, err := gzip.NewReader(bytes.NewReader(data))
		return "gzip", r, err
	case isFrame(data):
		r, err := zstd.NewReader(bytes.NewReader(data), zstd.WithDecoderConcurrency(1), zstd.WithDecoderMaxWindow(maxWindow), zstd.WithDecoderLowmem(true))
		if err != nil {
			return "zstd", nil, err
		}
		return "zstd", r.IOReadCloser(), nil
	}
	return "gzip or zstd", nil, errNotOne
}

// isFrame tells a zstd frame, or one to be skipped (RFC 8878, Collet and Kucherawy, 2021).
func isFrame(data []byte) bool {
	return len(data) >= 4 && (bytes.HasPrefix(data, []byte{0x28, 0xB5, 0x2F, 0xFD}) || data[0]&0xF0 == 0x50 && bytes.Equal(data[1:4], []byte{0x2A, 0x4D, 0x18}))
}

func fault(src *reader.Source, form string, most int64, err error) error {
	x := reader.Fault{File: src.Name, Kind: reader.Damaged, Text: "packed data", Detail: form + ": " + err.Error()}
	switch {
	case len(src.Data) == 0:
		x = reader.Fault{File: src.Name, Kind: reader.EmptyFile}
	case errors.Is(err, errNotOne):
		x.Kind, x.Text, x.Detail = reader.NotTheFormat, "", form
	case errors.Is(err, io.ErrUnexpectedEOF):
		x.Kind, x.Detail = reader.CutShort, form
	case errors.Is(err, errTooLarge), errors.Is(err, zstd.ErrWindowSizeExceeded):
		x.Kind, x.Expected, x.Detail = reader.TooLarge, int(most), form
	}
	return &reader.Faults{File: src.Name, List: []reader.Fault{x}}
}
