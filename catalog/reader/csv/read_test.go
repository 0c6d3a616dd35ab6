package csv

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"testing"

	"nearcell/catalog/reader"
)

func TestOpen(t *testing.T) {
	path := filepath.Join(t.TempDir(), "f.csv")
	if err := os.WriteFile(path, []byte("a\n1\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	src, err := reader.Open("plan/f.csv", path)
	if err != nil {
		t.Fatal(err)
	}
	// The checksum is that of sha256sum.
	if src.Name != "plan/f.csv" || string(src.Data) != "a\n1\n" || src.ModTime.IsZero() ||
		src.SHA256() != "309b0e45a73d3fc5325e2b6ed0a01ef8b9cde6b05a5633c1f893f970d52bfddc" {
		t.Errorf("%+v, %s", src, src.SHA256())
	}
	if _, err := reader.Open("nosuch", path+"x"); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("%v", err)
	}
}

// A cancelled context and an error of Refused end the reading with that error.
func TestReadingStops(t *testing.T) {
	src := &reader.Source{Name: "f", Data: readings(5000)}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := (Reader{}).Read(ctx, src, reader.Options{}); !errors.Is(err, context.Canceled) {
		t.Errorf("%v", err)
	}
	full := errors.New("disk full")
	calls := 0
	_, err := Reader{}.Read(context.Background(), &reader.Source{Data: []byte("a,b\n1\n2\n3,4\n")}, reader.Options{
		Refused: func(int, []byte, reader.Fault) error { calls++; return full },
	})
	if !errors.Is(err, full) || calls != 1 {
		t.Errorf("%v after %d calls", err, calls)
	}
}

func TestProgress(t *testing.T) {
	data := readings(5000)
	usual := chunkBytes
	defer func() { chunkBytes = usual }()
	chunkBytes = 32 << 10
	var seen []int64
	_, err := Reader{}.Read(context.Background(), &reader.Source{Data: data}, reader.Options{Progress: func(done, total int64) {
		if total != 2*int64(len(data)) || done > total || len(seen) > 0 && done < seen[len(seen)-1] {
			t.Errorf("%d of %d", done, total)
		}
		seen = append(seen, done)
	}})
	if err != nil || len(seen) < 8 || seen[len(seen)-1] != 2*int64(len(data)) {
		t.Errorf("%v, %v", seen, err)
	}
}
