package analyze

import (
	"context"

	"portlight/dialect"
	"portlight/dialect/number"
)

// numberBits is the working precision of a number inside an expression of
// signals, such as the peak that another signal is compared with.
const numberBits = 512

// withNumbers puts a constant in place of every number that has to be worked
// out first, so that what is left are signals and constants.
func (a *Analysis) withNumbers(ctx context.Context, e dialect.Expression, c configuration) (dialect.Expression, error) {
	if e.Shape() == dialect.ShapeNumber {
		if _, known := e.(*dialect.Constant); known {
			return e, nil
		}
		v, err := a.value(ctx, e, spot{configuration: c}, numberBits)
		if err != nil {
			return nil, err
		}
		typed := dialect.Typed{Dimension: e.Dim(), Form: dialect.ShapeNumber, Span: e.Place()}
		return &dialect.Constant{Typed: typed, Value: number.FromRat(v.Re.MidRat())}, nil
	}
	switch e := e.(type) {
	case *dialect.Negate:
		x, err := a.withNumbers(ctx, e.X, c)
		return &dialect.Negate{Typed: e.Typed, X: x}, err
	case *dialect.Binary:
		x, err := a.withNumbers(ctx, e.X, c)
		if err != nil {
			return nil, err
		}
		y, err := a.withNumbers(ctx, e.Y, c)
		return &dialect.Binary{Typed: e.Typed, Op: e.Op, X: x, Y: y}, err
	case *dialect.Call:
		out := *e
		out.Args = nil
		for _, arg := range e.Args {
			x, err := a.withNumbers(ctx, arg, c)
			if err != nil {
				return nil, err
			}
			out.Args = append(out.Args, x)
		}
		return &out, nil
	}
	return e, nil
}

// workedOut tells whether an expression holds a number that is known only to
// within the working precision: a measure, or a signal's value at a time.
func workedOut(e dialect.Expression) bool {
	switch e := e.(type) {
	case *dialect.Negate:
		return workedOut(e.X)
	case *dialect.Binary:
		return workedOut(e.X) || workedOut(e.Y)
	case *dialect.Call:
		if e.Shape() == dialect.ShapeNumber {
			return true
		}
		for _, x := range e.Args {
			if workedOut(x) {
				return true
			}
		}
	case *dialect.At:
		return true
	}
	return false
}
