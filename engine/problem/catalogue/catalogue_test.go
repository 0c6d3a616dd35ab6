package catalogue_test

import (
	"bytes"
	"context"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"nearcell/catalog"
	"nearcell/engine"
	"nearcell/engine/problem/catalogue"
	"nearcell/lang"
)

// session is one on the setting of the examples, in a folder of its own.
func session(t *testing.T, out *bytes.Buffer, o engine.Options) (s *engine.Session, folder string) {
	t.Helper()
	folder = t.TempDir()
	if err := os.CopyFS(folder, os.DirFS("testdata")); err != nil {
		t.Fatal(err)
	}
	o.Out, o.Err = out, out
	s = engine.New(catalog.Memory(), o)
	if err := s.Run(context.Background(), "setting", catalogue.Setting, folder); err != nil {
		t.Fatal(out.String())
	}
	out.Reset()
	return s, folder
}

// TestExamples: the last statement of every example gives its code, those before
// it go well, and what is said names the place.
func TestExamples(t *testing.T) {
	for _, e := range catalogue.All() {
		t.Run(e.Code, func(t *testing.T) {
			if (e.Example == "") == (e.Unshown == "") || e.Meaning == "" || e.WayOut == "" {
				t.Fatal("an entry has a meaning, a way out, and either an example or why it has none")
			}
			if e.Example == "" {
				return
			}
			var out bytes.Buffer
			s, folder := session(t, &out, engine.Options{Strict: e.Strict})
			pieces := lang.Split(e.Example)
			for i, piece := range pieces {
				text := e.Example[piece.Span.Start:piece.Span.End]
				err := s.Run(context.Background(), "example", text, folder)
				switch last := i == len(pieces)-1; {
				case !last && err != nil:
					t.Fatalf("%s\n%s", text, out.String())
				case last && (err == nil || s.LastCode() != e.Code):
					t.Errorf("%s\ngives the code %q\n%s", text, s.LastCode(), out.String())
				case last && !strings.Contains(out.String(), "^"):
					t.Errorf("%s\nis told without its place:\n%s", text, out.String())
				}
			}
			if testing.Verbose() {
				t.Log(out.String())
			}
		})
	}
}

// TestCatalogCode: a damaged file of the catalog is told under the code catalog.
func TestCatalogCode(t *testing.T) {
	dir, ctx := filepath.Join(t.TempDir(), "kept"), context.Background()
	var out bytes.Buffer
	with := func(text string) string {
		c, err := catalog.Open(dir)
		if err != nil {
			t.Fatal(err)
		}
		defer c.Close()
		s := engine.New(c, engine.Options{Out: &out, Err: &out})
		if err := s.Run(ctx, "example", text, "testdata"); err != nil {
			return s.LastCode()
		}
		return ""
	}
	if code := with("CREATE TABLE log FROM 'log.csv';"); code != "" {
		t.Fatal(out.String())
	}
	damaged := 0
	err := filepath.WalkDir(dir, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() || !strings.Contains(path, "arrow") {
			return err
		}
		data, err := os.ReadFile(path)
		if err != nil {
			return err
		}
		for i := len(data) / 4; i < len(data)/2; i++ {
			data[i] ^= 0xff
		}
		damaged++
		return os.WriteFile(path, data, 0o600)
	})
	if err != nil || damaged == 0 {
		t.Fatalf("%d files damaged: %v", damaged, err)
	}
	out.Reset()
	if code := with("SELECT * FROM log;"); code != "catalog" || !strings.Contains(out.String(), "damaged") {
		t.Errorf("a damaged file is told under the code %q:\n%s", code, out.String())
	}
}
