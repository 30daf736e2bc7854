package number

import (
	"math/big"
)

const (
	// standInBits is the length of a stand-in's mantissa: 86 decimal digits.
	standInBits = 288
	// standInPrecision is the working precision that stand-ins are computed at.
	standInPrecision = 384
	// longestPrecision ends the search for a more precise centre; numbers in
	// range never need it.
	longestPrecision = 1 << 15
	// longestArgument bounds the binary exponent of arguments of the functions,
	// so that results have a reasonable length.
	longestArgument = 16
)

// standIn makes the stand-in of f(x). The rational is the midpoint of f on the
// rational of x alone, rounded to standInBits, so that it depends on nothing
// else; the bound measures how far it can be from anything f takes on the ball
// of x. For a stand-in x, where that leaves room for one of the values in nice,
// the first such is taken instead: sin(3.14159…) with a bound that allows 0 is 0
// and the bound.
func standIn(x Exact, f func(Ball) Ball, nice ...*big.Rat) (Exact, error) {
	return standInOf(func(arguments ...Ball) Ball { return f(arguments[0]) }, nice, x)
}

func standInOf(f func(...Ball) Ball, nice []*big.Rat, arguments ...Exact) (Exact, error) {
	centre, prec := settledCentre(f, arguments)
	balls := make([]Ball, len(arguments))
	exact := true
	for i, x := range arguments {
		balls[i] = BallFromExact(x, prec)
		exact = exact && x.IsExact()
	}
	if exact {
		return standInBetween(centre, centre)
	}
	return standInBetween(centre, f(balls...), nice...)
}

// settledCentre evaluates f on the rationals of the arguments, at more and more
// bits until the stand-in has its relative precision (log x next to 1) or the
// value is exact.
func settledCentre(f func(...Ball) Ball, arguments []Exact) (centre Ball, prec uint) {
	balls := make([]Ball, len(arguments))
	for prec = standInPrecision; ; prec *= 2 {
		for i, x := range arguments {
			balls[i] = BallFromRat(x.Rat(), prec)
		}
		centre = f(balls...)
		if centre.RelativeBits() >= standInBits+32 || prec > longestPrecision {
			return centre, prec
		}
	}
}

// standInBetween rounds the midpoint of centre to a stand-in for whatever hull
// holds.
func standInBetween(centre, hull Ball, nice ...*big.Rat) (Exact, error) {
	if !centre.IsFinite() || !hull.IsFinite() {
		return Exact{}, ErrUndecided
	}
	var rounded big.Float
	rounded.SetPrec(standInBits).Set(&centre.mid)
	value, _ := rounded.Rat(nil)
	if value == nil {
		value = new(big.Rat)
	}
	for _, r := range nice {
		if hull.Contains(r) {
			value = r
			break
		}
	}
	distance := new(big.Rat).Sub(hull.MidRat(), value)
	_, upper := magnitudeOfRat(distance)
	z := Exact{value: value, bound: upper.addUp(hull.rad)}
	if !z.InRange() {
		return Exact{}, ErrRange
	}
	return z, nil
}

var piStandIn = func() Exact {
	pi := PiBall(standInPrecision)
	z, _ := standInBetween(pi, pi)
	z.turns = big.NewRat(1, 1)
	return z
}()

// Pi returns the stand-in for π. Rational multiples of it are known as such:
// their quotients are exact, and so are their sines and cosines where those
// are rational.
func Pi() Exact { return piStandIn }

// Sqrt returns √x, exactly where x is the square of a rational. It fails with
// [ErrDomain] for negative x and with [ErrUndecided] where the bound of x does
// not decide its sign.
func Sqrt(x Exact) (Exact, error) {
	sign, decided := x.Sign()
	switch {
	case !decided:
		return Exact{}, ErrUndecided
	case sign < 0:
		return Exact{}, ErrDomain
	case !x.InRange():
		return Exact{}, ErrRange
	}
	if x.IsExact() {
		if root := rationalRoot(x.Rat(), 2); root != nil {
			return Exact{value: root}, nil
		}
	}
	return standIn(x, Ball.Sqrt)
}

// rationalRoot returns the n-th root of r ≥ 0 if it is rational, else nil.
func rationalRoot(r *big.Rat, n int64) *big.Rat {
	num := integerRoot(r.Num(), n)
	if num == nil {
		return nil
	}
	den := integerRoot(r.Denom(), n)
	if den == nil {
		return nil
	}
	return new(big.Rat).SetFrac(num, den)
}

// integerRoot returns the n-th root of a ≥ 0 if it is an integer, else nil, by
// Newton's iteration from above.
func integerRoot(a *big.Int, n int64) *big.Int {
	if a.BitLen() <= 1 {
		return new(big.Int).Set(a)
	}
	if int64(a.BitLen()) <= n { // 1 < a < 2^n
		return nil
	}
	root := new(big.Int)
	if n == 2 {
		root.Sqrt(a)
	} else {
		less, order := big.NewInt(n-1), big.NewInt(n)
		root.Lsh(big.NewInt(1), uint((int64(a.BitLen())+n-1)/n))
		for {
			next := new(big.Int).Quo(a, new(big.Int).Exp(root, less, nil))
			next.Add(next, new(big.Int).Mul(less, root))
			next.Quo(next, order)
			if next.Cmp(root) >= 0 {
				break
			}
			root = next
		}
	}
	if new(big.Int).Exp(root, big.NewInt(n), nil).Cmp(a) != 0 {
		return nil
	}
	return root
}

