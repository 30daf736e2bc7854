package dialect

import "fmt"

// blame finds out whose error it is that an expression has no value: that of
// the name first met, or of what that name's own line rests on.
type blame struct {
	culprit *Symbol             // met in what is being worked out; nil for none
	roots   map[*Symbol]*Symbol // whose error it is that a name has no value
}

func newBlame() *blame { return &blame{roots: map[*Symbol]*Symbol{}} }

// meet notes that a name without a value was met.
func (m *blame) meet(sym *Symbol) {
	if m.culprit != nil {
		return
	}
	m.culprit = sym
	if root := m.roots[sym]; root != nil {
		m.culprit = root
	}
}

// around works out the value of a name, and notes whose error it is when it
// has none.
func (m *blame) around(sym *Symbol, work func() operand) operand {
	outer := m.culprit
	m.culprit = nil
	o := work()
	if !o.ok {
		m.roots[sym] = sym
		if m.culprit != nil {
			m.roots[sym] = m.culprit
		}
	}
	m.culprit = outer
	return o
}

// why tells what stands in the way of a question or limit; own says that its
// own line has an error.
func (m *blame) why(own bool) string {
	if own {
		return "its own line has an error"
	}
	if m.culprit == nil {
		return "the network is not complete because of the errors reported"
	}
	sym := m.culprit
	return fmt.Sprintf("the line that defines the %s %s has an error", sym.describe(), sym.Name)
}

// errorIn says that something has been told about the line of a statement.
func (b *builder) errorIn(inst *instance, st Statement) bool {
	head := st.Headline()
	file := inst.scope.unit.file
	if head.Broken || b.c.brokenAt(Origin{File: file, Span: Span{head.Span.Start, head.Span.Start}}) {
		return true
	}
	for _, f := range b.c.findings {
		s := f.Origin.Span
		if f.Severity == Error && f.Origin.File == file && s.Start >= head.Span.Start && s.End <= head.Span.End {
			return true
		}
	}
	return false
}
