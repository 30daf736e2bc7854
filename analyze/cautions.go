package analyze

import (
	"context"
	"errors"
	"fmt"
	"math/big"

	"portlight/analyze/response"
	"portlight/dialect"
	"portlight/dialect/number"
)

// Limits of the cautions. They are reminders, not an assessment.
var (
	// touchDC and touchAC are the limits of class ES1, 60 V of direct voltage
	// and 30 V rms of alternating voltage (IEC 62368-1, table of ES1 and ES2
	// limits; from memory).
	touchDC = number.FromInt(60)
	touchAC = number.FromInt(30)
	// hazardousEnergy is the energy level of IEC 60950-1, 1.2.8.10: 20 J or
	// more (from memory).
	hazardousEnergy = number.FromInt(20)
)

// quickDischarge is the time, in s, within which what is left after a
// disconnection has to be below the limits: 2 s after withdrawal of a
// connector (IEC 62368-1, 5.5.2.2; from memory). A faster discharge is told
// without a warning.
const quickDischarge = 2.0

// atOnce is a time, in s, below which nobody could reach what discharges
// itself; nothing is said of it (common sense, no source).
const atOnce = 0.1

// mostCautioned is up to how many nodes the cautions look at each node.
const mostCautioned = 200

const deferral = "; local codes and licensed practice decide what protection is needed"

// cautions warns of voltages one should not touch and of energy that stays.
func (a *Analysis) cautions(ctx context.Context) ([]dialect.Finding, error) {
	if len(a.description.Nodes) > mostCautioned {
		return nil, nil // an exact signal for each would take minutes
	}
	var found []dialect.Finding
	for _, look := range []func(context.Context) (*dialect.Finding, error){a.touchVoltage, a.storedEnergy, a.remainingVoltage} {
		f, err := look(ctx)
		if passOn(ctx, err) {
			return nil, err
		}
		if err == nil && f != nil {
			found = append(found, *f)
		}
	}
	return found, nil
}

// touched is a node above a limit.
type touched struct {
	node int
	text string
	size float64
}

// touchVoltage names the nodes above the limits, at the worst of them.
func (a *Analysis) touchVoltage(ctx context.Context) (*dialect.Finding, error) {
	d := a.description
	if d.Ground < 0 || len(d.Nodes) > mostCautioned {
		return nil, nil
	}
	var over []touched
	for n := range d.Nodes {
		if n == d.Ground || d.Nodes[n].Joint {
			continue
		}
		t, ok, err := a.touch(ctx, n)
		if passOn(ctx, err) {
			return nil, err
		}
		if err == nil && ok {
			over = append(over, t)
		}
	}
	if len(over) == 0 {
		return nil, nil
	}
	worst := over[0]
	for _, t := range over {
		if t.size > worst.size {
			worst = t
		}
	}
	text := fmt.Sprintf("%s to ground %s", d.Nodes[worst.node].Name, worst.text)
	var others []string
	for _, t := range over {
		if t.node != worst.node {
			others = append(others, d.Nodes[t.node].Name)
		}
	}
	if len(others) > 0 {
		text += fmt.Sprintf(" (so do %s)", list(others))
		if len(others) == 1 {
			text = text[:len(text)-len(fmt.Sprintf(" (so do %s)", list(others)))] + fmt.Sprintf(" (so does %s)", others[0])
		}
	}
	f := &dialect.Finding{Code: "touch-voltage", Severity: dialect.Warning,
		Message: text + ", more than may be touched without protection (60 V DC, 30 V AC rms)" + deferral}
	for _, o := range first(d.Nodes[worst.node].Places) {
		f.Origin = o
	}
	for _, t := range over {
		if t.node != worst.node {
			for _, o := range first(d.Nodes[t.node].Places) {
				f.Related = append(f.Related, dialect.Related{Message: "node " + d.Nodes[t.node].Name + " " + t.text, Origin: o})
			}
		}
	}
	return f, nil
}

