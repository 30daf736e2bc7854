package number

import (
	"errors"
	"math/big"
)

// The ways in which an operation on an [Exact] can fail.
var (
	// ErrDivisionByZero: the divisor is exactly zero.
	ErrDivisionByZero = errors.New("division by zero")
	// ErrUndecided: the operation needs a number that is proved to be nonzero
	// or of one sign, and the bound of its stand-in does not decide that.
	ErrUndecided = errors.New("the number cannot be told from zero within its bound")
	// ErrRange: the number or the result is too large, too small or too long.
	ErrRange = errors.New("number out of range")
	// ErrDomain: the function has no real value here.
	ErrDomain = errors.New("no real value")
	// ErrSyntax: the text is not a decimal number.
	ErrSyntax = errors.New("not a decimal number")
)

// Exact is an immutable rational number that is the value meant, or a stand-in
// for it with a proved bound of the error. The zero value is exactly 0.
type Exact struct {
	value *big.Rat // nil means 0
	bound magnitude
	// turns, when not nil, says that the true value is exactly turns·π
	// (and value is the stand-in of that).
	turns *big.Rat
}

var zeroRat = new(big.Rat)

// FromRat returns the exact number r. It keeps a copy.
func FromRat(r *big.Rat) Exact { return Exact{value: new(big.Rat).Set(r)} }

// FromInt returns the exact number n.
func FromInt(n int64) Exact { return Exact{value: new(big.Rat).SetInt64(n)} }

// Rat returns the rational, exact or stand-in. It must not be modified.
func (x Exact) Rat() *big.Rat {
	if x.value == nil {
		return zeroRat
	}
	return x.value
}

// IsExact tells whether the rational is the very value meant.
func (x Exact) IsExact() bool { return x.bound.isZero() }

// Bound returns the proved bound of |true value − Rat()|, 0 when exact.
func (x Exact) Bound() *big.Rat { return x.bound.rat() }

// Float returns the nearest float64, for display heuristics only: it may be
// infinite or zero where the number is not.
func (x Exact) Float() float64 {
	f, _ := x.Rat().Float64()
	return f
}

// The size of the rationals that InRange accepts: far above what element
// values need, far below what slows the arithmetic down.
const (
	rangeBits  = 4096  // |log2 |x|| for x ≠ 0
	lengthBits = 32768 // bits of numerator and denominator together
)

// InRange tells whether the number is within 2^±4096 (about 1e±1233), or zero,
// and its numerator and denominator have no more than 32768 bits together.
// Whoever evaluates expressions written by others refuses results outside with
// [ErrRange], so that repeated products cannot grow without limit.
func (x Exact) InRange() bool {
	r := x.Rat()
	n, d := r.Num().BitLen(), r.Denom().BitLen()
	return n == 0 || (n+d <= lengthBits && n-d <= rangeBits && d-n <= rangeBits)
}

// Neg returns −x.
func (x Exact) Neg() Exact {
	z := Exact{value: new(big.Rat).Neg(x.Rat()), bound: x.bound}
	if x.turns != nil {
		z.turns = new(big.Rat).Neg(x.turns)
	}
	return z
}

// Abs returns |x|.
func (x Exact) Abs() Exact {
	if x.Rat().Sign() < 0 {
		// ||true| − |stand-in|| ≤ |true − stand-in|; a multiple of π has the
		// sign of its stand-in.
		return x.Neg()
	}
	return x
}

// Add returns x+y.
func (x Exact) Add(y Exact) Exact {
	z := Exact{value: new(big.Rat).Add(x.Rat(), y.Rat()), bound: x.bound.addUp(y.bound)}
	if x.turns != nil && y.turns != nil {
		return piMultiple(new(big.Rat).Add(x.turns, y.turns), z)
	}
	if x.turns != nil && y.isExactZero() {
		return x
	}
	if y.turns != nil && x.isExactZero() {
		return y
	}
	return z
}

// Sub returns x−y.
func (x Exact) Sub(y Exact) Exact { return x.Add(y.Neg()) }

