package catalogue_test

import (
	"go/ast"
	"go/parser"
	"go/token"
	"io/fs"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"nearcell/engine/problem/catalogue"
)

// makers are the functions that take a code, with its place among the arguments.
var makers = map[string]int{"New": 0, "rowFault": 1, "rowError": 1, "wrong": 1}

// packageOf is how those of other packages are called.
var packageOf = map[string]string{"New": "problem"}

// found are the codes that the source uses, each with a place where it does.
type found struct {
	t     *testing.T
	files *token.FileSet
	codes map[string]string
	// named are the constants that are given as codes, texts the constants that
	// there are, both by name.
	named, texts map[string]string
	calls        int
}

func (f *found) code(e ast.Expr) {
	switch e := e.(type) {
	case *ast.BasicLit:
		if code, err := strconv.Unquote(e.Value); err == nil && code != "" {
			f.codes[code] = f.files.Position(e.Pos()).String()
		}
	case *ast.Ident:
		if e.Name != "code" { // which is passed on
			f.named[e.Name] = f.files.Position(e.Pos()).String()
		}
	case *ast.SelectorExpr:
		if !strings.HasPrefix(e.Sel.Name, "Code") {
			f.t.Errorf("%s: %s is no code that can be read", f.files.Position(e.Pos()), e.Sel.Name)
		}
	default:
		f.t.Errorf("%s: a code is written out, so that it can be found", f.files.Position(e.Pos()))
	}
}

// visit collects the codes of a node.
func (f *found) visit(n ast.Node) bool {
	switch n := n.(type) {
	case *ast.CallExpr:
		name, in := calledName(n)
		if at, ok := makers[name]; ok && at < len(n.Args) && in == packageOf[name] {
			f.calls++
			f.code(n.Args[at])
		}
		if lit, ok := firstArgument(n).(*ast.BasicLit); ok && name == "New" && in == "" { // in the package itself
			f.code(lit)
		}
	case *ast.KeyValueExpr:
		if key, ok := n.Key.(*ast.Ident); ok && key.Name == "Code" {
			f.code(n.Value)
		}
	case *ast.AssignStmt:
		for i, to := range n.Lhs {
			if i < len(n.Rhs) && isCode(to) {
				f.code(n.Rhs[i])
			}
		}
	case *ast.ValueSpec:
		for i, name := range n.Names {
			if i >= len(n.Values) {
				continue
			}
			if text, ok := n.Values[i].(*ast.BasicLit); ok && text.Kind == token.STRING {
				f.texts[name.Name], _ = strconv.Unquote(text.Value)
			}
			if strings.HasPrefix(name.Name, "Code") {
				f.code(n.Values[i])
			}
		}
	}
	return true
}

// isCode tells whether what is assigned to is the code of an error.
func isCode(e ast.Expr) bool {
	field, ok := e.(*ast.SelectorExpr)
	return ok && field.Sel.Name == "Code"
}

func firstArgument(c *ast.CallExpr) ast.Expr {
	if len(c.Args) == 0 {
		return nil
	}
	return c.Args[0]
}

func calledName(c *ast.CallExpr) (name, in string) {
	switch f := c.Fun.(type) {
	case *ast.Ident:
		return f.Name, ""
	case *ast.SelectorExpr:
		if x, ok := f.X.(*ast.Ident); ok {
			return f.Sel.Name, x.Name
		}
	}
	return "", ""
}

// TestSource: every code of the source is documented, and no other.
func TestSource(t *testing.T) {
	f := &found{t: t, files: token.NewFileSet(), codes: map[string]string{}, named: map[string]string{}, texts: map[string]string{}}
	for _, room := range []string{"../..", "../../../cmd/nearcell"} {
		err := filepath.WalkDir(room, func(path string, d fs.DirEntry, err error) error {
			if err != nil {
				return err
			}
			if d.IsDir() && (d.Name() == "testdata" || d.Name() == "catalogue") {
				return filepath.SkipDir
			}
			if d.IsDir() || !strings.HasSuffix(path, ".go") || strings.HasSuffix(path, "_test.go") {
				return nil
			}
			file, err := parser.ParseFile(f.files, path, nil, 0)
			if err != nil {
				return err
			}
			ast.Inspect(file, f.visit)
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
	}
	if f.calls < 100 {
		t.Fatalf("only %d errors found in the source", f.calls)
	}
	for name, at := range f.named {
		if f.texts[name] == "" {
			t.Errorf("%s: %s is no code that can be read", at, name)
		}
		f.codes[f.texts[name]] = at
	}
	for code, at := range f.codes {
		if _, ok := catalogue.Lookup(code); !ok {
			t.Errorf("%s: the code %q has no entry in the catalogue", at, code)
		}
	}
	seen := map[string]bool{}
	for _, e := range catalogue.All() {
		if f.codes[e.Code] == "" {
			t.Errorf("the catalogue has the code %q, which nothing uses", e.Code)
		}
		if seen[e.Code] {
			t.Errorf("the catalogue has the code %q twice", e.Code)
		}
		seen[e.Code] = true
	}
}
