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
