package analyze

import (
	"context"
	"fmt"
	"sort"
	"strings"

	"portlight/analyze/network"
	"portlight/dialect"
)

// Structure gives the findings that need no arithmetic on functions: the
// notation's own and those of connectivity. It is what an editor can show at
// once. Accepted findings are left out.
func (a *Analysis) Structure(ctx context.Context) ([]dialect.Finding, error) {
	return recall(ctx, &a.memo, "structure", func(ctx context.Context) ([]dialect.Finding, error) {
		found := append([]dialect.Finding(nil), a.checked.Findings...)
		if len(a.description.Parts) > 0 {
			found = append(found, a.connectivity(a.incomplete())...)
		}
		return a.accepted(found), ctx.Err()
	})
}

// losing are the codes of errors that can leave a connection out of the network.
var losing = []dialect.Code{
	"syntax", "unknown-name", "name-taken", "wired-twice", "not-two-terminal", "wrong-sort", "option-missing",
	"file-missing", "use-cycle", "too-large",
}

// incomplete tells whether an error has left connections out: what then seems
// unconnected need not be a mistake of its own.
func (a *Analysis) incomplete() bool {
	return a.description.Faults && hasCode(a.checked.Findings, losing...)
}

// echoes tells whether a problem may come from nothing but an error in the
// text: a value that could not be read, a connection that is missing.
func (a *Analysis) echoes(k network.ProblemKind, incomplete bool) bool {
	switch k {
	case network.BadValue:
		return a.description.Faults
	case network.CapacitorLoop, network.VoltageLoop, network.CouplingRange, network.InductanceMatrix:
		return false
	}
	return incomplete
}

// connectivity inspects the network in every position of its switches, and
// says each thing once. In an incomplete network it says only what further
// connections cannot mend.
func (a *Analysis) connectivity(incomplete bool) []dialect.Finding {
	var found []dialect.Finding
	seen := map[string]bool{}
	inspect := func(problems []network.Problem, when string) {
		for _, p := range problems {
			key := fmt.Sprint(p.Kind, sorted(p.Elements), sorted(p.Nodes))
			if seen[key] || a.echoes(p.Kind, incomplete) || p.Kind == network.SelfLoop || p.Kind == network.InductorCutset && len(p.Elements) < 2 {
				continue // a lone coil that a switch leaves open carries nothing
			}
			seen[key] = true
			if f, ok := a.findingOf(p, when); ok {
				found = append(found, f)
			}
		}
	}
	for i, iv := range a.intervals(configuration{}) {
		inspect(iv.problems(), a.whenText(i, iv))
	}
	if a.description.Steady && len(a.allSwitches()) > 0 {
		inspect(a.before(configuration{}).Inspect(), "before t = 0")
	}
	return found
}

func sorted(xs []int) []int {
	out := append([]int(nil), xs...)
	sort.Ints(out)
	return out
}

// whenText says in which position of the switches something was seen.
func (a *Analysis) whenText(i int, iv interval) string {
	if len(iv.turned) == 0 {
		return ""
	}
	var words []string
	for _, s := range iv.turned {
		verb := "has opened"
		if closedAfter(&a.description.Parts[s], &iv.start) {
			verb = "has closed"
		}
		words = append(words, a.description.Parts[s].Name+" "+verb)
	}
	return "once " + list(words)
}

func (a *Analysis) allSwitches() []int {
	var out []int
	for i := range a.description.Parts {
		if a.description.Parts[i].Kind == dialect.Switch {
			out = append(out, i)
		}
	}
	return out
}

// problemText is how a kind of problem is told.
type problemText struct {
	code     dialect.Code
	severity dialect.Severity
	// say writes the message from the names of parts and nodes.
	say func(parts, nodes string, p network.Problem) string
}

