package main

import (
	"bufio"
	"context"
	"fmt"
	"math/big"
	"os"
	"path/filepath"

	"portlight/analyze/exact"
	"portlight/analyze/network"
	"portlight/dialect/number"
)

// preferred are two-digit preferred numbers (series E12 of IEC 60063).
var preferred = [...]int64{10, 12, 15, 18, 22, 27, 33, 39, 47, 56, 68, 82}

// decimal returns the k-th preferred number times 10^exponent.
func decimal(k, exponent int) *big.Rat {
	ten := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(exponent, -exponent))), nil))
	r := new(big.Rat).SetInt64(preferred[k%len(preferred)])
	if exponent < 0 {
		return r.Quo(r, ten)
	}
	return r.Mul(r, ten)
}

// ladderPencil is a ladder of n sections with R and L in series and C across,
// driven by a voltage; unknowns are the inductor currents 2k and the node
// voltages 2k+1. These are the networks of the benchmarks of package exact.
func ladderPencil(n int) (*exact.Pencil, exact.Vector) {
	p := exact.NewPencil(2 * n)
	one, minus := big.NewRat(1, 1), big.NewRat(-1, 1)
	for k := range n {
		i, v := 2*k, 2*k+1
		if k > 0 {
			p.Add(i, v-2, one, nil)
		}
		p.Add(i, v, minus, nil)
		p.Add(i, i, new(big.Rat).Neg(decimal(k, 0)), new(big.Rat).Neg(decimal(k+5, -4)))
		p.Add(v, i, one, nil)
		if k+1 < n {
			p.Add(v, i+2, minus, nil)
		}
		p.Add(v, v, nil, new(big.Rat).Neg(decimal(k+2, -9)))
	}
	return p, exact.Vector{{Index: 0, Value: minus}}
}

