package response

import (
	"context"
	"math/big"
	"sync"

	"portlight/analyze/exact"
	"portlight/dialect/number"
)

// fraction is one exact transform in lowest terms, prepared for partial
// fractions: F(s) = impulses(s) + num(s)/den(s) with num/den strictly proper.
type fraction struct {
	ratio    exact.Ratio
	impulses exact.Poly
	num, den exact.Poly
	factors  []exact.Factor // square-free factors of den
	natural  exact.Poly     // product of the denominators of the transfer, for classification
	source   exact.Poly     // product of the denominators of the source transform
	splits   []exact.Poly   // factors of source, one for each frequency
}

// newFraction prepares a transform. The roots of natural are the network's
// frequencies that can show in it, those of source the source's; splits are
// factors of source that are better kept apart.
func newFraction(f exact.Ratio, natural, source exact.Poly, splits ...exact.Poly) *fraction {
	impulses, rest := f.ProperPart()
	f = exact.Ratio{Num: f.Num, Den: denominator(f)}
	out := &fraction{ratio: f, impulses: impulses, num: rest.Num, den: rest.Den, natural: natural, source: source, splits: splits}
	if rest.Num.IsZero() {
		out.den = exact.PolyFromInt64s(1)
	}
	out.factors = exact.SquareFree(out.den)
	return out
}

// expansion is a fraction over a family of poles: coefficients of its partial
// fractions, cached per precision.
type expansion struct {
	*fraction
	family *family
	powers []byte // per pole of the family: order of the pole, 0 where there is none

	mu    sync.Mutex
	cache map[uint][][]number.ComplexBall
}

// expand returns the expansion of a fraction, made on first use.
func (fam *family) expand(f *fraction) *expansion {
	fam.mu.Lock()
	defer fam.mu.Unlock()
	if e, ok := fam.expansions[f]; ok {
		return e
	}
	exponents := fam.base.exponents(f.factors)
	powers := make([]byte, len(fam.poles))
	for i, p := range fam.poles {
		powers[i] = byte(min(exponents[p.member], 255))
	}
	e := &expansion{fraction: f, family: fam, powers: powers, cache: map[uint][][]number.ComplexBall{}}
	fam.expansions[f] = e
	return e
}

// coefficients returns, per pole of the family (one of each conjugate pair)
// and per power m, the c of c·τ^m·e^{pτ}.
func (e *expansion) coefficients(ctx context.Context, prec uint) ([][]number.ComplexBall, error) {
	e.mu.Lock()
	defer e.mu.Unlock()
	if c, ok := e.cache[prec]; ok {
		return c, nil
	}
	poles, err := e.family.at(ctx, prec)
	if err != nil {
		return nil, err
	}
	cofactors, err := e.family.cofactorsOf(ctx, e.powers, poles, prec)
	if err != nil {
		return nil, err
	}
	num := complexCoefficients(e.num, prec)
	out := make([][]number.ComplexBall, len(poles))
	for i := range poles {
		if e.powers[i] == 0 {
			continue
		}
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		order := int(e.powers[i])
		if e.family.poles[i].zero {
			out[i] = e.atOrigin(order, prec)
			continue
		}
		series := divideSeries(taylor(num, poles[i], order), cofactors[i])
		out[i] = e.byPower(series, e.family.poles[i].real)
	}
	e.cache[prec] = out
	return out, nil
}

// cofactorsOf returns, for a monic denominator with poles of the given orders,
// its expansion around each pole p of order e without the factor (s−p)^e, to e
// terms: with x = s − p it is Π (p − p_j + x)^{e_j} over the other poles. A
// product of differences keeps its relative accuracy however high the degree.
func (fam *family) cofactorsOf(ctx context.Context, powers []byte, poles []number.ComplexBall, prec uint) ([][]number.ComplexBall, error) {
	key := cofactorKey{prec, string(powers)}
	fam.mu.Lock()
	known, ok := fam.cofactors[key]
	fam.mu.Unlock()
	if ok {
		return known, nil
	}
	out := make([][]number.ComplexBall, len(poles))
	for i, p := range poles {
		if powers[i] == 0 || fam.poles[i].zero {
			continue
		}
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		q := make([]number.ComplexBall, powers[i])
		q[0] = realBall(number.BallFromInt(1, prec))
		for j := range poles {
			for range powers[j] {
				if j != i {
					multiplyLinear(q, p.Sub(poles[j]))
				}
				if !fam.poles[j].real {
					multiplyLinear(q, p.Sub(poles[j].Conj()))
				}
			}
		}
		out[i] = q
	}
	fam.mu.Lock()
	defer fam.mu.Unlock()
	fam.cofactors[key] = out
	return out, nil
}