var problemTexts = map[network.ProblemKind]problemText{
	network.NoGround: {"no-ground", dialect.Error, func(parts, _ string, _ network.Problem) string {
		return fmt.Sprintf("%s returns its output current to the reference node, and no node is named as ground", parts)
	}},
	network.GroundUnused: {"no-ground", dialect.Error, func(_, nodes string, _ network.Problem) string {
		return fmt.Sprintf("nothing is wired to the reference node %s", nodes)
	}},
	network.FloatingNode: {"floating-node", dialect.Warning, func(parts, nodes string, _ network.Problem) string {
		return fmt.Sprintf("node %s has one connection only, to %s: no current can flow there", nodes, parts)
	}},
	network.Island: {"floating-island", dialect.Error, func(_, nodes string, p network.Problem) string {
		return fmt.Sprintf("no path leads from %s to the reference node", nodes)
	}},
	network.AcrossIslands: {"floating-island", dialect.Error, func(parts, nodes string, _ network.Problem) string {
		return fmt.Sprintf("%s senses the voltage between %s, which no path joins: it is not defined", parts, nodes)
	}},
	network.VoltageLoop: {"voltage-loop", dialect.Error, func(parts, _ string, _ network.Problem) string {
		return fmt.Sprintf("%s form a loop of prescribed voltages: nothing limits the current in it", parts)
	}},
	network.CurrentCutset: {"current-cutset", dialect.Error, func(parts, nodes string, _ network.Problem) string {
		return fmt.Sprintf("only %s reach %s: their currents are prescribed and have no other path", parts, nodes)
	}},
	network.CapacitorLoop: {"capacitor-loop", dialect.Hint, func(parts, _ string, _ network.Problem) string {
		return fmt.Sprintf("%s form a loop: one of their voltages follows from the others, which lowers the order by one", parts)
	}},
	network.InductorCutset: {"inductor-cutset", dialect.Hint, func(parts, nodes string, _ network.Problem) string {
		return fmt.Sprintf("only %s meet at %s: one of their currents follows from the others, which lowers the order by one", parts, nodes)
	}},
	network.NoDCPath: {"no-dc-path", dialect.Information, func(parts, nodes string, _ network.Problem) string {
		return fmt.Sprintf("no direct current can reach %s: the charge there stays what it was at the start (%s)", nodes, parts)
	}},
	network.OpAmpNoFeedback: {"no-feedback", dialect.Error, func(parts, _ string, _ network.Problem) string {
		return fmt.Sprintf("nothing leads from the output of the ideal op amp %s back to its inputs, so its output voltage is not determined", parts)
	}},
	network.CouplingRange: {"coupling-range", dialect.Error, func(parts, _ string, _ network.Problem) string {
		return fmt.Sprintf("the coupling %s is stronger than complete: |k| is at most 1, |M| at most the root of the product of the inductances", parts)
	}},
	network.InductanceMatrix: {"coupling-range", dialect.Error, func(parts, _ string, _ network.Problem) string {
		return fmt.Sprintf("the couplings %s cannot all be: together they would let the coils store a negative energy", parts)
	}},
	network.SingularEquations: {"singular", dialect.Error, func(parts, nodes string, _ network.Problem) string {
		text := "the equations have no unique solution; at fault are those of " + parts
		if nodes != "nothing" {
			text += " at " + nodes
		}
		return text
	}},
	network.NoSteadyState: {"no-steady-state", dialect.Error, func(parts, _ string, p network.Problem) string {
		return fmt.Sprintf("there is no steady state before t = 0: %s would let a current or voltage grow without end", parts)
	}},
	network.IndeterminateState: {"no-steady-state", dialect.Error, func(parts, nodes string, _ network.Problem) string {
		return fmt.Sprintf("the steady state before t = 0 is not determined: nothing fixes what %s hold%s; give them values with initially", parts, atNodes(nodes))
	}},
	network.ResonantSource: {"no-steady-state", dialect.Error, func(parts, _ string, _ network.Problem) string {
		return fmt.Sprintf("a source drives a resonance without damping exactly at its frequency (%s): the oscillation grows and never settles", parts)
	}},
	network.InitialNotFree: {"initial-conflict", dialect.Error, func(parts, _ string, _ network.Problem) string {
		return fmt.Sprintf("the steady state already fixes %s: an initial value can only be given where the network leaves it free", parts)
	}},
	network.BadReference: {"never-wired", dialect.Error, func(parts, _ string, p network.Problem) string {
		if name, of, ok := strings.Cut(parts, " and "); ok {
			return fmt.Sprintf("%s follows a current of %s, which is not in the network", name, of)
		}
		return fmt.Sprintf("%s: %s", parts, p.Detail)
	}},
	network.BadValue: {"not-positive", dialect.Error, func(parts, _ string, p network.Problem) string {
		return fmt.Sprintf("%s cannot have this value: %s", parts, p.Detail)
	}},
}

