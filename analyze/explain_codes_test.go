package analyze_test

import (
	"go/ast"
	"go/parser"
	"go/token"
	"io/fs"
	"path/filepath"
	"regexp"
	"sort"
	"strconv"
	"strings"
	"testing"

	"portlight/dialect"
)

// promised are the codes that the specification of the notation promises.
var promised = strings.Fields(`syntax unknown-name
	name-taken name-like-unit never-wired wired-twice unit-mismatch unit-missing
	unit-unknown prefix-suspect frequency-kind
	not-dimensionless no-ground floating-node
	floating-island no-dc-path no-steady-state voltage-loop current-cutset capacitor-loop
	inductor-cutset initial-conflict
	coupling-range singular
	unstable hidden-mode rating-exceeded not-preferred stored-energy
	touch-voltage limit-broken limit-broken-in-tolerance`)

func TestPromisedCodesAreExplained(t *testing.T) {
	for _, code := range promised {
		if _, ok := dialect.Explain(dialect.Code(code)); !ok {
			t.Errorf("%s is not in the table", code)
		}
	}
}

// TestEveryReportedCodeIsExplained reads the sources: every string that
// becomes a code stands in the table, and every code of the table is used.
func TestEveryReportedCodeIsExplained(t *testing.T) {
	used := codesInSources(t, "../dialect", ".")
	if len(used) < 60 {
		t.Fatalf("only %d codes found in the sources: the search itself is broken", len(used))
	}
	for code, places := range used {
		if _, ok := dialect.Explain(dialect.Code(code)); !ok {
			t.Errorf("%s, used at %s, is not in the table", code, strings.Join(places, ", "))
		}
	}
	for _, e := range dialect.Explanations() {
		if used[string(e.Code)] == nil {
			t.Errorf("%s is in the table, and nothing reports it", e.Code)
		}
	}
}

// codeUses finds where the type Code is expected: by function and parameter,
// by struct and field.
type codeUses struct {
	parameters map[string]map[int]bool // of functions and methods, by name
	fields     map[string]map[int]bool // of structs, by position
	files      map[string]*ast.File
	set        *token.FileSet
	found      map[string][]string
}

func codesInSources(t *testing.T, folders ...string) map[string][]string {
	t.Helper()
	u := &codeUses{
		parameters: map[string]map[int]bool{}, fields: map[string]map[int]bool{},
		files: map[string]*ast.File{}, set: token.NewFileSet(), found: map[string][]string{},
	}
	for _, folder := range folders {
		err := filepath.WalkDir(folder, func(path string, d fs.DirEntry, err error) error {
			name := filepath.Base(path)
			if err != nil || d.IsDir() || !strings.HasSuffix(name, ".go") || strings.HasSuffix(name, "_test.go") ||
				strings.HasPrefix(name, "explain_") {
				return err
			}
			u.files[path], err = parser.ParseFile(u.set, path, nil, parser.SkipObjectResolution)
			return err
		})
		if err != nil {
			t.Fatal(err)
		}
	}
	u.declarations()
	u.uses()
	return u.found
}

func isCodeType(e ast.Expr) bool {
	switch e := e.(type) {
	case *ast.Ident:
		return e.Name == "Code"
	case *ast.SelectorExpr:
		return e.Sel.Name == "Code"
	case *ast.Ellipsis:
		return isCodeType(e.Elt)
	case *ast.ArrayType:
		return isCodeType(e.Elt)
	}
	return false
}

// positions lists which of a list of fields are codes.
func positions(list *ast.FieldList) map[int]bool {
	out := map[int]bool{}
	at := 0
	for _, f := range list.List {
		for range max(len(f.Names), 1) {
			if isCodeType(f.Type) {
				out[at] = true
			}
			at++
		}
	}
	return out
}

func (u *codeUses) declarations() {
	for _, file := range u.files {
		ast.Inspect(file, func(n ast.Node) bool {
			switch n := n.(type) {
			case *ast.FuncDecl:
				for at := range positions(n.Type.Params) {
					if u.parameters[n.Name.Name] == nil {
						u.parameters[n.Name.Name] = map[int]bool{}
					}
					u.parameters[n.Name.Name][at] = true // methods of several types share a name
				}
			case *ast.TypeSpec:
				if s, ok := n.Type.(*ast.StructType); ok {
					if p := positions(s.Fields); len(p) > 0 {
						u.fields[n.Name.Name] = p
					}
				}
			}
			return true
		})
	}
}

func (u *codeUses) uses() {
	for _, file := range u.files {
		ast.Inspect(file, func(n ast.Node) bool {
			switch n := n.(type) {
			case *ast.CallExpr:
				u.call(n)
			case *ast.CompositeLit:
				u.literal(n)
			case *ast.ValueSpec:
				if n.Type != nil && isCodeType(n.Type) {
					u.all(n.Values)
				}
			case *ast.AssignStmt:
				u.assignment(n)
			}
			return true
		})
	}
}

func nameOf(e ast.Expr) string {
	switch e := e.(type) {
	case *ast.Ident:
		return e.Name
	case *ast.SelectorExpr:
		return e.Sel.Name
	}
	return ""
}

func (u *codeUses) call(n *ast.CallExpr) {
	name := nameOf(n.Fun)
	if name == "Code" {
		u.all(n.Args)
	}
	last := -1
	for at := range u.parameters[name] {
		last = max(last, at)
		if at < len(n.Args) {
			u.text(n.Args[at])
		}
	}
	if name == "hasCode" && last >= 0 {
		u.all(n.Args[last:])
	}
}

func (u *codeUses) literal(n *ast.CompositeLit) {
	if n.Type != nil && isCodeType(n.Type) { // a list of codes
		u.all(n.Elts)
	}
	for at, e := range n.Elts {
		pair, keyed := e.(*ast.KeyValueExpr)
		switch {
		case keyed && (nameOf(pair.Key) == "Code" || nameOf(pair.Key) == "code"):
			u.text(pair.Value)
		case keyed:
			if inner, ok := pair.Value.(*ast.CompositeLit); ok && inner.Type == nil && isStructMap(n.Type) {
				u.positional(nameOf(n.Type.(*ast.MapType).Value), inner)
			}
		case u.fields[nameOf(n.Type)][at]:
			u.text(e)
		}
	}
}

func isStructMap(e ast.Expr) bool { _, ok := e.(*ast.MapType); return ok }

func (u *codeUses) positional(structure string, n *ast.CompositeLit) {
	for at, e := range n.Elts {
		if u.fields[structure][at] {
			u.text(e)
		}
	}
}

// assignment looks at what is put into a variable named code or a field Code.
func (u *codeUses) assignment(n *ast.AssignStmt) {
	for i, left := range n.Lhs {
		if name := nameOf(left); (name == "code" || name == "Code") && i < len(n.Rhs) {
			u.text(n.Rhs[i])
		}
	}
}

func (u *codeUses) all(list []ast.Expr) {
	for _, e := range list {
		u.text(e)
	}
}

var codeForm = regexp.MustCompile(`^[a-z]+(-[a-z]+)*$`)

func (u *codeUses) text(e ast.Expr) {
	literal, ok := e.(*ast.BasicLit)
	if !ok || literal.Kind != token.STRING {
		return
	}
	if code, err := strconv.Unquote(literal.Value); err == nil && codeForm.MatchString(code) {
		at := u.set.Position(literal.Pos())
		u.found[code] = append(u.found[code], filepath.Base(at.Filename)+":"+strconv.Itoa(at.Line))
		sort.Strings(u.found[code])
	}
}