// touch compares one node's voltage to ground with the limits.
func (a *Analysis) touch(ctx context.Context, node int) (touched, bool, error) {
	s, err := a.probeSignal(ctx, dialect.Probe{Letter: 'v', Of: dialect.OfNodes, Plus: node, Minus: a.description.Ground}, configuration{})
	if err != nil {
		return touched{}, false, err
	}
	if size, ok := crudeBound(ctx, s); ok && size < 30 {
		return touched{}, false, nil // cannot reach any of the limits
	}
	peak, err := s.Curve().Abs().Peak(ctx, response.Range{})
	if errors.Is(err, response.ErrUndefined) {
		return touched{node, "has no bounded peak (" + err.Error() + ")", 1e300}, true, nil
	}
	if err != nil {
		return touched{}, false, err
	}
	if above(peak.Value, touchDC) {
		return touched{node, "reaches " + figure(peak.Value, "V"), peak.Value.MidFloat64()}, true, nil
	}
	swing, err := a.alternating(ctx, s.Curve())
	if err != nil || !above(swing, touchAC) {
		return touched{}, false, err
	}
	return touched{node, "swings by " + figure(swing, "V") + " rms", swing.MidFloat64()}, true, nil
}

// crudeBound is a size that a signal never exceeds, found without searching:
// the sum of the sizes of its terms, where none of them grows.
func crudeBound(ctx context.Context, s *response.Signal) (float64, bool) {
	pieces, err := s.Pieces(ctx, 6)
	if err != nil {
		return 0, false
	}
	sum := 0.0
	for _, p := range pieces {
		for _, t := range p.Terms {
			if sign, sure := t.Pole.Re.Sign(); t.Power > 0 || sure && sign > 0 || !sure && !t.Pole.Re.ContainsZero() {
				return 0, false
			}
			size, _ := t.Coefficient.Abs().Upper().Float64()
			sum += size
		}
		if len(p.Impulses) > 0 {
			return 0, false
		}
	}
	return sum * 1.001, true
}

// cannotStore tells whether a part stays far below the hazardous energy.
func (a *Analysis) cannotStore(ctx context.Context, part int) bool {
	p := &a.description.Parts[part]
	letter := byte('v')
	if p.Kind == dialect.Inductor {
		letter = 'i'
	}
	s, err := a.probeSignal(ctx, dialect.Probe{Letter: letter, Of: dialect.OfPart, Part: part}, configuration{})
	if err != nil {
		return true
	}
	size, ok := crudeBound(ctx, s)
	return ok && p.Value.Float()*size*size/2 < 10
}

// alternating is the rms value of what remains about its mean in the long run.
func (a *Analysis) alternating(ctx context.Context, c *response.Curve) (number.Ball, error) {
	rms, err := c.RMS(ctx, response.Range{})
	if err != nil {
		return rms, err
	}
	mean, err := c.Mean(ctx, response.Range{})
	if err != nil {
		return rms, err
	}
	rest := rms.Sqr().Sub(mean.Sqr())
	if sign, _ := rest.Sign(); sign <= 0 {
		return number.BallFromInt(0, figurePrecision), nil
	}
	return rest.Sqrt(), nil
}

func above(v number.Ball, limit number.Exact) bool {
	order, sure := v.Cmp(ballOf(limit))
	return sure && order > 0
}

// storedEnergy names the parts that hold a hazardous energy at some moment.
func (a *Analysis) storedEnergy(ctx context.Context) (*dialect.Finding, error) {
	var f *dialect.Finding
	for i := range a.description.Parts {
		p := &a.description.Parts[i]
		if !wired(p) || p.Kind != dialect.Capacitor && p.Kind != dialect.Inductor {
			continue
		}
		if a.cannotStore(ctx, i) {
			continue
		}
		c, err := a.storedCurve(ctx, i, configuration{})
		if err != nil {
			return nil, err
		}
		peak, err := c.Peak(ctx, response.Range{})
		if passOn(ctx, err) {
			return nil, err
		}
		if order, sure := peak.Value.Cmp(ballOf(hazardousEnergy)); err != nil || !sure || order < 0 {
			continue
		}
		text := fmt.Sprintf("%s holds up to %s", p.Name, figure(peak.Value, "J"))
		if f == nil {
			f = &dialect.Finding{Code: "stored-energy", Severity: dialect.Warning, Origin: partOrigin(p),
				Message: text + ", a hazardous energy level (20 J or more): it can burn and weld" + deferral}
			continue
		}
		f.Related = append(f.Related, dialect.Related{Message: text, Origin: partOrigin(p)})
	}
	return f, nil
}

