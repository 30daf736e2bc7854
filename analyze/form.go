package analyze

import (
	"context"
	"errors"
	"fmt"
	"math/big"

	"portlight/analyze/exact"
	"portlight/dialect"
)

// form is the value of an expression in s before an excitation divides it:
// a rational function plus transforms of quantities with rational
// coefficients. A finished network function has no terms left.
type form struct {
	constant exact.Ratio
	terms    []formTerm
	exact    bool // no stand-in for an irrational took part
	// of is the configuration that a single transfer or immittance was taken
	// from: natural frequencies of it that the function lacks are hidden. Nil
	// after arithmetic between functions.
	of      *configuration
	remarks []string
	names   *naming // how constant follows from the network, nil for no formula
}

type formTerm struct {
	coefficient exact.Ratio
	probe       dialect.Probe
	names       *naming // of the coefficient
}

func constantForm(r exact.Ratio, isExact bool) form { return form{constant: r, exact: isExact} }

// function evaluates an expression in s to a rational function.
func (a *Analysis) function(ctx context.Context, e dialect.Expression, c configuration) (form, error) {
	f, err := a.form(ctx, e, c)
	if err != nil {
		return f, err
	}
	if len(f.terms) > 0 {
		return f, refuse("function-form", fmt.Sprintf(
			"%s is a response without an excitation: divide it by a source or a port quantity, as in v[out]/Vs",
			a.probeText(f.terms[0].probe)))
	}
	return f, nil
}

// form evaluates an expression in s.
func (a *Analysis) form(ctx context.Context, e dialect.Expression, c configuration) (form, error) {
	switch e := e.(type) {
	case *dialect.Constant:
		f := constantForm(exact.ConstantRatio(e.Value.Rat()), e.Value.IsExact())
		f.names = constantNaming(e)
		return f, nil
	case *dialect.Variable:
		f := constantForm(exact.PolyRatio(exact.PolyFromInt64s(0, 1)), true)
		f.names = &naming{op: 's'}
		return f, nil
	case *dialect.Negate:
		x, err := a.form(ctx, e.X, c)
		return x.negated(), err
	case *dialect.FunctionValue:
		return a.namedFunction(ctx, e.Function, c)
	case *dialect.Quantity:
		return a.quantityForm(ctx, e.Probe, c)
	case *dialect.Binary:
		return a.binaryForm(ctx, e, c)
	}
	return form{}, refuse("function-form", "this is not a rational function of s")
}

// namedFunction evaluates a function statement once per configuration.
func (a *Analysis) namedFunction(ctx context.Context, index int, c configuration) (form, error) {
	key := fmt.Sprintf("function %d %s", index, c.key())
	return recall(ctx, &a.shared().memo, key, func(ctx context.Context) (form, error) {
		return a.function(ctx, a.description.Functions[index].Value, c)
	})
}

func (a *Analysis) quantityForm(ctx context.Context, p dialect.Probe, c configuration) (form, error) {
	switch p.Letter {
	case 'z':
		return a.impedance(ctx, p, c)
	case 'y':
		return a.admittance(ctx, p, c)
	case 'v', 'i':
		return form{
			terms: []formTerm{{exact.PolyRatio(exact.PolyFromInt64s(1)), p, numberNaming(1)}},
			exact: true, names: numberNaming(0),
		}, nil
	}
	return form{}, refuse("function-form", "power is not linear in the sources, so it has no network function")
}

func (a *Analysis) binaryForm(ctx context.Context, e *dialect.Binary, c configuration) (form, error) {
	x, err := a.form(ctx, e.X, c)
	if err != nil {
		return x, err
	}
	if e.Op == '^' {
		return x.power(e.Y)
	}
	y, err := a.form(ctx, e.Y, c)
	if err != nil {
		return y, err
	}
	switch e.Op {
	case '+':
		return x.plus(y), nil
	case '-':
		return x.plus(y.negated()), nil
	case '*':
		return x.times(y)
	case '/':
		return a.quotient(ctx, x, y, c)
	}
	return form{}, refuse("function-form", fmt.Sprintf("%c is not defined between functions of s", e.Op))
}

func (f form) plus(g form) form {
	f.constant = f.constant.Add(g.constant)
	f.terms = append(append([]formTerm(nil), f.terms...), g.terms...)
	f.exact = f.exact && g.exact
	f.remarks = append(append([]string(nil), f.remarks...), g.remarks...)
	f.of = nil
	f.names = combined('+', f.names, g.names)
	return f
}