func atNodes(nodes string) string {
	if nodes == "nothing" {
		return ""
	}
	return " at " + nodes
}

// findingOf tells a problem as a finding.
func (a *Analysis) findingOf(p network.Problem, when string) (dialect.Finding, bool) {
	if p.Kind == network.InitialConflict {
		return a.conflictFinding(p), true
	}
	text, ok := problemTexts[p.Kind]
	if !ok {
		return dialect.Finding{}, false
	}
	f := dialect.Finding{Code: text.code, Severity: text.severity}
	if p.Kind == network.Island && p.Coupled {
		f.Severity = dialect.Information
	}
	f.Message = text.say(list(a.partNames(p.Elements)), list(a.nodeNames(p.Nodes)), p)
	if p.Kind == network.Island {
		f.Message += a.islandAdvice(p)
	}
	if when != "" {
		f.Message += ", " + when
	}
	if p.WithinBound {
		f.Message += " (decided to within the bound of its irrational values)"
	}
	a.place(&f, p)
	if p.Kind == network.FloatingNode {
		a.suggestNode(&f, p)
	}
	return f, true
}

// islandAdvice says what can still be asked, or how to mend it.
func (a *Analysis) islandAdvice(p network.Problem) string {
	if !p.Coupled {
		return "; wire one of these nodes to the rest"
	}
	text := "; it is reached only through " + list(a.partNames(p.Through))
	return text + ": voltages between its nodes are answered, voltages to the reference are not defined"
}

// place puts a finding at the part or node at fault, with the others related.
func (a *Analysis) place(f *dialect.Finding, p network.Problem) {
	d := a.description
	atNode := p.Kind == network.FloatingNode || p.Kind == network.Island || p.Kind == network.NoDCPath ||
		p.Kind == network.GroundUnused || len(p.Elements) == 0
	if atNode {
		for _, n := range p.Nodes {
			for _, o := range first(d.Nodes[n].Places) {
				a.addPlace(f, "node "+a.nodeName(n), o)
			}
		}
	}
	for _, e := range p.Elements {
		if e < len(d.Parts) {
			a.addPlace(f, d.Parts[e].Name, partOrigin(&d.Parts[e]))
		}
	}
	if f.Origin.File == nil {
		f.Origin = dialect.Origin{File: a.checked.Main}
	}
}

func first(o []dialect.Origin) []dialect.Origin {
	if len(o) > 1 {
		return o[:1]
	}
	return o
}

// addPlace makes the first place the finding's own and the rest related.
func (a *Analysis) addPlace(f *dialect.Finding, what string, o dialect.Origin) {
	if f.Origin.File == nil {
		f.Origin = o
		return
	}
	f.Related = append(f.Related, dialect.Related{Message: what, Origin: o})
}

// partOrigin is the place of a part's name.
func partOrigin(p *dialect.Part) dialect.Origin {
	return dialect.Origin{File: p.Origin.File, Span: p.NameSpan, Use: p.Origin.Use}
}

// suggestNode offers a similar node name for a node with one connection.
func (a *Analysis) suggestNode(f *dialect.Finding, p network.Problem) {
	name := a.description.Nodes[p.Nodes[0]].Name
	var names []string
	for i := range a.description.Nodes {
		if i != p.Nodes[0] && a.description.Nodes[i].Name != "" {
			names = append(names, a.description.Nodes[i].Name)
		}
	}
	near, ok := dialect.Nearest(name, names)
	if !ok || strings.Contains(name, ".") || len(name) < 3 && !strings.EqualFold(near, name) {
		return // of two short names nearly every other is near
	}
	f.Message += fmt.Sprintf("; did you mean %s?", near)
	f.Repairs = append(f.Repairs, dialect.Repair{
		Title:     fmt.Sprintf("Change %s to %s", name, near),
		Edits:     []dialect.Edit{{File: f.Origin.File, Span: f.Origin.Span, Text: near}},
		Preferred: true,
	})
}
