package exact

// program is an elimination as a straight list of operations on vectors of
// residues. Slots are vectors with one element per evaluation point.
type program struct {
	slots   int
	point   int32 // the slot of the evaluation points
	ops     []op
	pairs   []product
	sources []*intEntry
	rows    []int     // the rows of the sources, for the factors of a symmetric system
	outputs []int32   // slots, −1 for an output that is zero
	sym     *symmetry // nil for a system that is not symmetric
	rowsAll int       // number of rows with factors
}

type opKind uint8

const (
	opDot     opKind = iota // dst = source − Σ products
	opInverse               // dst = 1/a
	opMul                   // dst = a·b
	opNeg                   // dst = −a
	opAdd                   // dst = dst + a
)

// op is one operation; a and b are slots or, for opDot, the range of its
// products, and source an index into sources or −1.
type op struct {
	kind   opKind
	dst    int32
	a, b   int32
	source int32
}

// compile turns an elimination into a program whose outputs are the wanted
// block determinants followed by all numerators.
func (y *system) compile(z *elimination, wantDet []bool) *program {
	c := &compiler{y: y, z: z, p: &program{sym: z.symmetry, rowsAll: y.n}}
	c.p.slots = len(z.entries)
	c.p.point = c.newSlot()
	inverse := c.newSlot()
	pivots := make([][]int32, len(y.end))
	for _, step := range z.pivots {
		c.dot(step.pivot)
		for _, e := range step.upper {
			c.dot(e)
		}
		for _, e := range step.lower {
			c.dot(e)
		}
		pivots[step.block] = append(pivots[step.block], step.pivot)
		if len(step.upper) == 0 || len(step.lower) == 0 {
			continue
		}
		c.emit(op{kind: opInverse, dst: inverse, a: step.pivot})
		scaled := step.upper
		if step.scaleLower {
			scaled = step.lower
		}
		for _, e := range scaled {
			from := e
			if mirror := z.entries[e].mirrorOf; mirror > 0 {
				from = mirror - 1
			}
			c.emit(op{kind: opMul, dst: e, a: from, b: inverse})
		}
	}
	c.determinants(pivots, wantDet)
	return c.p
}

type compiler struct {
	y *system
	z *elimination
	p *program
}

func (c *compiler) newSlot() int32 {
	c.p.slots++
	return int32(c.p.slots - 1)
}

func (c *compiler) emit(o op) { c.p.ops = append(c.p.ops, o) }

// dot emits the operation that makes an entry of the factors.
func (c *compiler) dot(entry int32) {
	e := &c.z.entries[entry]
	if e.mirrorOf > 0 {
		return
	}
	o := op{kind: opDot, dst: entry, source: -1, a: int32(len(c.p.pairs))}
	c.p.pairs = append(c.p.pairs, e.products...)
	o.b = int32(len(c.p.pairs))
	if e.source != nil {
		o.source = int32(len(c.p.sources))
		c.p.sources = append(c.p.sources, e.source)
		c.p.rows = append(c.p.rows, e.row)
	}
	c.emit(o)
}

// determinants emits the products of the pivots and the numerators.
func (c *compiler) determinants(pivots [][]int32, wantDet []bool) {
	numerators := c.y.outs*c.y.rhs > 0
	all := int32(-1)
	for b, list := range pivots {
		if !numerators && !wantDet[b] {
			continue
		}
		d := c.newSlot()
		c.product(d, list)
		if c.z.negative[b] {
			c.emit(op{kind: opNeg, dst: d, a: d})
		}
		if wantDet[b] {
			c.p.outputs = append(c.p.outputs, d)
		}
		if all < 0 {
			all = d
		} else if numerators {
			t := c.newSlot()
			c.emit(op{kind: opMul, dst: t, a: all, b: d})
			all = t
		}
	}
	for _, e := range c.z.border {
		if e < 0 {
			c.p.outputs = append(c.p.outputs, -1)
			continue
		}
		// The Schur complement of the border is −oᵀ·M⁻¹·b.
		c.dot(int32(e))
		c.emit(op{kind: opNeg, dst: int32(e), a: int32(e)})
		if all >= 0 {
			c.emit(op{kind: opMul, dst: int32(e), a: int32(e), b: all})
		}
		c.p.outputs = append(c.p.outputs, int32(e))
	}
}

func (c *compiler) product(dst int32, list []int32) {
	if len(list) == 1 {
		c.emit(op{kind: opMul, dst: dst, a: list[0], b: -1})
		return
	}
	c.emit(op{kind: opMul, dst: dst, a: list[0], b: list[1]})
	for _, e := range list[2:] {
		c.emit(op{kind: opMul, dst: dst, a: dst, b: e})
	}
}

// compileSolution returns a program for a system with one border column whose
// outputs are the determinant of all blocks together and the components of
// det·x, by back substitution.
func (y *system) compileSolution(z *elimination) *program {
	c := &compiler{y: y, z: z, p: &program{}}
	c.p.slots = len(z.entries)
	c.p.point = c.newSlot()
	inverse := c.newSlot()
	var pivots []int32
	negative := false
	for _, odd := range z.negative {
		negative = negative != odd
	}
	for k := range z.pivots {
		step := &z.pivots[k]
		pivots = append(pivots, step.pivot)
		for _, list := range [][]int32{{step.pivot}, step.upper, step.lower} {
			for _, e := range list {
				c.dot(e)
			}
		}
		// The inverse always goes into the row: x is then the border less the
		// products with later components.
		if len(step.upper) > 0 {
			c.emit(op{kind: opInverse, dst: inverse, a: step.pivot})
			for _, e := range step.upper {
				c.emit(op{kind: opMul, dst: e, a: e, b: inverse})
			}
		}
	}
	det := c.newSlot()
	c.product(det, pivots)
	if negative {
		c.emit(op{kind: opNeg, dst: det, a: det})
	}
	c.p.outputs = append(c.p.outputs, det)
	c.backSubstitute(det)
	return c.p
}

// backSubstitute emits the components of x from the last pivot to the first
// and multiplies them by the determinant. Components that no right-hand side
// reaches are zero.
func (c *compiler) backSubstitute(det int32) {
	x := make([]int32, c.y.n) // slots by column
	for k := len(c.z.pivots) - 1; k >= 0; k-- {
		step := &c.z.pivots[k]
		x[step.col] = c.newSlot()
		o := op{kind: opDot, dst: x[step.col], source: -1, a: int32(len(c.p.pairs))}
		border := int32(-1)
		for i, e := range step.upper {
			if col := step.upperCols[i]; col < c.y.n {
				c.p.pairs = append(c.p.pairs, product{e, x[col]})
			} else {
				border = e
			}
		}
		o.b = int32(len(c.p.pairs))
		c.emit(o)
		if border >= 0 {
			c.emit(op{kind: opAdd, dst: x[step.col], a: border})
		}
	}
	for _, slot := range x {
		t := c.newSlot()
		c.emit(op{kind: opMul, dst: t, a: slot, b: det})
		c.p.outputs = append(c.p.outputs, t)
	}
}
