package main

import (
	"go/parser"
	"go/token"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// arrows says for every room of the house which rooms it may import; a room that
// ends in /... stands for itself and all below it. What is not listed is forbidden.
var arrows = map[string][]string{
	"lang":                     {},
	"voronoi/predicate":        {},
	"voronoi/polyhedron":       {},
	"voronoi/index":            {},
	"voronoi/solid/planar":     {"voronoi/predicate"},
	"voronoi/solid":            {"voronoi/predicate", "voronoi/polyhedron", "voronoi/solid/planar"},
	"voronoi/solid/mesh":       {"voronoi/predicate", "voronoi/polyhedron", "voronoi/solid", "voronoi/solid/planar"},
	"voronoi/delaunay":         {"voronoi/predicate"},
	"voronoi/coverage":         {"voronoi", "voronoi/index", "voronoi/polyhedron", "voronoi/solid"},
	"voronoi/overlay":          {"voronoi", "voronoi/polyhedron", "voronoi/solid", "voronoi/solid/mesh"},
	"voronoi/field":            {"voronoi", "voronoi/delaunay", "voronoi/polyhedron", "voronoi/predicate", "voronoi/solid", "voronoi/solid/mesh"},
	"voronoi/section":          {"voronoi", "voronoi/polyhedron", "voronoi/solid"},
	"voronoi":                  {"voronoi/predicate", "voronoi/polyhedron", "voronoi/index", "voronoi/solid", "voronoi/delaunay"},
	"catalog/column":           {},
	"catalog/frame":            {},
	"catalog/reader":           {"catalog/column", "catalog/reader/timeform"},
	"catalog/reader/csv":       {"catalog/column", "catalog/reader", "catalog/reader/timeform"},
	"catalog/reader/packed":    {"catalog/reader"},
	"catalog/reader/xlsx":      {"catalog/reader", "catalog/reader/csv"},
	"catalog/reader/jsonl":     {"catalog/column", "catalog/reader", "catalog/reader/csv"},
	"catalog/reader/parquet":   {"catalog/column", "catalog/reader"},
	"catalog/reader/las":       {"catalog/column", "catalog/reader"},
	"catalog/reader/stl":       {"catalog/reader"},
	"catalog/reader/obj":       {"catalog/reader"},
	"catalog/reader/ply":       {"catalog/column", "catalog/reader"},
	"catalog/reader/timeform":  {},
	"catalog/store":            {"catalog/column"},
	"catalog":                  {"catalog/..."},
	"engine/problem":           {"lang"},
	"engine/note":              {},
	"engine/problem/catalogue": {},
	"engine/function":          {"catalog/column", "voronoi/delaunay"},
	"engine/expr":              {"catalog/column", "engine/function", "engine/problem", "lang"},
	"engine/diagram":           {"catalog/store", "voronoi/..."},
	"engine/relation":          {"catalog/column", "engine/diagram", "engine/note", "engine/problem", "engine/series", "engine/spatial", "lang", "voronoi/..."},
	"engine/series":            {},
	"engine/spatial":           {},
	"engine/plan": {"catalog/column", "engine/expr", "engine/function", "engine/problem", "engine/relation",
		"lang", "voronoi"},
	"engine/plan/plantest": {"catalog/column", "engine/...", "lang", "voronoi/..."},
	"engine/exec": {"catalog/column", "engine/expr", "engine/function", "engine/note", "engine/plan",
		"engine/problem", "engine/relation", "voronoi", "voronoi/delaunay", "voronoi/index"},
	"engine/bind": {"catalog/...", "engine/expr", "engine/function", "engine/note", "engine/plan", "engine/problem",
		"engine/relation", "lang", "voronoi/..."},
	"engine/present":      {"catalog/column"},
	"engine/vtu":          {"catalog/column", "voronoi"},
	"engine/view":         {"engine/draw"},
	"engine/report":       {"catalog/column", "engine/present"},
	"engine/browser":      {},
	"engine/draw":         {},
	"engine":              {"catalog/...", "engine/...", "lang", "voronoi/..."},
	"cmd/nearcell":        {"catalog/...", "cmd/nearcell/prompt", "engine/..."},
	"cmd/nearcell/prompt": {"catalog/...", "engine/...", "lang"},
	"cmd/demodata":        {},
	"cmd/kernelbench":     {"voronoi/..."},
}

// TestArrows keeps the arrows between the rooms: an import that is not listed
// above is an error, and so is a room that is not.
func TestArrows(t *testing.T) {
	root := filepath.Join("..", "..")
	imports := projectImports(t, root)
	if len(imports) < 10 {
		t.Fatalf("only %d rooms found below %s", len(imports), root)
	}
	for room, list := range imports {
		allowed, known := arrows[room]
		if !known {
			t.Errorf("the room %s has no line in this test: say what it may import", room)
			continue
		}
		for _, to := range list {
			if !slices.ContainsFunc(allowed, func(a string) bool { return covers(a, to) }) {
				t.Errorf("%s must not import %s", room, to)
			}
		}
	}
}

func covers(allowed, room string) bool {
	if below, all := strings.CutSuffix(allowed, "/..."); all {
		return room == below || strings.HasPrefix(room, below+"/")
	}
	return room == allowed
}

// projectImports lists for each folder with Go files (tests left out: they may
// reach further) what it imports of the project.
func projectImports(t *testing.T, root string) map[string][]string {
	t.Helper()
	found := map[string][]string{}
	err := filepath.WalkDir(root, func(file string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		name := d.Name()
		if d.IsDir() && file != root && (strings.HasPrefix(name, ".") || name == "testdata") {
			return filepath.SkipDir
		}
		if d.IsDir() || !strings.HasSuffix(name, ".go") || strings.HasSuffix(name, "_test.go") {
			return nil
		}
		relative, err := filepath.Rel(root, file)
		if err != nil {
			return err
		}
		room := path.Dir(filepath.ToSlash(relative))
		if found[room] == nil {
			found[room] = []string{}
		}
		source, err := os.ReadFile(file)
		if err != nil {
			return err
		}
		parsed, err := parser.ParseFile(token.NewFileSet(), file, source, parser.ImportsOnly)
		if err != nil {
			return err
		}
		for _, spec := range parsed.Imports {
			to, err := strconv.Unquote(spec.Path.Value)
			if err != nil {
				return err
			}
			if inside, of := strings.CutPrefix(to, "nearcell/"); of && !slices.Contains(found[room], inside) {
				found[room] = append(found[room], inside)
			}
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	return found
}
