package lang

import (
	"errors"
	"go/ast"
	goparser "go/parser"
	"go/token"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"
)

// exactly compares trees to the letter, but for places and for empty against no lists.
var exactly = cmp.Options{cmpopts.IgnoreTypes(At{}, Span{}), cmpopts.EquateEmpty()}

func drawScript(t *rapid.T) *Script {
	g := &gen{t: t}
	return &Script{Statements: some(g, 1, 2, g.statement)}
}

// Law 1: what Print writes is read back as the same tree, to the letter.
func TestPrintThenParseGivesTheSameTree(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		want := drawScript(t)
		text := Print(want)
		got, err := Parse(text)
		if err != nil {
			t.Fatalf("%s\n%v", text, caretOf(text, err))
		}
		if diff := cmp.Diff(want, got, exactly); diff != "" {
			t.Fatalf("%s\n%s", text, diff)
		}
		if !Equal(want, got) {
			t.Fatalf("Equal says no: %s", text)
		}
	})
}

func caretOf(text string, err error) string {
	var fault *Error
	if errors.As(err, &fault) {
		return Caret("", text, fault.Span, fault.Error())
	}
	return err.Error()
}

// Law 2: blanks, comments and the case of bare words do not matter.
func TestLayoutAndCaseDoNotMatter(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		want := drawScript(t)
		text := relaid(t, Print(want))
		got, err := Parse(text)
		if err != nil {
			t.Fatalf("%s\n%v", text, caretOf(text, err))
		}
		if !Equal(want, got) {
			t.Fatalf("%s\nis read as\n%s", text, Print(got))
		}
	})
}

// relaid writes the tokens of a text with other blanks, with comments, and bare words in
// another case.
func relaid(t *rapid.T, text string) string {
	var b strings.Builder
	s := scanner{src: text, end: len(text)}
	for {
		kind, from, to := s.next()
		if kind == tokEOF {
			return b.String()
		}
		word := text[from:to]
		if isWord(kind) || isReserved(kind) {
			switch rapid.IntRange(0, 2).Draw(t, "case") {
			case 0:
				word = strings.ToLower(word)
			case 1:
				word = strings.ToUpper(word)
			}
		}
		b.WriteString(rapid.SampledFrom([]string{" ", "\n", "\t ", " -- it's a \"note\";\n", "/* ' ; */ ", "\r\n", "\u00a0"}).Draw(t, "gap"))
		b.WriteString(word)
	}
}

// Law 3: every node lies within its parent, and the text of an expression, a query, a
// relation, a solid or a source is read alone as the same thing.
func TestSpansCoverWhatTheyName(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := relaid(t, Print(drawScript(t)))
		script, err := Parse(text)
		if err != nil {
			t.Fatalf("%s\n%v", text, caretOf(text, err))
		}
		checkSpans(t, text, script)
	})
}

type fataler interface{ Fatalf(string, ...any) }

func checkSpans(t fataler, text string, root Node) {
	var within func(parent Node) func(Node)
	within = func(parent Node) func(Node) {
		return func(n Node) {
			if !parent.Span().Contains(n.Span()) || n.Span().Len() <= 0 {
				t.Fatalf("%s\n%T at %v does not lie in %T at %v", text, n, n.Span(), parent, parent.Span())
			}
			each(n, within(n))
		}
	}
	each(root, within(root))
	Walk(root, func(n Node) bool {
		checkAlone(t, text, n)
		return true
	})
}

// checkAlone reads the text of a node by itself.
func checkAlone(t fataler, text string, n Node) {
	own := text[n.Span().Start:n.Span().End]
	var again Node
	var err error
	switch n := n.(type) {
	case Expr:
		again, err = ParseExpr(own)
	case *Query:
		again, err = ParseQuery(own)
	case *Relation:
		again, err = ParseRelation(own)
	case Solid:
		again, err = ParseSolid(own)
	case Statement:
		var script *Script
		if script, err = Parse(own); err == nil {
			again = script.Statements[0]
		}
	case Source:
		var q *Query
		if q, err = ParseQuery("SELECT * FROM " + own); err == nil {
			again = q.Body.(*Select).From[0]
		}
	case *Name:
		if want := own == n.Text || own == quoteName(n.Text); !want {
			t.Fatalf("%s\nthe name %q stands at %q", text, n.Text, own)
		}
		return
	default:
		return
	}
	if err != nil || !Equal(n, again) {
		t.Fatalf("%s\n%T at %q alone: %v", text, n, own, err)
	}
}

