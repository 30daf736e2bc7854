package analyze_test

import (
	"fmt"
	"go/parser"
	"go/token"
	"io/fs"
	"path"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

// The arrows run one way: cmd → lsp → analyze → dialect.
var layers = []string{"dialect", "analyze", "lsp", "cmd"}

// arithmetic packages know nothing of the notation and do no input or output.
var arithmetic = []string{
	"dialect/number", "analyze/exact", "analyze/float", "analyze/network", "analyze/response", "analyze/frequency", "analyze/symbolic",
}

// outside are packages that read, write or speak to others.
var outside = []string{"os", "net", "log", "io/ioutil", "io/fs", "bufio", "syscall", "embed", "path/filepath"}

// below the server nothing speaks of URIs, JSON or editors.
var editorial = []string{"net/url", "encoding/json", "go.lsp.dev", "github.com/fsnotify", "github.com/spf13", "github.com/owenrumney"}

func layerOf(folder string) int {
	first, _, _ := strings.Cut(folder, "/")
	for i, l := range layers {
		if l == first {
			return i
		}
	}
	return -1
}

func within(name string, list []string) bool {
	for _, l := range list {
		if name == l || strings.HasPrefix(name, l+"/") {
			return true
		}
	}
	return false
}

// forbidden says why a file in a folder of the module may not import a package.
func forbidden(folder, file, imported string) string {
	inner, own := strings.CutPrefix(imported, "portlight/")
	isArithmetic := within(folder, arithmetic)
	switch {
	case own && layerOf(inner) > layerOf(folder):
		return fmt.Sprintf("%s lies above %s", inner, folder)
	case own && isArithmetic && !within(inner, arithmetic) && inner != folder:
		return fmt.Sprintf("%s must not know %s", folder, inner)
	case own && strings.HasPrefix(folder, "dialect") && strings.HasPrefix(inner, "analyze"):
		return "the notation must not know the analysis"
	case own, within(folder, []string{"analyze/internal"}): // programs for measuring
		return ""
	case isArithmetic && (within(imported, outside) || within(imported, editorial)):
		return folder + " does no input or output"
	case layerOf(folder) <= 1 && within(imported, editorial) && !(folder == "analyze" && imported == "encoding/json" && strings.HasPrefix(file, "render")):
		return imported + " belongs above the analysis"
	case layerOf(folder) <= 1 && within(imported, outside) && imported != "path/filepath":
		return "files are handed in from outside"
	}
	return ""
}

// imports walks the sources of the module, tests left out.
func imports(t *testing.T, visit func(folder, file, imported string)) {
	t.Helper()
	set := token.NewFileSet()
	for _, layer := range layers {
		err := filepath.WalkDir(filepath.Join("..", layer), func(name string, d fs.DirEntry, err error) error {
			if err != nil || d.IsDir() || !strings.HasSuffix(name, ".go") || strings.HasSuffix(name, "_test.go") {
				return err
			}
			f, err := parser.ParseFile(set, name, nil, parser.ImportsOnly)
			if err != nil {
				return err
			}
			slashed := strings.TrimPrefix(filepath.ToSlash(name), "../")
			for _, spec := range f.Imports {
				imported, err := strconv.Unquote(spec.Path.Value)
				if err != nil {
					return err
				}
				visit(path.Dir(slashed), path.Base(slashed), imported)
			}
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
	}
}

func TestImportsRunOneWay(t *testing.T) {
	seen := map[string]bool{}
	imports(t, func(folder, file, imported string) {
		seen[folder] = true
		if why := forbidden(folder, file, imported); why != "" {
			t.Errorf("%s/%s imports %s: %s", folder, file, imported, why)
		}
	})
	for _, folder := range append([]string{"dialect", "analyze", "lsp", "cmd/portlight"}, arithmetic...) {
		if !seen[folder] && folder != "analyze/symbolic" {
			t.Errorf("no source was seen in %s: the walk is broken", folder)
		}
	}
}

// The test itself is tested: each rule bites.
func TestImportRulesBite(t *testing.T) {
	for _, c := range []struct {
		folder, file, imported string
		allowed                bool
	}{
		{"dialect", "check.go", "portlight/analyze", false},
		{"dialect", "check.go", "encoding/json", false},
		{"dialect", "check.go", "os", false},
		{"dialect/number", "exact.go", "portlight/dialect", false},
		{"analyze", "ask.go", "portlight/lsp", false},
		{"analyze", "ask.go", "encoding/json", false},
		{"analyze", "ask.go", "go.lsp.dev/protocol", false},
		{"analyze/exact", "poly.go", "portlight/dialect", false},
		{"analyze/exact", "poly.go", "portlight/analyze", false},
		{"analyze/network", "stamp.go", "os", false},
		{"lsp", "serve.go", "portlight/cmd/portlight", false},
		{"lsp/files", "store.go", "portlight/cmd/portlight", false},
		{"cmd/portlight", "main.go", "portlight/lsp", true},
		{"lsp", "serve.go", "portlight/analyze", true},
		{"lsp/files", "store.go", "os", true},
		{"analyze", "ask.go", "portlight/dialect", true},
		{"analyze", "render_json.go", "encoding/json", true},
		{"analyze/exact", "poly.go", "portlight/dialect/number", true},
		{"analyze/response", "solve.go", "portlight/analyze/network", true},
		{"dialect", "check.go", "portlight/dialect/number", true},
	} {
		if why := forbidden(c.folder, c.file, c.imported); (why == "") != c.allowed {
			t.Errorf("%s importing %s: %q", c.folder, c.imported, why)
		}
	}
}
