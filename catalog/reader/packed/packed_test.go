package packed

import (
	"bytes"
	"compress/gzip"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"testing"

	"github.com/klauspost/compress/zstd"

	"nearcell/catalog/reader"
)

func zipped(parts ...string) []byte {
	var b bytes.Buffer
	for _, p := range parts {
		w := gzip.NewWriter(&b)
		w.Write([]byte(p))
		w.Close()
	}
	return b.Bytes()
}

func framed(parts ...string) []byte {
	var b bytes.Buffer
	for _, p := range parts {
		w, _ := zstd.NewWriter(&b, zstd.WithEncoderCRC(true))
		w.Write([]byte(p))
		w.Close()
	}
	return b.Bytes()
}

const log = "t,temp\n2031-04-07 08:15:00,4.5\n2031-04-07 08:30:00,4.6\n"

func TestUnpack(t *testing.T) {
	for name, data := range map[string][]byte{
		"gzip": zipped(log), "gzip of two members": zipped(log[:20], log[20:]),
		"zstd": framed(log), "zstd of two frames": framed(log[:20], log[20:]),
		"zstd behind a frame to skip": append([]byte{0x50, 0x2A, 0x4D, 0x18, 3, 0, 0, 0, 1, 2, 3}, framed(log)...),
	} {
		src, err := Unpack(&reader.Source{Name: "log.csv.gz", Data: data}, 0)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		sum := sha256.Sum256(data)
		if string(src.Data) != log || src.SHA256() != hex.EncodeToString(sum[:]) || src.Size() != int64(len(data)) {
			t.Errorf("%s: %q, %s, %d", name, src.Data, src.SHA256(), src.Size())
		}
	}
}

func TestEnding(t *testing.T) {
	for name, want := range map[string]string{"a.csv.gz": "a.csv", "A.JSONL.ZST": "A.JSONL", "b.csv": "", "gz": "", "x/y.dat.gzip": "x/y.dat"} {
		inner, is := Ending(name)
		if is != (want != "") || is && inner != want {
			t.Errorf("%s is %q, %v", name, inner, is)
		}
	}
}

// A file cut anywhere is a fault, and so is one with any byte flipped, unless the bytes
// that come out are the same (a header holds a time and the like).
func TestDamaged(t *testing.T) {
	for name, whole := range map[string][]byte{"gzip": zipped(log[:20], log[20:]), "zstd": framed(log)} {
		first := 0
		if name == "gzip" {
			first = len(zipped(log[:20])) // a whole member is a whole file
		}
		for n := range whole {
			if n == first && n > 0 {
				continue
			}
			var faults *reader.Faults
			if _, err := Unpack(&reader.Source{Data: whole[:n]}, 0); !errors.As(err, &faults) {
				t.Errorf("%s cut to %d of %d: %v", name, n, len(whole), err)
			}
		}
		for i := range whole {
			data := bytes.Clone(whole)
			data[i] ^= 0x10
			src, err := Unpack(&reader.Source{Data: data}, 0)
			if err == nil && string(src.Data) != log {
				t.Errorf("%s with byte %d flipped gives %q", name, i, src.Data)
			}
		}
	}
}

func TestLimit(t *testing.T) {
	for _, data := range [][]byte{zipped(string(make([]byte, 1<<20))), framed(string(make([]byte, 1<<20)))} {
		_, err := Unpack(&reader.Source{Data: data}, 1<<16)
		var faults *reader.Faults
		if !errors.As(err, &faults) || faults.List[0].Kind != reader.TooLarge {
			t.Errorf("a file of a million zeros: %v", err)
		}
	}
}

func FuzzUnpack(f *testing.F) {
	f.Add(zipped(log))
	f.Add(framed(log))
	f.Fuzz(func(t *testing.T, data []byte) {
		src, err := Unpack(&reader.Source{Data: data}, 1<<20)
		var faults *reader.Faults
		if err != nil && !errors.As(err, &faults) {
			t.Fatal(err)
		}
		if err == nil && len(src.Data) > 1<<20 {
			t.Fatal("beyond the limit")
		}
	})
}
