package prompt

import (
	"bytes"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
)

// inText completes inside a text: a file, where the words before it say so.
func (c *completer) inText(whole, head string) (typed string, list []candidate) {
	list0 := scan(head, 0, -1)
	n := len(list0)
	for n > 0 && list0[n-1].kind == group { // the text is inside brackets
		list0 = list0[n-1].inner
		n = len(list0)
	}
	if n == 0 || list0[n-1].kind != text {
		return "", nil
	}
	typed = list0[n-1].text[1:]
	if n < 2 || !namesFile(list0[:n-1]) {
		return "", nil
	}
	return typed, c.files(typed, endingFor(list0[n-2]))
}

// filesBehind lists the files, with their opening quote, where one must be named.
func (c *completer) filesBehind(list []token) []candidate {
	if len(list) == 0 || !namesFile(list) {
		return nil
	}
	return c.files("'", endingFor(list[len(list)-1]))
}

// endingFor is the ending of the files that a word takes; "" for any.
func endingFor(t token) string {
	if t.is("RUN") {
		return ".ncell"
	}
	return ""
}

// namesFile tells whether a file's name follows.
func namesFile(list []token) bool {
	last := list[len(list)-1]
	if last.is("FROM") {
		return list[0].is("CREATE")
	}
	if last.is("TO") {
		return list[0].isOne("SAVE", "DRAW") || len(list) > 1 && list[len(list)-2].is("REFUSED")
	}
	return last.isOne("FILES", "FILE", "RUN", "PRISM", "MESH", "BOXES", "TERRAIN", "MATCHING")
}

// files lists the files and folders that a text begins to name. A leading ' is
// for a text that is not begun; a file closes it.
func (c *completer) files(typed, ending string) []candidate {
	quote := ""
	if rest, ok := strings.CutPrefix(typed, "'"); ok {
		quote, typed = "'", rest
	}
	folder, _ := filepath.Split(typed)
	where := folder
	if !filepath.IsAbs(folder) {
		where = filepath.Join(c.folder, folder)
	}
	entries, err := os.ReadDir(where)
	if err != nil {
		return nil
	}
	var list []candidate
	for _, e := range entries {
		name := e.Name()
		hidden := strings.HasPrefix(name, ".") && !strings.HasPrefix(typed[len(folder):], ".")
		if hidden || strings.ContainsAny(name, "\n\r\t") {
			continue
		}
		name = quote + folder + strings.ReplaceAll(name, "'", "''")
		switch {
		case isFolder(where, e):
			list = append(list, candidate{text: name + "/", exact: true})
		case strings.HasSuffix(e.Name(), ending):
			list = append(list, candidate{text: name + "'", exact: true})
		}
	}
	return list
}

func isFolder(where string, e os.DirEntry) bool {
	if e.Type()&os.ModeSymlink == 0 {
		return e.IsDir()
	}
	info, err := os.Stat(filepath.Join(where, e.Name()))
	return err == nil && info.IsDir()
}

// headingsOf guesses the columns of a file from its first line; none where it
// has no such line.
func headingsOf(folder, file string) []string {
	if file == "" {
		return nil
	}
	if !filepath.IsAbs(file) {
		file = filepath.Join(folder, filepath.FromSlash(file))
	}
	f, err := os.Open(file)
	if err != nil {
		return nil
	}
	defer f.Close()
	head := make([]byte, 1<<16)
	n, err := io.ReadFull(f, head)
	if err != nil && err != io.ErrUnexpectedEOF {
		return nil
	}
	line, _, _ := bytes.Cut(bytes.TrimPrefix(head[:n], []byte("\xef\xbb\xbf")), []byte("\n"))
	if bytes.IndexByte(line, 0) >= 0 {
		return nil // no text file
	}
	text := strings.TrimSpace(string(line))
	delimiter := slices.MaxFunc([]string{",", ";", "\t"}, func(a, b string) int {
		return strings.Count(text, a) - strings.Count(text, b)
	})
	var names []string
	for _, name := range strings.Split(text, delimiter) {
		if name = strings.Trim(strings.TrimSpace(name), `"`); name != "" {
			names = append(names, name)
		}
	}
	return names
}
