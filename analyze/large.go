package analyze

import (
	"context"
	"errors"
	"fmt"
	"math/big"

	"portlight/analyze/exact"
	"portlight/analyze/float"
	"portlight/analyze/network"
	"portlight/dialect"
	"portlight/dialect/number"
)

// errLarge refuses what only exact polynomials could answer in a network for
// which they would take too long.
var errLarge = refuse("network-too-large",
	"the network is too large for exact polynomials: values at a frequency or a time and tables are still answered, in double precision with a bound")

// largeError carries a transfer that has to be computed in double precision,
// one frequency at a time.
type largeError struct {
	configuration configuration
	system        *network.System
	output        network.Output
	column        network.Column
}

// Error implements error.
func (e *largeError) Error() string { return errLarge.Error() }

// Unwrap makes it a refusal for everything that is no value at a frequency.
func (e *largeError) Unwrap() error { return errLarge }

// large tells whether a configuration is too large for exact polynomials.
func (a *Analysis) large(ctx context.Context, c configuration) bool {
	large, err := recall(ctx, &a.shared().memo, "large "+c.key(), func(ctx context.Context) (bool, error) {
		m := a.model(ctx, c)
		return m.system != nil && a.largeSystem(ctx, m.system), nil
	})
	return err == nil && large
}

// smallPiece is a number of unknowns up to which exact polynomials are always
// quick enough.
const smallPiece = 150

// largeSystem looks at the pieces that cannot influence one another: a file of
// a thousand small filters is not large.
func (a *Analysis) largeSystem(ctx context.Context, sys *network.System) bool {
	if sys.Size() <= smallPiece {
		return false
	}
	n := sys.Network()
	p := n.Partition()
	if len(p.Groups) < 2 {
		return float.TooLarge(sys)
	}
	for g := range p.Groups {
		if ctx.Err() != nil || len(p.Groups[g]) <= smallPiece/2 {
			continue
		}
		if piece, _ := network.Assemble(n.Extract(p, g).Network); piece != nil && float.TooLarge(piece) {
			return true
		}
	}
	return false
}

// solver prepares a configuration for double precision, once.
func (a *Analysis) solver(ctx context.Context, c configuration, sys *network.System) (*float.Solver, error) {
	return recall(ctx, &a.shared().memo, "solver "+c.key(), func(context.Context) (*float.Solver, error) {
		return float.New(sys)
	})
}

// valueInDouble evaluates a transfer at one frequency.
func (a *Analysis) valueInDouble(ctx context.Context, e *largeError, omega number.Ball) (number.ComplexBall, error) {
	solver, err := a.solver(ctx, e.configuration, e.system)
	if err != nil {
		return number.ComplexBall{}, err
	}
	r, err := solver.AtRat(ctx, omega.MidRat(), []network.Output{e.output}, []network.Column{e.column})
	if errors.Is(err, float.ErrSingular) {
		return number.ComplexBall{}, refuse("singular", fmt.Sprintf("%v", err))
	}
	if err != nil {
		return number.ComplexBall{}, err
	}
	radius := new(big.Float).SetFloat64(r.Radius[0][0])
	return number.ComplexBall{
		Re: number.BallFromFloat64(real(r.Values[0][0]), 64).WithRadius(radius),
		Im: number.BallFromFloat64(imag(r.Values[0][0]), 64).WithRadius(radius),
	}, nil
}

// inDouble tells whether a refused function can still be evaluated: it is one
// transfer or immittance of a large network, maybe negative.
func inDouble(err error) (*largeError, bool) {
	var e *largeError
	ok := errors.As(err, &e)
	return e, ok
}

// hiddenInPiece lists the natural frequencies that a function does not show of
// the piece of the network it belongs to; what hangs beside it on a rail that
// an ideal source holds is none of its business.
func (a *Analysis) hiddenInPiece(ctx context.Context, e dialect.Expression, f form) ([]exact.Root, error) {
	if f.of == nil || f.constant.IsZero() {
		return nil, nil
	}
	m := a.model(ctx, *f.of)
	p := m.partition()
	groups := map[int]bool{}
	for _, n := range a.nodesIn(e) {
		for i := range m.network.Elements {
			el := &m.network.Elements[i]
			if g := p.GroupOf[i]; g >= 0 && el.Touches(n) && n != m.network.Ground {
				groups[g] = true
			}
		}
	}
	if len(groups) != 1 {
		return nil, nil
	}
	for g := range groups {
		sys, _ := network.Assemble(m.network.Extract(p, g).Network)
		if sys == nil {
			return nil, nil
		}
		det, err := sys.Determinant(ctx)
		if err != nil || det.IsZero() {
			return nil, err
		}
		return rootsOf(ctx, hiddenFactor(det, f.constant.Den))
	}
	return nil, nil
}

// nodesIn lists the nodes at which an expression's responses are taken, those
// of excitations left out.
func (a *Analysis) nodesIn(e dialect.Expression) []int {
	switch e := e.(type) {
	case *dialect.Binary:
		if e.Op == '/' {
			return a.nodesIn(e.X)
		}
		return append(a.nodesIn(e.X), a.nodesIn(e.Y)...)
	case *dialect.Negate:
		return a.nodesIn(e.X)
	case *dialect.Quantity:
		switch e.Probe.Of {
		case dialect.OfNodes:
			return []int{e.Probe.Plus, e.Probe.Minus}
		case dialect.OfPart, dialect.OfTerminal:
			if p := a.description.Parts[e.Probe.Part]; p.From >= 0 && wired(&p) && p.Kind != dialect.OpAmp && p.Kind != dialect.Transformer {
				return []int{p.From, p.To}
			}
		case dialect.OfPort:
			p := a.description.Ports[e.Probe.Port]
			return []int{p.Plus, p.Minus}
		}
	}
	return nil
}