func (f form) negated() form {
	return f.scaled(exact.PolyRatio(exact.PolyFromInt64s(-1)), numberNaming(-1))
}

// scaled multiplies by a rational function; a constant keeps the determinant.
func (f form) scaled(r exact.Ratio, names *naming) form {
	f.constant = f.constant.Mul(r)
	f.names = combined('*', names, f.names)
	terms := make([]formTerm, len(f.terms))
	for i, t := range f.terms {
		terms[i] = formTerm{t.coefficient.Mul(r), t.probe, combined('*', names, t.names)}
	}
	f.terms = terms
	if !r.IsConstant() {
		f.of = nil
	}
	return f
}

func (f form) times(g form) (form, error) {
	if len(f.terms) > 0 && len(g.terms) > 0 {
		return f, refuse("function-form", "a product of two responses is not linear in the sources")
	}
	if len(g.terms) > 0 || g.of != nil && f.of == nil {
		f, g = g, f
	}
	out := f.scaled(g.constant, g.names)
	out.exact = f.exact && g.exact
	out.remarks = append(append([]string(nil), f.remarks...), g.remarks...)
	return out, nil
}

func (f form) power(e dialect.Expression) (form, error) {
	n, ok := integerOf(e)
	if !ok || len(f.terms) > 0 {
		return f, refuse("function-form", "a function of s can only be raised to a whole number")
	}
	if n > 64 || n < -64 {
		return f, refuse("function-form", "the exponent is too large for an exact function: at most 64")
	}
	base, exponent := f.constant, n
	if n < 0 {
		inverse, err := base.Inv()
		if err != nil {
			return f, refuse("division-by-zero", "a function that is zero everywhere has no inverse")
		}
		base, n = inverse, -n
	}
	out := exact.PolyRatio(exact.PolyFromInt64s(1))
	for ; n > 0; n-- {
		out = out.Mul(base)
	}
	return form{constant: out, exact: f.exact, remarks: f.remarks, names: f.names.power(exponent)}, nil
}

// integerOf reads an exponent.
func integerOf(e dialect.Expression) (int64, bool) {
	sign := int64(1)
	if n, isNegated := e.(*dialect.Negate); isNegated {
		e, sign = n.X, -1
	}
	c, ok := e.(*dialect.Constant)
	if !ok || !c.Value.IsExact() || !c.Value.Rat().IsInt() || !c.Value.Rat().Num().IsInt64() {
		return 0, false
	}
	return sign * c.Value.Rat().Num().Int64(), true
}

// quotient divides; responses over an excitation become transfers.
func (a *Analysis) quotient(ctx context.Context, x, y form, c configuration) (form, error) {
	if len(y.terms) == 0 {
		inverse, err := y.constant.Inv()
		if err != nil {
			return form{}, refuse("division-by-zero", "the divisor is zero at every frequency")
		}
		return x.times(form{constant: inverse, exact: y.exact, remarks: y.remarks, names: combined('/', numberNaming(1), y.names)})
	}
	if len(y.terms) != 1 || !y.constant.IsZero() {
		return form{}, refuse("function-form", "the divisor must be one excitation: a source, a port quantity, or a voltage that one source holds")
	}
	if !x.constant.IsZero() {
		return form{}, refuse("function-form", "a number over an excitation is not a network function")
	}
	by, err := a.excitation(y.terms[0].probe, c)
	if err != nil {
		return form{}, err
	}
	out := constantForm(exact.Ratio{}, x.exact && y.exact)
	out.remarks = append(append([]string(nil), x.remarks...), y.remarks...)
	out.names = numberNaming(0)
	for _, t := range x.terms {
		g, err := a.transfer(ctx, t.probe, by)
		if err != nil {
			return form{}, err
		}
		k, err := t.coefficient.Quo(y.terms[0].coefficient)
		if err != nil {
			return form{}, refuse("division-by-zero", "the divisor is zero at every frequency")
		}
		part := g.scaled(k, combined('/', t.names, y.terms[0].names))
		if len(x.terms) == 1 {
			out.of = part.of
		}
		out.constant = out.constant.Add(part.constant)
		out.names = combined('+', out.names, part.names)
		out.exact = out.exact && part.exact
	}
	return out, nil
}

// rational is a shorthand for a small rational number.
func rational(n, d int64) *big.Rat { return big.NewRat(n, d) }

var errNoValue = errors.New("no value")
