package exact

import (
	"fmt"
	"math/big"
)

// The networks of tests and benchmarks. Values are two-digit preferred
// numbers (series E12 of IEC 60063) in turn, so that no two sections are
// alike.
var preferred = [...]int64{10, 12, 15, 18, 22, 27, 33, 39, 47, 56, 68, 82}

// decimal returns the k-th preferred number times 10^exponent.
func decimal(k, exponent int) *big.Rat {
	r := new(big.Rat).SetInt64(preferred[k%len(preferred)])
	return r.Mul(r, powerOfTen(exponent))
}

// ladder is a ladder of n sections with R and L in series and C across,
// driven by a voltage; unknowns are the inductor currents 2k and the node
// voltages 2k+1. The numerator of the last voltage is the product of
// constants, so the current into the network is asked for as well.
func ladder(n int) (p *Pencil, rhs, input, output Vector) {
	p = NewPencil(2 * n)
	one, minus := big.NewRat(1, 1), big.NewRat(-1, 1)
	for k := range n {
		i, v := 2*k, 2*k+1
		// v(k−1) − v(k) − (R + sL)·i = 0
		if k > 0 {
			p.Add(i, v-2, one, nil)
		}
		p.Add(i, v, minus, nil)
		p.Add(i, i, decimal(k, 0).Neg(decimal(k, 0)), decimal(k+5, -4).Neg(decimal(k+5, -4)))
		// i(k) − i(k+1) − sC·v(k) = 0
		p.Add(v, i, one, nil)
		if k+1 < n {
			p.Add(v, i+2, minus, nil)
		}
		p.Add(v, v, nil, decimal(k+2, -9).Neg(decimal(k+2, -9)))
	}
	return p, Vector{{0, minus}}, Unit(0), Unit(2*n - 1)
}

// mesh is a square grid of k·k nodes with resistors between neighbours and a
// capacitor from every node to the reference, and a resistor from one corner
// to the reference.
func mesh(k int) (p *Pencil, rhs, input, output Vector) {
	p = NewPencil(k * k)
	count := 0
	resistor := func(a, b int) {
		count++
		g := decimal(count, 2)
		g.Inv(g)
		minus := new(big.Rat).Neg(g)
		p.Add(a, a, g, nil)
		if b >= 0 {
			p.Add(b, b, g, nil)
			p.Add(a, b, minus, nil)
			p.Add(b, a, minus, nil)
		}
	}
	resistor(0, -1)
	for y := range k {
		for x := range k {
			a := y*k + x
			if x+1 < k {
				resistor(a, a+1)
			}
			if y+1 < k {
				resistor(a, a+k)
			}
			p.Add(a, a, nil, decimal(a+7, -9))
		}
	}
	return p, Unit(0), Unit(0), Unit(k*k - 1)
}

// network is a named network of the benchmarks.
type network struct {
	name  string
	build func(int) (p *Pencil, rhs, input, output Vector)
	size  int
	mark  float64 // ms for numerator and denominator on one thread
}

var benchmarkNetworks = []network{
	{name: "ladder", build: ladder, size: 10, mark: 0.12},
	{name: "ladder", build: ladder, size: 20, mark: 0.4},
	{name: "ladder", build: ladder, size: 50, mark: 3},
	{name: "ladder", build: ladder, size: 100, mark: 15},
	{name: "mesh", build: mesh, size: 5, mark: 0.7},
	{name: "mesh", build: mesh, size: 7, mark: 5},
	{name: "mesh", build: mesh, size: 10, mark: 40},
}

func (n network) String() string { return fmt.Sprintf("%s=%d", n.name, n.size) }