// shortArgument tells whether |x| < 2^longestArgument.
func shortArgument(x Exact) bool {
	_, upper := magnitudeOfRat(x.Rat())
	return upper.cmp(powerOfTwo(longestArgument)) < 0 && x.InRange()
}

// Exp returns e^x, exactly for 0. It fails with [ErrRange] where the result is
// not [Exact.InRange].
func Exp(x Exact) (Exact, error) {
	switch {
	case x.isExactZero():
		return FromInt(1), nil
	case !shortArgument(x):
		return Exact{}, ErrRange
	}
	return standIn(x, Ball.Exp)
}

// Log returns the natural logarithm, exactly for 1. It fails with [ErrDomain]
// where x is not positive and with [ErrUndecided] where its bound does not
// decide that.
func Log(x Exact) (Exact, error) {
	switch err := positive(x); {
	case err != nil:
		return Exact{}, err
	case x.IsExact() && x.Equal(FromInt(1)):
		return Exact{}, nil
	}
	return standIn(x, Ball.Log, zeroRat)
}

func positive(x Exact) error {
	sign, decided := x.Sign()
	switch {
	case !decided:
		return ErrUndecided
	case sign <= 0:
		return ErrDomain
	case !x.InRange():
		return ErrRange
	}
	return nil
}

var (
	oneRat  = big.NewRat(1, 1)
	halfRat = big.NewRat(1, 2)
	// The rational values of sine and cosine at rational multiples of π are
	// these alone (I. Niven, Irrational Numbers, 1956, theorem 3.9).
	sineValues = []*big.Rat{zeroRat, halfRat, big.NewRat(-1, 2), oneRat, big.NewRat(-1, 1)}
)

// Sin returns the sine of an angle in radians. Exact for 0 and for those
// multiples of [Pi] where it is rational.
func Sin(x Exact) (Exact, error) {
	if x.turns != nil {
		return SinPi(x.turns)
	}
	if x.isExactZero() {
		return Exact{}, nil
	}
	if !shortArgument(x) {
		return Exact{}, ErrRange
	}
	return standIn(x, Ball.Sin, sineValues...)
}

// Cos returns the cosine of an angle in radians; see [Sin].
func Cos(x Exact) (Exact, error) {
	if x.turns != nil {
		return CosPi(x.turns)
	}
	if x.isExactZero() {
		return FromInt(1), nil
	}
	if !shortArgument(x) {
		return Exact{}, ErrRange
	}
	return standIn(x, Ball.Cos, sineValues...)
}

// Tan returns sine over cosine, with the errors of [Exact.Quo].
func Tan(x Exact) (Exact, error) {
	s, err := Sin(x)
	if err != nil {
		return Exact{}, err
	}
	c, err := Cos(x)
	if err != nil {
		return Exact{}, err
	}
	if s.Rat().Cmp(c.Rat()) == 0 && x.turns != nil && !s.isExactZero() {
		return FromInt(1), nil
	}
	return s.Quo(c)
}

// SinPi returns sin(πr): r counts half turns, so 30° is 1/6.
func SinPi(r *big.Rat) (Exact, error) {
	// sin(πr) = cos(π(r − 1/2))
	return CosPi(new(big.Rat).Sub(r, halfRat))
}

// CosPi returns cos(πr), exactly where it is rational. The argument is brought
// to 0 ≤ r ≤ 1/2 first, so that equal values get equal stand-ins up to the sign.
func CosPi(r *big.Rat) (Exact, error) {
	if !FromRat(r).InRange() {
		return Exact{}, ErrRange
	}
	// r modulo 2, then into [0, 1] by cos(2π−a) = cos a, then into [0, ½] by
	// cos(π−a) = −cos a.
	whole := new(big.Int).Mul(r.Denom(), big.NewInt(2))
	rest := new(big.Rat).SetFrac(new(big.Int).Mod(r.Num(), whole), r.Denom())
	if rest.Cmp(oneRat) > 0 {
		rest.Sub(big.NewRat(2, 1), rest)
	}
	negative := rest.Cmp(halfRat) > 0
	if negative {
		rest.Sub(oneRat, rest)
	}
	value, err := cosFirstQuarter(rest)
	if negative {
		value = value.Neg()
	}
	return value, err
}

func cosFirstQuarter(r *big.Rat) (Exact, error) {
	switch {
	case r.Sign() == 0:
		return FromInt(1), nil
	case r.Cmp(halfRat) == 0:
		return Exact{}, nil
	case r.Cmp(big.NewRat(1, 3)) == 0:
		return Exact{value: halfRat}, nil
	}
	cos := PiBall(standInPrecision).MulRat(r).Cos()
	return standInBetween(cos, cos)
}