// remainingVoltage names the capacitor that keeps more than 60 V longest
// after every source is taken away at the worst moment.
func (a *Analysis) remainingVoltage(ctx context.Context) (*dialect.Finding, error) {
	var worst *dialect.Finding
	longest := -1.0
	for i := range a.description.Parts {
		p := &a.description.Parts[i]
		if !wired(p) || p.Kind != dialect.Capacitor {
			continue
		}
		seconds, text, err := a.dischargeOf(ctx, i)
		if passOn(ctx, err) {
			return nil, err
		}
		if err != nil || seconds <= longest || seconds < atOnce {
			continue
		}
		longest = seconds
		worst = &dialect.Finding{Code: "stored-energy", Severity: dialect.Warning, Origin: partOrigin(p), Message: text + deferral}
		if seconds < quickDischarge {
			worst.Severity = dialect.Information
		}
	}
	return worst, nil
}

var errSafe = errors.New("below the limit")

// dischargeOf is how long a capacitor stays above 60 V once the sources are
// taken away when it is charged highest.
func (a *Analysis) dischargeOf(ctx context.Context, part int) (float64, string, error) {
	probe := dialect.Probe{Letter: 'v', Of: dialect.OfPart, Part: part}
	s, err := a.probeSignal(ctx, probe, configuration{})
	if err != nil {
		return 0, "", err
	}
	if size, ok := crudeBound(ctx, s); ok && size < 60 {
		return 0, "", errSafe
	}
	peak, err := s.Curve().Abs().Peak(ctx, response.Range{})
	if err != nil || !above(peak.Value, touchDC) {
		return 0, "", orSafe(err)
	}
	alone, err := a.sourceless(ctx, peak)
	if err != nil {
		return 0, "", err
	}
	v, err := alone.probeSignal(ctx, probe, configuration{})
	if err != nil {
		return 0, "", err
	}
	name := a.description.Parts[part].Name
	t, err := v.Curve().Abs().LastAbove(ctx, touchDC, response.Range{})
	switch {
	case errors.Is(err, response.ErrUndefined):
		return 1e300, fmt.Sprintf("%s, charged to %s, does not fall below 60 V after the sources are taken away: nothing discharges it",
			name, figure(peak.Value, "V")), nil
	case err != nil:
		return 0, "", err
	}
	return t.MidFloat64(), fmt.Sprintf("%s, charged to %s, stays above 60 V for %s after the sources are taken away",
		name, figure(peak.Value, "V"), figure(t, "s")), nil
}

func orSafe(err error) error {
	if err == nil {
		return errSafe
	}
	return err
}

// sourceless is the network with its sources taken out and the capacitors as
// they are at an extreme; its switches stand as after their last event.
func (a *Analysis) sourceless(ctx context.Context, at response.Extreme) (*Analysis, error) {
	t := new(big.Rat)
	if at.HasAt {
		t = at.At.MidRat()
	}
	d := *a.description
	d.Steady = false
	d.Parts = append([]dialect.Part(nil), d.Parts...)
	for i := range d.Parts {
		p := &d.Parts[i]
		p.Initial = nil
		if p.Kind == dialect.Switch {
			p.ClosedAt0, p.Events = closedAfter(p, nil), nil
		}
		if p.Waveform != nil && p.Dependent == nil {
			p.From, p.To = -1, -1
		}
		if p.Kind != dialect.Capacitor || !wired(p) {
			continue
		}
		s, err := a.probeSignal(ctx, dialect.Probe{Letter: 'v', Of: dialect.OfPart, Part: i}, configuration{})
		if err != nil {
			return nil, err
		}
		if t.Sign() < 0 {
			t = new(big.Rat)
		}
		v, err := s.Value(ctx, t, response.Right, 12)
		if err != nil && !errors.Is(err, response.ErrPrecision) {
			return nil, err
		}
		x := number.FromRat(v.MidRat())
		p.Initial = &x
	}
	return &Analysis{checked: a.checked, description: &d}, nil
}