// byPower turns the expansion Σ series[k]·x^k of x^e·num/den into coefficients
// of τ^m: the term of 1/x^{m+1} is series[e−1−m], and its inverse transform
// τ^m/m!. Coefficients of real poles are real.
func (e *expansion) byPower(series []number.ComplexBall, real bool) []number.ComplexBall {
	n := len(series)
	out := make([]number.ComplexBall, n)
	factorial := big.NewRat(1, 1)
	for m := range out {
		if m > 1 {
			factorial.Mul(factorial, big.NewRat(1, int64(m)))
		}
		c := scaleComplex(series[n-1-m], factorial)
		if real {
			c = realBall(c.Re)
		}
		out[m] = c
	}
	return out
}

// atOrigin is atPole for the pole s = 0, where everything is rational.
func (e *expansion) atOrigin(order int, prec uint) []number.ComplexBall {
	out := make([]number.ComplexBall, order)
	for m, r := range e.originCoefficients() {
		out[m] = realBall(number.BallFromRat(r, prec))
	}
	return out
}

// originCoefficients returns the exact coefficients of τ^m at the pole s = 0,
// none where there is no such pole.
func (f *fraction) originCoefficients() []*big.Rat {
	order := f.den.Order()
	if order <= 0 {
		return nil
	}
	q := f.den.Shift(-order)
	series := make([]*big.Rat, order)
	q0 := q.Coeff(0)
	for k := range series {
		c := f.num.Coeff(k)
		for j := 1; j <= k; j++ {
			c.Sub(c, new(big.Rat).Mul(q.Coeff(j), series[k-j]))
		}
		series[k] = c.Quo(c, q0)
	}
	out := make([]*big.Rat, order)
	factorial := big.NewRat(1, 1)
	for m := range out {
		if m > 1 {
			factorial.Mul(factorial, big.NewRat(1, int64(m)))
		}
		out[m] = series[order-1-m].Mul(series[order-1-m], factorial)
	}
	return out
}

// initialValue is the limit for τ → 0+ of the part without impulses, exact: the
// initial-value theorem, lim s·F(s).
func (f *fraction) initialValue() *big.Rat {
	if f.num.Degree() != f.den.Degree()-1 {
		return new(big.Rat)
	}
	v := f.num.Leading()
	return v.Quo(v, f.den.Leading())
}

// complexCoefficients rounds the coefficients of a polynomial to prec.
func complexCoefficients(p exact.Poly, prec uint) []number.ComplexBall {
	out := make([]number.ComplexBall, p.Degree()+1)
	for i := range out {
		out[i] = realBall(number.BallFromRat(p.Coeff(i), prec))
	}
	return out
}

// taylor returns the first n Taylor coefficients of Σ c[k]·s^k at p, by
// repeated synthetic division.
func taylor(c []number.ComplexBall, p number.ComplexBall, n int) []number.ComplexBall {
	out := make([]number.ComplexBall, n)
	work := append([]number.ComplexBall(nil), c...)
	for k := range out {
		if len(work) == 0 {
			break
		}
		for i := len(work) - 2; i >= 0; i-- {
			work[i] = work[i].Add(work[i+1].Mul(p))
		}
		out[k] = work[0]
		work = work[1:]
	}
	return out
}

// multiplyLinear multiplies the truncated series q by (a + x), in place.
func multiplyLinear(q []number.ComplexBall, a number.ComplexBall) {
	for k := len(q) - 1; k > 0; k-- {
		q[k] = q[k].Mul(a).Add(q[k-1])
	}
	q[0] = q[0].Mul(a)
}

// divideSeries returns the series n/d to the length of d.
func divideSeries(n, d []number.ComplexBall) []number.ComplexBall {
	out := make([]number.ComplexBall, len(d))
	for k := range out {
		c := n[k]
		for j := 1; j <= k; j++ {
			c = c.Sub(d[j].Mul(out[k-j]))
		}
		out[k] = c.Quo(d[0])
	}
	return out
}

func realBall(b number.Ball) number.ComplexBall { return number.ComplexBall{Re: b} }

func scaleComplex(z number.ComplexBall, r *big.Rat) number.ComplexBall {
	if r.IsInt() && r.Num().IsInt64() && r.Num().Int64() == 1 {
		return z
	}
	return z.MulRat(r)
}
