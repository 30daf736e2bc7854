package dialect

import (
	"errors"
	"fmt"
	"math/big"
	"path/filepath"
	"strings"
	"sync"

	"portlight/dialect/number"
)

// Reader hands in the file that a use statement names: from disk, from an
// open buffer, from a test's map. The path is that of the statement, joined
// to the folder of the file it stands in. An error makes a finding.
type Reader func(path string) (*File, error)

// Checked is a checked description: what a main file and the files it uses
// say, what is wrong with them, and what their names mean. It is immutable
// and safe for concurrent use.
type Checked struct {
	Main  *File
	Files []*File // the main file first, then the used ones
	// Description is never nil; see its Faults.
	Description *Description
	// Findings of parsing and checking, in order of the text: the main file's,
	// then those of the used files' lets and subnetworks.
	Findings []Finding

	main         *unit
	units        []*unit
	table        *symbolTable
	builder      *builder
	allowed      map[Code]Origin
	expectations map[*File][]Expectation
	questions    sync.Mutex
}

// checker holds the state of one check.
type checker struct {
	read         Reader
	units        []*unit
	byFile       map[*File]*unit
	byPath       map[string]*unit
	table        *symbolTable
	findings     []*Finding
	seen         map[findingKey]bool
	expectations map[*File][]Expectation
	numbers      map[string]operand // numbers with their units, as evaluated before
	tolerances   map[toleranceKey]*Tolerance
	angular      map[*big.Rat]number.Exact // frequencies in hertz, times 2π
	suggested    int                       // searches for misspelt names so far
	faults       bool
	harmless     bool // an error now leaves nothing out of the network
	blame        *blame
}

// Check looks up every name, checks every unit and works out the network that
// the main file describes. It never fails: what is wrong is in the findings.
// read may be nil when no file is used.
func Check(main *File, read Reader) *Checked {
	c := &checker{
		read: read, byFile: map[*File]*unit{}, byPath: map[string]*unit{},
		table: &symbolTable{uses: map[*File][]SymbolUse{}}, seen: map[findingKey]bool{},
		expectations: map[*File][]Expectation{}, numbers: map[string]operand{},
		tolerances: map[toleranceKey]*Tolerance{}, angular: map[*big.Rat]number.Exact{}, blame: newBlame(),
	}
	first := c.load(main, filepath.Clean(main.Name))
	first.main = true
	for _, u := range c.units {
		c.importNames(u)
	}
	for _, u := range c.units {
		c.harmless = !u.main
		c.link(u.scope)
	}
	c.harmless = false
	for _, u := range c.units {
		c.checkBodies(u)
	}
	b := newBuilder(c)
	b.buildMain(first)
	return c.result(first, b)
}

// load takes in a file and, depth first, those it uses.
func (c *checker) load(f *File, path string) *unit {
	u := &unit{file: f, path: path, main: len(c.units) == 0}
	c.units = append(c.units, u)
	c.byFile[f], c.byPath[path] = u, u
	u.scope = c.newScope(u, f.Statements)
	u.scope.imported = map[string]*Symbol{}
	u.doing = true
	c.harmless = true // what a missing file leaves out is told where it is used
	for _, st := range f.Statements {
		if use, ok := st.(*UseFileStatement); ok {
			c.follow(u, use)
		}
	}
	u.doing = false
	c.harmless = !u.main
	c.declare(u.scope)
	c.harmless = false
	return u
}

// follow reads the file that a use statement names.
func (c *checker) follow(u *unit, st *UseFileStatement) {
	if st.Path.Value == "" {
		u.used = append(u.used, nil)
		return
	}
	path := st.Path.Value
	if !filepath.IsAbs(path) {
		path = filepath.Join(filepath.Dir(u.path), path)
	}
	link := FileLink{Span: st.Path.Span, Path: path}
	used := c.byPath[filepath.Clean(path)]
	switch {
	case used == nil:
		used = c.readUsed(u, st, path)
	case used.doing:
		c.report(u.file, st.Path.Span, "use-cycle", "%s uses itself%s: take this line out of one of the files",
			filepath.Base(used.path), through(used, u))
	}
	if used != nil {
		link.File = used.file
	}
	u.links = append(u.links, link)
	u.used = append(u.used, used)
}

func through(used, u *unit) string {
	if used == u {
		return ""
	}
	return " through " + filepath.Base(u.path)
}

// maxFiles bounds how many files one description is made of.
const maxFiles = 500