// meshPencil is a square grid of k·k nodes with resistors between neighbours, a
// capacitor from every node to the reference, and a resistor from one corner.
func meshPencil(k int) (*exact.Pencil, exact.Vector) {
	p := exact.NewPencil(k * k)
	count := 0
	resistor := func(a, b int) {
		count++
		g := decimal(count, 2)
		g.Inv(g)
		p.Add(a, a, g, nil)
		if b >= 0 {
			p.Add(b, b, g, nil)
			p.Add(a, b, new(big.Rat).Neg(g), nil)
			p.Add(b, a, new(big.Rat).Neg(g), nil)
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
	return p, exact.Unit(0)
}

// filterLadder is the denominator of a terminated ladder of n sections with the
// values of a filter, the polynomial of the benchmark of roots.
func filterLadder(n int) exact.Poly {
	u, i := exact.Constant(big.NewRat(1, 1)), exact.Constant(big.NewRat(1, 600))
	for k := range int64(n) {
		z := exact.NewPoly(big.NewRat(10+k%7, 10), big.NewRat(47+(k*13)%29, 100000))
		y := exact.NewPoly(big.NewRat(1, 1000000), big.NewRat(22+(k*17)%31, 1000000000))
		u = u.Add(z.Mul(i))
		i = i.Add(y.Mul(u))
	}
	return u.Add(i.Scale(big.NewRat(50, 1)))
}

// polynomialTask is a network whose determinant and roots are asked for, or a
// polynomial alone.
type polynomialTask struct {
	name                 string
	pencil               *exact.Pencil // nil for a polynomial alone
	rhs                  exact.Vector
	polynomial           exact.Poly
	determinant, rooting float64 // marks in ms
}

func polynomialTasks() []polynomialTask {
	var all []polynomialTask
	add := func(kind string, size int, build func(int) (*exact.Pencil, exact.Vector), determinant, rooting float64) {
		p, rhs := build(size)
		all = append(all, polynomialTask{name: fmt.Sprintf("%s-%d", kind, size), pencil: p, rhs: rhs, determinant: determinant, rooting: rooting})
	}
	add("ladder", 10, ladderPencil, 0.12, 0.2)
	add("ladder", 20, ladderPencil, 0.4, 0.6)
	add("ladder", 50, ladderPencil, 3, 6)
	add("ladder", 100, ladderPencil, 15, 30)
	add("mesh", 5, meshPencil, 0.7, 1)
	add("mesh", 7, meshPencil, 5, 6)
	add("mesh", 10, meshPencil, 40, 40)
	for k, n := range []int{10, 20, 50, 100} {
		mark := []float64{0.2, 0.6, 6, 30}[k]
		all = append(all, polynomialTask{name: fmt.Sprintf("filter-%d", n), polynomial: filterLadder(n), rooting: mark})
	}
	return all
}

// denominator returns the determinant as an integer polynomial without a
// common factor.
func (t polynomialTask) denominator() (exact.Poly, error) {
	if t.pencil == nil {
		return t.polynomial.Primitive(), nil
	}
	f, err := t.pencil.Prepare(context.Background())
	if err != nil {
		return exact.Poly{}, err
	}
	d, err := f.DeterminantContext(context.Background())
	return d.Primitive(), err
}

// frequencyTask is a large network and the driving-point impedance of its first
// node, at omega rad/s.
type frequencyTask struct {
	name   string
	system *network.System
	mark   float64 // µs for each frequency of a sweep
	bench  string  // the benchmark of package float that measures it
}

const omega = 1e5

func frequencyTasks() ([]frequencyTask, error) {
	var all []frequencyTask
	add := func(name, bench string, mark float64, n *network.Network) error {
		s, problems := network.Assemble(n)
		if s == nil {
			return fmt.Errorf("%s: %v", name, problems)
		}
		all = append(all, frequencyTask{name, s, mark, bench})
		return nil
	}
	for _, err := range []error{
		add("ladder-1000", "ladder=1000", 45, longLadder(1000)),
		add("mesh-30", "mesh=30", 200, largeMesh(30)),
		add("mesh-100", "mesh=100", 12000, largeMesh(100)),
	} {
		if err != nil {
			return nil, err
		}
	}
	return all, nil
}

func two(kind network.Kind, from, to int, value *big.Rat) network.Element {
	return network.Element{Kind: kind, From: from, To: to, Value: number.FromRat(value)}
}

// longLadder and largeMesh are the networks of the benchmarks of package float.
func longLadder(sections int) *network.Network {
	n := &network.Network{Nodes: sections + 2}
	put := func(kind network.Kind, from, to int, num, den int64) {
		n.Elements = append(n.Elements, two(kind, from, to, big.NewRat(num, den)))
	}
	put(network.Resistor, 1, 0, 1000, 1)
	for k := range sections {
		m := int64(k)
		put(network.Inductor, k+1, k+2, 1+m%7, 1000)
		put(network.Capacitor, k+2, 0, 1+m%5, 1000000000)
		put(network.Resistor, k+2, 0, 1000*(100+m%11), 1)
	}
	put(network.Resistor, sections+1, 0, 1000, 1)
	return n
}

func largeMesh(side int) *network.Network {
	n := &network.Network{Nodes: side*side + 1}
	put := func(kind network.Kind, from, to int, num, den int64) {
		n.Elements = append(n.Elements, two(kind, from, to, big.NewRat(num, den)))
	}
	for i := range side {
		for j := range side {
			v := 1 + i*side + j
			if j+1 < side {
				put(network.Resistor, v, v+1, 1000, 1)
			}
			if i+1 < side {
				put(network.Resistor, v, v+side, 1000, 1)
			}
			put(network.Capacitor, v, 0, 1, 1000000000)
		}
	}
	put(network.Resistor, side*side, 0, 10000, 1)
	return n
}

// stepSections of R, L and C make the step response of degree 20; it is sampled
// at stepSamples instants, stepInterval seconds apart.
const (
	stepSections = 10
	stepSamples  = 1000
	stepInterval = 1e-6
)

// stepNetwork is the ladder behind a source (element 0) from node 1; the answer
// is the voltage of the last node.
func stepNetwork() (n *network.Network, last int) {
	n = &network.Network{Nodes: 2*stepSections + 2, Elements: []network.Element{{Kind: network.VoltageSource, From: 1}}}
	at := 1
	for k := range stepSections {
		n.Elements = append(n.Elements,
			two(network.Resistor, at, 2*k+2, big.NewRat(int64(10+k), 1)),
			two(network.Inductor, 2*k+2, 2*k+3, big.NewRat(1, 1000)),
			two(network.Capacitor, 2*k+3, 0, big.NewRat(1, 1000000)))
		at = 2*k + 3
	}
	n.Elements = append(n.Elements, two(network.Resistor, at, 0, big.NewRat(100, 1)))
	return n, at
}

// writeStateSpace writes its state equations x' = A·x + B·u by hand: the
// inductor currents and capacitor voltages in turn.
func writeStateSpace(w *bufio.Writer) {
	states := 2 * stepSections
	fmt.Fprintln(w, states, stepSamples, stepInterval)
	for k := range stepSections {
		a, b := make([]float64, states), make([]float64, states)
		if k > 0 {
			a[2*k-1] = 1000
		}
		a[2*k], a[2*k+1] = -1000*float64(10+k), -1000
		b[2*k] = 1e6
		if k+1 < stepSections {
			b[2*k+2] = -1e6
		} else {
			b[2*k+1] = -1e6 / 100
		}
		for _, row := range [][]float64{a, b} {
			for _, x := range row {
				fmt.Fprintf(w, "%.17g ", x)
			}
			fmt.Fprintln(w)
		}
	}
}

// integerRows returns the pencil's entries with every row multiplied by its
// common denominator, and the product of these.
func integerRows(p *exact.Pencil) (entries []exact.Entry, product *big.Int) {
	common := make([]*big.Int, p.Size())
	for i := range common {
		common[i] = big.NewInt(1)
	}
	for e := range p.Entries() {
		for _, v := range []*big.Rat{e.G, e.C} {
			g := new(big.Int).GCD(nil, nil, common[e.Row], v.Denom())
			common[e.Row].Mul(common[e.Row], g.Quo(v.Denom(), g))
		}
	}
	for e := range p.Entries() {
		factor := new(big.Rat).SetInt(common[e.Row])
		entries = append(entries, exact.Entry{Row: e.Row, Col: e.Col, G: new(big.Rat).Mul(e.G, factor), C: new(big.Rat).Mul(e.C, factor)})
	}
	product = big.NewInt(1)
	for _, c := range common {
		product.Mul(product, c)
	}
	return entries, product
}

func writeProblems(directory string) error {
	for _, t := range polynomialTasks() {
		d, err := t.denominator()
		if err != nil {
			return err
		}
		c, _ := d.Ints()
		if t.pencil != nil {
			entries, _ := integerRows(t.pencil)
			err = write(directory, t.name+".pencil", func(w *bufio.Writer) {
				fmt.Fprintln(w, t.pencil.Size(), len(entries))
				for _, e := range entries {
					fmt.Fprintln(w, e.Row, e.Col, e.G.Num(), e.C.Num())
				}
			})
			if err != nil {
				return err
			}
		}
		err = write(directory, t.name+".polynomial", func(w *bufio.Writer) {
			fmt.Fprintln(w, d.Degree())
			for _, v := range c {
				fmt.Fprintln(w, v)
			}
		})
		if err != nil {
			return err
		}
	}
	tasks, err := frequencyTasks()
	if err != nil {
		return err
	}
	for _, t := range tasks {
		entries := []exact.Entry{}
		for e := range t.system.Pencil().Entries() {
			entries = append(entries, e)
		}
		column, problem := t.system.InjectColumn(1, 0)
		if problem != nil {
			return fmt.Errorf("%s: %v", t.name, problem)
		}
		voltage, problem := t.system.NodeVoltage(1, 0)
		if problem != nil {
			return fmt.Errorf("%s: %v", t.name, problem)
		}
		err := write(directory, t.name+".system", func(w *bufio.Writer) {
			fmt.Fprintln(w, t.system.Size(), len(entries), omega, len(column.RHS), len(voltage.G))
			for _, e := range entries {
				g, _ := e.G.Float64()
				c, _ := e.C.Float64()
				fmt.Fprintf(w, "%d %d %.17g %.17g\n", e.Row, e.Col, g, c)
			}
			for _, v := range []exact.Vector{column.RHS, voltage.G} {
				for _, c := range v {
					x, _ := c.Value.Float64()
					fmt.Fprintf(w, "%d %.17g\n", c.Index, x)
				}
			}
		})
		if err != nil {
			return err
		}
	}
	return write(directory, "step.space", writeStateSpace)
}

func write(directory, name string, fill func(*bufio.Writer)) error {
	file, err := os.Create(filepath.Join(directory, name))
	if err != nil {
		return err
	}
	w := bufio.NewWriter(file)
	fill(w)
	if err := w.Flush(); err != nil {
		file.Close()
		return err
	}
	return file.Close()
}
