package analyze

import (
	"fmt"
	"reflect"
	"strings"

	"portlight/dialect"
	"portlight/dialect/number"
)

// arithmetic is what is computed about a network, whatever the places in the
// text: it can serve the next version of the text too, when that describes
// the same network.
type arithmetic struct {
	models models
	memo   memo
}

// NewAfter is New for the next version of a text. Where both versions
// describe the same network (comments, questions and layout may differ), what
// the previous analysis has computed about it is used again.
func NewAfter(checked *dialect.Checked, previous *Analysis) *Analysis {
	a := New(checked)
	if previous != nil {
		a.previous = previous.Computed()
	}
	return a
}

// Computed is this analysis if anything has been computed on it, else the
// latest before it that has, nil if none: one that was asked nothing is not
// worth keeping.
func (a *Analysis) Computed() *Analysis {
	a.sharing.Lock()
	defer a.sharing.Unlock()
	if a.common != nil {
		return a
	}
	return a.previous
}

// shared gives the arithmetic of this network, on first use the previous
// version's when the network is the same.
func (a *Analysis) shared() *arithmetic {
	a.sharing.Lock()
	defer a.sharing.Unlock()
	if a.common == nil {
		if p := a.previous; p != nil && sameNetwork(a.description, p.description) {
			a.common = p.shared()
		} else {
			a.common = &arithmetic{}
		}
		a.previous = nil // or every version would keep the one before
	}
	return a.common
}

// sameNetwork tells whether two descriptions have the same nodes, parts,
// ports and functions, by index and name, places in the text aside.
func sameNetwork(d, e *dialect.Description) bool {
	if len(d.Nodes) != len(e.Nodes) || len(d.Parts) != len(e.Parts) || len(d.Ports) != len(e.Ports) ||
		len(d.Functions) != len(e.Functions) || d.Ground != e.Ground || d.Steady != e.Steady || d.Faults != e.Faults {
		return false
	}
	for i := range d.Nodes {
		if d.Nodes[i].Name != e.Nodes[i].Name || d.Nodes[i].Ported != e.Nodes[i].Ported {
			return false
		}
	}
	for i := range d.Ports {
		p, q := d.Ports[i], e.Ports[i]
		if p.Name != q.Name || p.Plus != q.Plus || p.Minus != q.Minus {
			return false
		}
	}
	for i := range d.Functions {
		if d.Functions[i].Name != e.Functions[i].Name || expressionKey(d.Functions[i].Value) != expressionKey(e.Functions[i].Value) {
			return false
		}
	}
	for i := range d.Parts {
		if !reflect.DeepEqual(placeless(d.Parts[i]), placeless(e.Parts[i])) {
			return false
		}
	}
	return true
}

// placeless is a part without its places in the text.
func placeless(p dialect.Part) dialect.Part {
	p.Origin, p.NameSpan, p.Wired = dialect.Origin{}, dialect.Span{}, dialect.Origin{}
	return p
}

// expressionKey writes an expression so that equal keys mean equal values.
func expressionKey(e dialect.Expression) string {
	var b strings.Builder
	writeKey(&b, e)
	return b.String()
}

func writeKey(b *strings.Builder, e dialect.Expression) {
	if e == nil {
		b.WriteString("nothing")
		return
	}
	fmt.Fprintf(b, "(%v%v", e.Dim(), e.Shape())
	defer b.WriteByte(')')
	switch e := e.(type) {
	case *dialect.Constant:
		fmt.Fprintf(b, "%s %v", numberKey(e.Value), e.Hertz)
	case *dialect.Variable:
		b.WriteString(e.Name)
	case *dialect.Negate:
		b.WriteByte('-')
		writeKey(b, e.X)
	case *dialect.Binary:
		b.WriteByte(e.Op)
		writeKey(b, e.X)
		writeKey(b, e.Y)
	case *dialect.Call:
		fmt.Fprintf(b, "%s %d", e.Name, e.Part)
		for _, x := range e.Args {
			writeKey(b, x)
		}
	case *dialect.Quantity:
		b.WriteString(probeKey(e.Probe))
	case *dialect.FunctionValue:
		fmt.Fprintf(b, "function %d", e.Function)
	case *dialect.At:
		writeKey(b, e.X)
		writeKey(b, e.Where)
	default:
		fmt.Fprintf(b, "%p", e) // never equal to another
	}
}

func numberKey(x number.Exact) string {
	return x.Rat().RatString() + "±" + x.Bound().RatString()
}

// limitKey is equal for limits that ask the same of the same network.
func limitKey(l *dialect.Limit) string {
	key := fmt.Sprintf("limit %s %s %v %s", expressionKey(l.Left), l.Relation, l.Nominal, qualifierKey(l.Qualifiers))
	if l.Right != nil {
		key += expressionKey(l.Right)
	}
	return key
}

// qualifierKey writes qualifiers so that equal keys mean the same.
func qualifierKey(q dialect.Qualifiers) string {
	key := fmt.Sprintf("%v %v", q.Switches, q.Without)
	for _, c := range []*dialect.Constant{q.At, q.Before, q.From, q.To} {
		key += " "
		if c != nil {
			key += numberKey(c.Value)
		}
	}
	return key
}