func (c *checker) readUsed(u *unit, st *UseFileStatement, path string) *unit {
	var f *File
	err := errors.New("no files can be read here")
	if len(c.units) >= maxFiles {
		err = fmt.Errorf("the description uses more than %d files", maxFiles)
	} else if c.read != nil {
		f, err = c.read(path)
	}
	if err != nil || f == nil {
		why := "it is not there"
		if err != nil {
			why = err.Error()
		}
		c.report(u.file, st.Path.Span, "file-missing", "%s cannot be read: %s", st.Path.Value, why)
		return nil
	}
	if known := c.byFile[f]; known != nil {
		return known
	}
	return c.load(f, filepath.Clean(path))
}

// importNames enters the lets and subnetworks of the files that one uses.
func (c *checker) importNames(u *unit) {
	i := -1
	for _, st := range u.file.Statements {
		use, ok := st.(*UseFileStatement)
		if !ok {
			continue
		}
		if i++; i >= len(u.used) || u.used[i] == nil || u.used[i] == u {
			continue
		}
		for _, sym := range u.used[i].scope.symbols {
			if (sym.Sort == LetSymbol || sym.Sort == SubnetworkSymbol) && sym.Name != "" {
				c.importName(u, use, sym)
			}
		}
	}
}

func (c *checker) importName(u *unit, use *UseFileStatement, sym *Symbol) {
	if own := u.scope.names[sym.Name]; own != nil {
		f := c.report(u.file, own.Span, "name-taken", "%s is also the name of a %s in %s, which this file uses",
			own.Name, sym.Sort, filepath.Base(sym.File.Name))
		f.relate(sym.File, sym.Span, "the %s %s of %s", sym.Sort, sym.Name, filepath.Base(sym.File.Name))
		return
	}
	if other := u.scope.imported[sym.Name]; other != nil && other != sym {
		f := c.report(u.file, use.Path.Span, "name-taken", "%s and %s both define %s",
			filepath.Base(other.File.Name), filepath.Base(sym.File.Name), sym.Name)
		f.relate(other.File, other.Span, "one %s", sym.Name)
		f.relate(sym.File, sym.Span, "the other %s", sym.Name)
		return
	}
	if _, taken := u.scope.imported[sym.Name]; !taken {
		u.scope.imported[sym.Name] = sym
	}
}

// result puts everything together.
func (c *checker) result(main *unit, b *builder) *Checked {
	checked := &Checked{
		Main: main.file, Description: b.d, main: main, units: c.units, table: c.table,
		builder: b, allowed: b.allowed, expectations: c.expectations,
	}
	b.d.Faults = c.faults
	for _, u := range c.units {
		checked.Files = append(checked.Files, u.file)
	}
	for _, u := range c.units {
		for _, f := range u.file.Findings {
			if !c.muted(f.Origin) {
				c.findings = append(c.findings, &f)
			}
		}
	}
	c.table.sort()
	c.findings = c.withoutEchoes(c.findings)
	for _, f := range c.sortFindings() {
		if f.Severity == Error || !checked.Allowed(f.Code) {
			checked.Findings = append(checked.Findings, f)
		}
	}
	return checked
}

// Allowed says that the main file accepts findings of a code, other than
// errors: allow CODE because "reason".
func (c *Checked) Allowed(code Code) bool {
	_, ok := c.allowed[code]
	return ok
}

// FaultyAt says that an error is told inside a place, such as a question's or
// a limit's line.
func (c *Checked) FaultyAt(o Origin) bool {
	for _, f := range c.Findings {
		s := f.Origin.Span
		if f.Severity == Error && f.Origin.File == o.File && s.Start >= o.Span.Start && s.End <= o.Span.End {
			return true
		}
	}
	return false
}

// Keep drops the findings that the main file accepts.
func (c *Checked) Keep(findings []Finding) []Finding {
	var kept []Finding
	for _, f := range findings {
		if f.Severity == Error || !c.Allowed(f.Code) {
			kept = append(kept, f)
		}
	}
	return kept
}

// Question reads and checks one question from outside the file: what may
// follow tell. With findings of severity error the question is nil.
func (c *Checked) Question(text string) (*Question, []Finding) {
	c.questions.Lock()
	defer c.questions.Unlock()
	file := ParseQuestion("question", text)
	if len(file.Statements) != 1 {
		return nil, append(file.Findings, Finding{
			Code: "syntax", Severity: Error, Message: "this is no question: write what may follow tell",
			Origin: Origin{File: file, Span: Span{0, len(text)}},
		})
	}
	tell, ok := file.Statements[0].(*TellStatement)
	if !ok {
		return nil, file.Findings
	}
	for _, f := range file.Findings {
		if f.Severity == Error {
			return nil, file.Findings
		}
	}
	q, findings := c.builder.question(c.main, file, tell)
	findings = append(file.Findings, findings...)
	for _, f := range findings {
		if f.Severity == Error {
			return nil, findings
		}
	}
	q.Text = strings.TrimSpace(text)
	return q, findings
}
