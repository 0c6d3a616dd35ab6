package bind

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"io"
	"os"
	"path/filepath"

	"nearcell/catalog"
	"nearcell/engine/note"
)

// An object holds what its files held when it was imported. Where one of them is another
// by now, that is said wherever the object is used: the answer is that of the old file.

// sayChanged notes which of an object's files have changed since it was imported.
func (b *binder) sayChanged(o *catalog.Object) {
	if text := Changed(b.env.Folder, o); text != "" {
		b.say(note.Note, note.Import, "%s", text)
	}
}

// Changed says which of an object's files are no longer what was imported, "" for none.
// Relative paths start at folder. A file that is not there may lie elsewhere: it is none
// that has changed.
func Changed(folder string, o *catalog.Object) string {
	first, n := "", 0
	for _, f := range o.Sources {
		path := filepath.FromSlash(f.Path)
		if !filepath.IsAbs(path) {
			path = filepath.Join(folder, path)
		}
		if !changed(path, f) {
			continue
		}
		if first == "" {
			first = f.Path
		}
		n++
	}
	switch n {
	case 0:
		return ""
	case 1:
		return fmt.Sprintf("%s has changed since %s was made from it: CREATE OR REPLACE reads it anew", first, o.Name)
	}
	return fmt.Sprintf("%s and %d more of its files have changed since %s was made from them: CREATE OR REPLACE reads them anew", first, n-1, o.Name)
}

// mostToSum is how many bytes of a file with another time stamp and its old size are
// compared; a larger one counts as changed.
const mostToSum = 64 << 20

func changed(path string, was catalog.SourceFile) bool {
	info, err := os.Stat(path)
	if err != nil || !info.Mode().IsRegular() {
		return false
	}
	if info.Size() != was.Size {
		return true
	}
	if info.ModTime().Equal(was.ModTime) {
		return false
	}
	if info.Size() > mostToSum {
		return true
	}
	f, err := os.Open(path)
	if err != nil {
		return false
	}
	defer f.Close()
	sum := sha256.New()
	if _, err := io.Copy(sum, f); err != nil {
		return false
	}
	return hex.EncodeToString(sum.Sum(nil)) != was.SHA256
}
