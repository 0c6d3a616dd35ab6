package engine

import (
	"errors"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strings"

	"nearcell/engine/problem"
	"nearcell/lang"
)

// matching are the files that the pattern of FROM FILES names, as the pattern
// writes them, in name order.
func matching(st *statement, pattern *lang.Text) ([]string, error) {
	found, err := filepath.Glob(globOf(st, pattern))
	if errors.Is(err, filepath.ErrBadPattern) {
		return nil, problem.New("no-file", st.at(pattern), "'%s' is no pattern of file names", pattern.Value).
			WithHint("* stands for any characters, ? for one, [ab] for one of these").Because(err)
	}
	if err != nil {
		return nil, err
	}
	var names []string
	for _, path := range found {
		if info, err := os.Stat(path); err == nil && info.IsDir() {
			continue
		}
		names = append(names, asWritten(st, pattern, path))
	}
	slices.Sort(names)
	if len(names) > 0 {
		return names, nil
	}
	folder := filepath.Dir(st.path(pattern.Value))
	shown := filepath.ToSlash(filepath.Dir(filepath.FromSlash(pattern.Value)))
	p := problem.New("no-file", st.at(pattern), "no file in the folder '%s' is called '%s'", shown, filepath.Base(pattern.Value))
	entries, err := os.ReadDir(folder)
	switch {
	case err != nil && !strings.ContainsAny(shown, "*?["):
		return nil, problem.New("no-file", st.at(pattern), "there is no folder '%s'", shown).
			WithHint("a relative path starts at the script's folder").Because(err)
	case len(entries) > 0:
		var have []string
		for _, e := range entries {
			have = append(have, e.Name())
		}
		return nil, p.WithHint("it has %s", listed(have, 5))
	}
	return nil, p
}

// globOf is the pattern with its folder; what is special in the folder's own name
// is not special there.
func globOf(st *statement, pattern *lang.Text) string {
	p := filepath.FromSlash(pattern.Value)
	if filepath.IsAbs(p) {
		return p
	}
	folder := st.folder
	if runtime.GOOS != "windows" { // where \ divides folders there is no escape
		folder = strings.NewReplacer(`\`, `\\`, `*`, `\*`, `?`, `\?`, `[`, `\[`).Replace(folder)
	}
	return filepath.Join(folder, p)
}

// asWritten takes the script's folder off a path again.
func asWritten(st *statement, pattern *lang.Text, path string) string {
	if filepath.IsAbs(filepath.FromSlash(pattern.Value)) {
		return path
	}
	if rel, err := filepath.Rel(st.folder, path); err == nil {
		return filepath.ToSlash(rel)
	}
	return path
}

// matches reports whether a path, there or not, is one that the pattern names.
func matches(st *statement, pattern *lang.Text, path string) bool {
	ok, err := filepath.Match(globOf(st, pattern), path)
	return err == nil && ok
}