// Atan returns the angle between −π/2 and π/2 whose tangent is x.
func Atan(x Exact) (Exact, error) { return Atan2(x, FromInt(1)) }

// Atan2 returns the angle of the point (x, y) in (−π, π], a known multiple of
// [Pi] on the axes and diagonals. It fails with [ErrDomain] for the origin, and
// with [ErrUndecided] where the bounds allow the origin or both sides of the
// negative x axis.
func Atan2(y, x Exact) (Exact, error) {
	if !x.InRange() || !y.InRange() {
		return Exact{}, ErrRange
	}
	if x.isExactZero() && y.isExactZero() {
		return Exact{}, ErrDomain
	}
	if x.IsExact() && y.IsExact() {
		if quarters, ok := axisAngle(y.Rat(), x.Rat()); ok {
			return Pi().Mul(FromRat(big.NewRat(quarters, 4))), nil
		}
	}
	if sign, decided := x.Sign(); !y.isExactZero() && (!decided || sign <= 0) {
		// Only where the ordinate has one sign is the angle in one piece.
		if _, decided := y.Sign(); !decided {
			return Exact{}, ErrUndecided
		}
	}
	angle := func(arguments ...Ball) Ball { return arguments[0].Atan2(arguments[1]) }
	return standInOf(angle, []*big.Rat{zeroRat}, y, x)
}

// axisAngle returns the angle of (x, y) in quarters of π where it lies on an
// axis or a diagonal.
func axisAngle(y, x *big.Rat) (quarters int64, ok bool) {
	sy, sx := int64(y.Sign()), x.Sign()
	switch {
	case sy == 0 && sx > 0:
		return 0, true
	case sy == 0:
		return 4, true
	case sx == 0:
		return 2 * sy, true
	case new(big.Rat).Abs(y).Cmp(new(big.Rat).Abs(x)) != 0:
		return 0, false
	case sx > 0:
		return sy, true
	}
	return 3 * sy, true
}

// Log10 returns the decimal logarithm, exactly for powers of ten; errors as for
// [Log].
func Log10(x Exact) (Exact, error) {
	if err := positive(x); err != nil {
		return Exact{}, err
	}
	if x.IsExact() {
		if k, ok := powerOfTenExponent(x.Rat()); ok {
			return FromInt(k), nil
		}
	}
	return standIn(x, Ball.Log10, zeroRat)
}

// powerOfTenExponent returns k with r = 10^k, if there is one.
func powerOfTenExponent(r *big.Rat) (k int64, ok bool) {
	n, sign := r.Num(), int64(1)
	if !r.IsInt() {
		if n.Cmp(big.NewInt(1)) != 0 {
			return 0, false
		}
		n, sign = r.Denom(), -1
	}
	k = int64(len(n.String()) - 1)
	if powerOfTen(int(k)).Cmp(n) != 0 {
		return 0, false
	}
	return sign * k, true
}

// FromDecibel returns the ratio 10^(level/20) of a level in decibels (of a field
// quantity: ISO 80000-3:2006, clause 3-21), exactly for multiples of 20 dB.
func FromDecibel(level Exact) (Exact, error) {
	return FromInt(10).Pow(level.Mul(FromRat(big.NewRat(1, 20))))
}

// Decibel returns the level 20·log10 x of a ratio x > 0, exactly for powers of
// ten; errors as for [Log].
func Decibel(x Exact) (Exact, error) {
	level, err := Log10(x)
	if err != nil {
		return Exact{}, err
	}
	return level.Mul(FromInt(20)), nil
}

// Pow returns x^y. Exact integer exponents go by [Exact.PowInt]; for others x
// must be positive, or zero under a positive exponent. Rational roots of
// rationals, such as 8^(2/3), are exact.
func (x Exact) Pow(y Exact) (Exact, error) {
	if y.IsExact() && y.Rat().IsInt() {
		n := y.Rat().Num()
		switch {
		case n.IsInt64() && int64(int(n.Int64())) == n.Int64():
			return x.PowInt(int(n.Int64()))
		default:
			return Exact{}, ErrRange
		}
	}
	if x.isExactZero() {
		switch sign, decided := y.Sign(); {
		case !decided:
			return Exact{}, ErrUndecided
		case sign < 0:
			return Exact{}, ErrDivisionByZero
		}
		return Exact{}, nil
	}
	if err := positive(x); err != nil {
		return Exact{}, err
	}
	if x.IsExact() && x.Equal(FromInt(1)) {
		return x, nil
	}
	if !shortArgument(y) {
		return Exact{}, ErrRange
	}
	if x.IsExact() && y.IsExact() {
		if d := y.Rat().Denom(); d.IsInt64() {
			if root := rationalRoot(x.Rat(), d.Int64()); root != nil {
				return Exact{value: root}.PowInt(int(y.Rat().Num().Int64()))
			}
		}
	}
	power := func(arguments ...Ball) Ball { return arguments[0].Log().Mul(arguments[1]).Exp() }
	return standInOf(power, nil, x, y)
}
