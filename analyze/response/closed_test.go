package response

import (
	"math"
	"math/big"
	"math/cmplx"
	"testing"

	"portlight/analyze/network"
	"portlight/dialect/number"
)

// stepLadder is an RC ladder of n equal sections, 1 Ω and 1 F each, behind a step
// of 1 V: its n poles are real, irrational and roots of one polynomial.
func stepLadder(t *testing.T, n int) *Solution {
	t.Helper()
	one := number.FromInt(1)
	net := &network.Network{Nodes: n + 2, Ground: 0, Ported: make([]bool, n+2)}
	net.Elements = append(net.Elements, network.Element{Name: "V", Kind: network.VoltageSource, From: 1, To: 0})
	for k := range n {
		net.Elements = append(net.Elements,
			network.Element{Name: "R", Kind: network.Resistor, From: k + 1, To: k + 2, Value: one},
			network.Element{Name: "C", Kind: network.Capacitor, From: k + 2, To: 0, Value: one})
	}
	sys, problems := network.Assemble(net)
	if sys == nil {
		t.Fatal(problems)
	}
	step := Wave{Pieces: []WavePiece{{Terms: []WaveTerm{{Cosine: one}}}}}
	s, err := Solve(t.Context(), Setup{Intervals: []Interval{{System: sys}}, Sources: []Source{{Element: 0, Wave: step}}})
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// TestProductsKeepPolesApart: of the products of terms with irrational poles
// only those at equal sums of poles belong together. The ladder's p0 + p2 is
// not 2·p1.
func TestProductsKeepPolesApart(t *testing.T) {
	s := stepLadder(t, 3)
	v, err := s.Signal(t.Context(), func(sys *network.System) (network.Output, error) {
		out, _ := sys.NodeVoltage(4, 0)
		return out, nil
	})
	if err != nil {
		t.Fatal(err)
	}
	square := v.Times(v, number.FromInt(1))
	pieces, err := square.Pieces(t.Context(), 20)
	if err != nil {
		t.Fatal(err)
	}
	// 1 and p0, p1, p2: 1, 3 poles, 3 doubled poles, 3 sums of two.
	if len(pieces) != 1 || len(pieces[0].Terms) != 10 {
		t.Fatalf("%d pieces, the first with %d terms, want one with 10", len(pieces), len(pieces[0].Terms))
	}
	for _, at := range []*big.Rat{big.NewRat(1, 10), big.NewRat(2, 1), big.NewRat(9, 1)} {
		tau, _ := at.Float64()
		sum := 0.0
		for _, x := range pieces[0].Terms {
			c := complex(x.Coefficient.Re.MidFloat64(), x.Coefficient.Im.MidFloat64())
			pole := complex(x.Pole.Re.MidFloat64(), x.Pole.Im.MidFloat64())
			sum += real(c*cmplx.Exp(pole*complex(tau, 0))) * math.Pow(tau, float64(x.Power))
		}
		value, err := v.Value(t.Context(), at, Right, 15)
		if err != nil {
			t.Fatal(err)
		}
		if want := value.MidFloat64() * value.MidFloat64(); math.Abs(sum-want) > 1e-12 {
			t.Errorf("the terms add up to %.15g at %g s, want %.15g", sum, tau, want)
		}
	}
}

// TestWhatCancelsIsNoTerm: a difference of equal products is nothing, and
// absolute values have no closed form.
func TestWhatCancelsIsNoTerm(t *testing.T) {
	s := stepLadder(t, 3)
	v, err := s.Signal(t.Context(), func(sys *network.System) (network.Output, error) {
		out, _ := sys.NodeVoltage(4, 0)
		return out, nil
	})
	if err != nil {
		t.Fatal(err)
	}
	square := v.Times(v, number.FromInt(1))
	pieces, err := square.Sub(v.Times(v, number.FromInt(1))).Pieces(t.Context(), 20)
	if err != nil || len(pieces) != 0 {
		t.Errorf("%d pieces, %v, want none", len(pieces), err)
	}
	if square.Abs().HasClosedForm() {
		t.Error("an absolute value has a closed form")
	}
	if _, err := square.Abs().Pieces(t.Context(), 5); err != ErrNoClosedForm {
		t.Errorf("the error is %v, want ErrNoClosedForm", err)
	}
}