// Mul returns x·y. |xy − x'y'| ≤ |x'||y−y'| + |y'||x−x'| + |x−x'||y−y'|.
func (x Exact) Mul(y Exact) Exact {
	z := Exact{value: new(big.Rat).Mul(x.Rat(), y.Rat())}
	if x.IsExact() && y.IsExact() {
		return z
	}
	_, xu := magnitudeOfRat(x.Rat())
	_, yu := magnitudeOfRat(y.Rat())
	z.bound = xu.mulUp(y.bound).addUp(yu.mulUp(x.bound)).addUp(x.bound.mulUp(y.bound))
	switch {
	case x.turns != nil && y.IsExact():
		return piMultiple(new(big.Rat).Mul(x.turns, y.Rat()), z)
	case y.turns != nil && x.IsExact():
		return piMultiple(new(big.Rat).Mul(y.turns, x.Rat()), z)
	}
	return z
}

// Quo returns x/y. It fails with [ErrDivisionByZero] when y is exactly zero
// and with [ErrUndecided] when its bound does not exclude zero.
func (x Exact) Quo(y Exact) (Exact, error) {
	if y.IsExact() {
		if y.Rat().Sign() == 0 {
			return Exact{}, ErrDivisionByZero
		}
		return x.Mul(Exact{value: new(big.Rat).Inv(y.Rat())}), nil
	}
	if x.turns != nil && y.turns != nil {
		return Exact{value: new(big.Rat).Quo(x.turns, y.turns)}, nil
	}
	inverse, err := y.Inv()
	if err != nil {
		return Exact{}, err
	}
	return x.Mul(inverse), nil
}

// Inv returns 1/x, with the errors of Quo. |1/x − 1/x'| ≤ b/(|x'|(|x'|−b)).
func (x Exact) Inv() (Exact, error) {
	r := x.Rat()
	if x.IsExact() {
		if r.Sign() == 0 {
			return Exact{}, ErrDivisionByZero
		}
		return Exact{value: new(big.Rat).Inv(r)}, nil
	}
	lower, _ := magnitudeOfRat(r)
	rest := lower.subDown(x.bound)
	if rest.isZero() {
		return Exact{}, ErrUndecided
	}
	return Exact{value: new(big.Rat).Inv(r), bound: x.bound.divUp(lower).divUp(rest)}, nil
}

// Sign returns the sign of the true value: −1, 0 or 1, and whether the bound
// decides it.
func (x Exact) Sign() (sign int, decided bool) {
	r := x.Rat()
	if x.IsExact() || x.turns != nil {
		return r.Sign(), true
	}
	if new(big.Rat).Abs(r).Cmp(x.bound.rat()) > 0 {
		return r.Sign(), true
	}
	return 0, false
}

// Cmp compares the true values: the sign of x−y, and whether the bounds decide
// it.
func (x Exact) Cmp(y Exact) (order int, decided bool) { return x.Sub(y).Sign() }

// Equal tells whether x and y have the same rational (which may stand for two
// different true values within the bounds).
func (x Exact) Equal(y Exact) bool { return x.Rat().Cmp(y.Rat()) == 0 }

// String returns the rational as "p/q" or "p", preceded by "≈" for a stand-in.
func (x Exact) String() string {
	if x.IsExact() {
		return x.Rat().RatString()
	}
	return "≈" + x.Rat().RatString()
}

func (x Exact) isExactZero() bool { return x.IsExact() && x.Rat().Sign() == 0 }

// piMultiple marks z as exactly turns·π, or returns exactly 0.
func piMultiple(turns *big.Rat, z Exact) Exact {
	if turns.Sign() == 0 {
		return Exact{}
	}
	z.turns = turns
	return z
}

// PowInt returns x^n, with 0^0 = 1. It fails as [Exact.Inv] does for negative n
// and with [ErrRange] when the result would not be [Exact.InRange].
func (x Exact) PowInt(n int) (Exact, error) {
	if n < 0 {
		if n == -n { // the most negative int
			return Exact{}, ErrRange
		}
		inverse, err := x.Inv()
		if err != nil {
			return Exact{}, err
		}
		return inverse.PowInt(-n)
	}
	result, square := FromInt(1), x
	for {
		if n&1 != 0 {
			result = result.Mul(square)
		}
		n >>= 1
		if !result.InRange() {
			return Exact{}, ErrRange
		}
		if n == 0 {
			return result, nil
		}
		square = square.Mul(square)
		if !square.InRange() {
			return Exact{}, ErrRange
		}
	}
}