// Law 4: Walk reaches every node that the structs hold, and no other, in order.
func TestWalkReachesEverything(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		script := drawScript(t)
		var walked, held []Node
		Walk(script, func(n Node) bool { walked = append(walked, n); return true })
		collect(reflect.ValueOf(script), &held)
		if len(walked) != len(held) {
			t.Fatalf("%s\nwalked %d nodes of %d", Print(script), len(walked), len(held))
		}
		seen := map[Node]bool{}
		for _, n := range held {
			seen[n] = true
		}
		for _, n := range walked {
			if !seen[n] {
				t.Fatalf("%s\nwalked to a %T that nothing holds", Print(script), n)
			}
		}
	})
}

// collect finds the nodes below a value by reflection.
func collect(v reflect.Value, found *[]Node) {
	switch v.Kind() {
	case reflect.Pointer, reflect.Interface:
		if v.IsNil() {
			return
		}
		if v.Kind() == reflect.Pointer {
			if n, isNode := v.Interface().(Node); isNode {
				*found = append(*found, n)
			}
		}
		collect(v.Elem(), found)
	case reflect.Slice:
		for i := range v.Len() {
			collect(v.Index(i), found)
		}
	case reflect.Struct:
		for i := range v.NumField() {
			f := v.Field(i)
			if name, isName := f.Interface().(Name); isName {
				if !name.IsZero() {
					*found = append(*found, f.Addr().Interface().(Node))
				}
				continue
			}
			collectNames(f, found)
		}
	}
}

// collectNames takes the elements of a list of names one by one; anything else goes on.
func collectNames(v reflect.Value, found *[]Node) {
	if v.Type() != reflect.TypeFor[[]Name]() {
		collect(v, found)
		return
	}
	for i := range v.Len() {
		*found = append(*found, v.Index(i).Addr().Interface().(Node))
	}
}

// The random trees hold every struct of the tree, or the laws above would say less than
// they seem to.
func TestRandomTreesHoldEveryNode(t *testing.T) {
	missing := nodeTypes(t)
	trees := rapid.Custom(func(t *rapid.T) *Script { return drawScript(t) })
	for seed := 0; seed < 4000 && len(missing) > 0; seed++ {
		Walk(trees.Example(seed), func(n Node) bool {
			delete(missing, reflect.TypeOf(n).Elem().Name())
			return true
		})
	}
	for name := range missing {
		t.Errorf("no random tree holds a %s", name)
	}
}

// nodeTypes reads the names of all structs that embed At from the source of the tree.
func nodeTypes(t *testing.T) map[string]bool {
	types := map[string]bool{}
	files, err := filepath.Glob("ast*.go")
	if err != nil || len(files) < 6 {
		t.Fatalf("the source of the tree is not here: %v %v", files, err)
	}
	for _, file := range files {
		parsed, err := goparser.ParseFile(token.NewFileSet(), file, nil, 0)
		if err != nil {
			t.Fatal(err)
		}
		ast.Inspect(parsed, func(n ast.Node) bool {
			spec, ok := n.(*ast.TypeSpec)
			if !ok {
				return true
			}
			if s, isStruct := spec.Type.(*ast.StructType); isStruct && len(s.Fields.List) > 0 {
				if id, ok := s.Fields.List[0].Type.(*ast.Ident); ok && id.Name == "At" && len(s.Fields.List[0].Names) == 0 {
					types[spec.Name.Name] = true
				}
			}
			return true
		})
	}
	if len(types) < 100 {
		t.Fatalf("only %d structs found", len(types))
	}
	return types
}
