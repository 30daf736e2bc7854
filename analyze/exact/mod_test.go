package exact

import (
	"math/big"
	"testing"

	"pgregory.net/rapid"
)

func TestPrimeTable(t *testing.T) {
	p := uint64(primeLimit)
	for i, k := range primeMultipliers {
		p = primeBelow(p)
		if p != uint64(k)*fieldOrder+1 {
			t.Fatalf("entry %d: %d, want %d", i, uint64(k)*fieldOrder+1, p)
		}
	}
	// Beyond the table the sequence goes on without a gap.
	list := takeModuli(len(primeMultipliers) + 2)
	if got := list[len(primeMultipliers)].p; got != primeBelow(p) {
		t.Fatalf("after the table: %d", got)
	}
}

func TestModularArithmetic(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := takeModuli(40)[rapid.IntRange(0, 39).Draw(t, "prime")]
		p := new(big.Int).SetUint64(m.p)
		a, b := drawInt(t, 400, "a"), drawInt(t, 400, "b")
		x, y := m.fromBig(a), m.fromBig(b)
		check := func(what string, got uint64, want *big.Int) {
			want = new(big.Int).Mod(want, p)
			if got >= m.p || m.plain(got) != want.Uint64() {
				t.Fatalf("%s: %d, want %v", what, m.plain(got), want)
			}
		}
		check("value", x, a)
		check("product", m.mul(x, y), new(big.Int).Mul(a, b))
		check("sum", m.add(x, y), new(big.Int).Add(a, b))
		check("difference", m.sub(x, y), new(big.Int).Sub(a, b))
		check("negative", m.neg(x), new(big.Int).Neg(a))
		if x != 0 {
			check("inverse", m.mul(m.inverse(x), x), bigOne)
		}
		check("square root of -1", m.mul(m.sqrtMinusOne(), m.sqrtMinusOne()), big.NewInt(-1))
		v := rapid.Int64().Draw(t, "v")
		check("small", m.fromInt64(v), big.NewInt(v))
	})
}

func TestReconstruction(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := rapid.IntRange(1, 150).Draw(t, "primes")
		list := takeModuli(k)
		limit := productOfModuli(list)
		limit.Rsh(limit, 1)
		x := drawInt(t, 61*k-2, "x")
		if rapid.IntRange(0, 4).Draw(t, "extreme") == 0 {
			x.Sub(limit, big.NewInt(rapid.Int64Range(0, 3).Draw(t, "below")))
		}
		if x.CmpAbs(limit) > 0 {
			return
		}
		const stride = 3
		r := make([]uint64, k*stride)
		for i, m := range list {
			r[i*stride+1] = m.fromBig(x)
		}
		if got := reconstructionFor(list).integer(r[1:], stride); got.Cmp(x) != 0 {
			t.Fatalf("%v, want %v", got, x)
		}
	})
}

func TestInterpolation(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := takeModuli(10)[rapid.IntRange(0, 9).Draw(t, "prime")]
		n := transformSize(rapid.IntRange(1, 300).Draw(t, "n"))
		seed := rapid.Uint64().Draw(t, "seed")
		c := make([]uint64, n)
		for i := range c {
			seed = seed*6364136223846793005 + 1442695040888963407
			c[i] = m.fromUint(seed)
		}
		q := m.newPoints(n, m.fromUint(seed|1))
		values := make([]uint64, n)
		for k, x := range q.x {
			for i := n - 1; i >= 0; i-- {
				values[k] = m.add(m.mul(values[k], x), c[i])
			}
		}
		q.interpolate(values)
		for i := range c {
			if c[i] != values[i] {
				t.Fatalf("coefficient %d of %d", i, n)
			}
		}
	})
}
