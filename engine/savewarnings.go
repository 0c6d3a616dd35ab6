package engine

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"strings"

	"nearcell/engine/note"
	"nearcell/lang"
)

// warningsEnding is what the name of the file ends with that tells of warnings
// beside a saved one.
const warningsEnding = ".warnings.txt"

// warningsHead begins such a file; by it the program knows its own.
const warningsHead = "The numbers in %s are to be read with these warnings and notes (nearcell):\n"

// saveWarnings writes the warnings of a saved result beside it, with its notes:
// tables travel, and a terminal does not. Of a result without a warning no such
// file may stand there, either.
func (s *Session) saveWarnings(st *statement, t *lang.Save) error {
	name := t.To.Value + warningsEnding
	path := st.path(t.To.Value) + warningsEnding
	var text strings.Builder
	warned := false
	for _, l := range st.notes.Lines() {
		warned = warned || l.Level == note.Warning
		fmt.Fprintf(&text, "%s: %s\n", l.Level, l.Text)
	}
	head := fmt.Sprintf(warningsHead, t.To.Value)
	if !warned {
		return removeOwn(path, head)
	}
	st.notes.Add(note.Note, note.Output, "the warnings stand in %s, too", name)
	err := WriteAside(path, func(f *os.File) error {
		_, err := f.WriteString(head + text.String())
		return err
	})
	return fileProblem(err, st.at(t.To), name, "be written")
}

// removeOwn removes a file that begins with a text. One that does not is somebody
// else's.
func removeOwn(path, head string) error {
	data, err := os.ReadFile(path)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return nil
	case err != nil:
		return err
	case strings.HasPrefix(string(data), head):
		return os.Remove(path)
	}
	return nil
}

// warnOfInputs repeats the warnings with which the tables were made that a saved
// result reads: of steps kept by CREATE TABLE … AS (query).
func (s *Session) warnOfInputs(st *statement, t *lang.Save) {
	for _, in := range s.inputs(t) {
		for _, n := range in.Notes {
			if text, warned := strings.CutPrefix(n, warningMark); warned {
				st.notes.Add(note.Warning, note.Import, "%s was made with the warning: %s", in.Name, text)
			}
		}
	}
}
