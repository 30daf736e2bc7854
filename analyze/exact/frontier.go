package exact

import (
	"math"
	"math/big"
	"math/bits"
	"slices"
)

// The frontier recurrence expands the determinant of a chain-like pencil
// directly over ℤ[s]. The entries are added one after the other; what is kept
// are the minors of the matrix so far. A row whose entries have all been
// added must be in the minor, one without entries cannot be; so a minor is
// told by its rows and columns on the frontier, those begun and not finished.
// With an entry m in row r and column c the minors that hold both change by
//
//	T[I ∪ r][J ∪ c] += ±m·T[I][J],
//
// which is the expansion of the determinant in that entry. In a ladder the
// frontier is one or two rows and columns wide.
//
// Polynomials are packed into integers, their values at s = 2^K with K beyond
// the coefficients, so that all work is additions and products of long
// integers by short ones. K grows with a running bound on the coefficients.

// frontierPlan is the list of what to do, made from the pattern and the sizes
// of the entries.
type frontierPlan struct {
	stamps   []frontierStamp
	slots    int // minors alive at a time
	det, num int // slots of det(M) and the bordered determinant, −1 for zero
	detOdd   bool
	numOdd   bool
	cost     float64 // estimated nanoseconds
}

// frontierStamp adds one entry.
type frontierStamp struct {
	g, c  *big.Int // as in intEntry
	moves []frontierMove
	live  []int32 // slots in use afterwards
	bits  float64 // bound on the logarithm of all their coefficients
	terms int     // bound on the number of their coefficients
}

// frontierMove adds (subtracts) the entry times slot src to slot dst, which
// is empty before if fresh.
type frontierMove struct {
	src, dst  int32
	sub, zero bool
}

// Limits beyond which a system is not chain-like.
const (
	frontierMaxStates = 96
	frontierMaxWidth  = 12
)

// frontierState is a minor in the simulation: which rows (low half) and
// columns (high half) of the frontier it holds.
type frontierState struct {
	mask   uint64
	slot   int32
	bits   float64
	degree int
}

// frontierPlanner simulates the recurrence.
type frontierPlanner struct {
	y         *system
	plan      *frontierPlan
	states    []frontierState
	rows      frontierSide
	cols      frontierSide
	free      []int32
	moves     []frontierMove // memory of the stamps' lists
	live      []int32
	det       bool // det(M) is wanted
	borderRow int  // −1 without border
	borderCol int
}

// frontierSide is the bookkeeping of the rows or of the columns.
type frontierSide struct {
	left  []int // entries still to come
	rank  []int // order of completion
	bit   []int // frontier bit, −1 outside
	used  uint64
	done  int
	order []int                 // in order of completion
	at    [frontierMaxWidth]int // what holds a frontier bit
}

// planFrontier returns a plan for det(M) and the numerator of one pair of
// borders (out and rhs, −1 for none), or nil if the system is not
// chain-like.
func (y *system) planFrontier(out, rhs int, det bool) *frontierPlan {
	z := &frontierPlanner{y: y, plan: &frontierPlan{det: -1, num: -1}, det: det, borderRow: -1, borderCol: -1}
	if out >= 0 {
		z.borderRow, z.borderCol = y.n+out, y.n+rhs
	}
	list := z.stampOrder()
	z.countEntries(list)
	z.states = append(make([]frontierState, 0, 16), frontierState{slot: 0})
	z.plan.slots = 1
	z.plan.stamps = make([]frontierStamp, 0, len(list))
	z.moves = make([]frontierMove, 0, 2*len(list))
	z.live = make([]int32, 0, 3*len(list))
	for _, s := range list {
		if !z.stamp(s.row, s.entry) {
			return nil
		}
	}
	z.finish()
	return z.plan
}

// placedEntry is an entry with its row.
type placedEntry struct {
	row   int
	entry *intEntry
}

// countEntries prepares the bookkeeping for the entries in order.
func (z *frontierPlanner) countEntries(list []placedEntry) {
	z.rows.init(len(z.y.rows))
	z.cols.init(z.y.n + z.y.rhs)
	for _, s := range list {
		z.rows.left[s.row]++
		z.cols.left[s.entry.col]++
	}
	rows, cols := slices.Clone(z.rows.left), slices.Clone(z.cols.left)
	for _, s := range list {
		z.rows.complete(rows, s.row, s.row == z.borderRow)
		z.cols.complete(cols, s.entry.col, s.entry.col == z.borderCol)
	}
	// The border is last in the order of rows and of columns.
	for i := range z.rows.rank {
		if i == z.borderRow {
			z.rows.rank[i] = len(z.rows.rank)
		}
	}
	for j := range z.cols.rank {
		if j == z.borderCol {
			z.cols.rank[j] = len(z.cols.rank)
		}
	}
}

func (s *frontierSide) init(n int) {
	s.left, s.rank, s.bit = make([]int, n), make([]int, n), make([]int, n)
	for i := range s.bit {
		s.bit[i] = -1
	}
}

// complete counts down and notes the order of completion.
func (s *frontierSide) complete(left []int, i int, border bool) {
	if left[i]--; left[i] == 0 && !border {
		s.rank[i] = len(s.order)
		s.order = append(s.order, i)
	}
}

// enter gives row or column i a frontier bit and reports success.
func (s *frontierSide) enter(i int) bool {
	if s.bit[i] >= 0 {
		return true
	}
	b := bits.TrailingZeros64(^s.used)
	if b >= frontierMaxWidth {
		return false
	}
	s.bit[i], s.at[b] = b, i
	s.used |= 1 << b
	return true
}

// below returns the mask of frontier bits of rows or columns that complete
// before i.
func (s *frontierSide) below(i int) uint64 {
	var m uint64
	for u := s.used; u != 0; u &= u - 1 {
		b := bits.TrailingZeros64(u)
		if s.rank[s.at[b]] < s.rank[i] {
			m |= 1 << b
		}
	}
	return m
}

const colShift = 32

// stamp simulates one entry; false means that the frontier is too wide.
func (z *frontierPlanner) stamp(row int, e *intEntry) bool {
	if !z.rows.enter(row) || !z.cols.enter(e.col) {
		return false
	}
	r, c := uint64(1)<<z.rows.bit[row], uint64(1)<<(z.cols.bit[e.col]+colShift)
	below := z.rows.below(row) | z.cols.below(e.col)<<colShift
	odd := (z.rows.done + z.cols.done) & 1
	op := frontierStamp{g: e.g, c: e.c}
	size := log2Sum(e.g, e.c)
	step := 0
	if e.c != nil {
		step = 1
	}
	z.rows.left[row]--
	z.cols.left[e.col]--
	rowDone, colDone := z.rows.left[row] == 0, z.cols.left[e.col] == 0
	old, firstMove := len(z.states), len(z.moves)
	for k := range old {
		s := z.states[k]
		if s.mask&(r|c) != 0 {
			continue
		}
		mask := s.mask | r | c
		if z.hopeless(mask, row, rowDone, e.col, colDone) {
			continue
		}
		move := frontierMove{src: s.slot, sub: (bits.OnesCount64(s.mask&below)+odd)&1 == 1}
		grown := frontierState{mask: mask, bits: s.bits + size, degree: s.degree + step}
		at := slices.IndexFunc(z.states[:old], func(t frontierState) bool { return t.mask == mask })
		if at < 0 {
			grown.slot = z.newSlot()
			move.zero = true
			z.states = append(z.states, grown)
		} else {
			t := &z.states[at]
			t.bits = logAdd(t.bits, grown.bits)
			t.degree = max(t.degree, grown.degree)
			grown.slot = t.slot
		}
		move.dst = grown.slot
		z.moves = append(z.moves, move)
	}
	op.moves = z.moves[firstMove:len(z.moves):len(z.moves)]
	z.close(row, rowDone, e.col, colDone, &op)
	if len(z.states) > frontierMaxStates {
		return false
	}
	z.plan.stamps = append(z.plan.stamps, op)
	return true
}

// logAdd returns log2(2^a + 2^b), rounded up.
func logAdd(a, b float64) float64 {
	if a < b {
		a, b = b, a
	}
	return a + math.Log1p(math.Exp2(b-a))*math.Log2E + 1e-9
}

// hopeless reports that a state can contribute to no result any more.
func (z *frontierPlanner) hopeless(mask uint64, row int, rowDone bool, col int, colDone bool) bool {
	if rowDone && row != z.borderRow && mask&(1<<z.rows.bit[row]) == 0 ||
		colDone && col != z.borderCol && mask&(1<<(z.cols.bit[col]+colShift)) == 0 {
		return true
	}
	if z.borderRow < 0 {
		return false
	}
	hasRow := z.rows.bit[z.borderRow] >= 0 && mask&(1<<z.rows.bit[z.borderRow]) != 0
	hasCol := z.cols.bit[z.borderCol] >= 0 && mask&(1<<(z.cols.bit[z.borderCol]+colShift)) != 0
	rowLeft, colLeft := z.rows.left[z.borderRow] > 0, z.cols.left[z.borderCol] > 0
	canRow, canCol := hasRow || rowLeft, hasCol || colLeft
	switch {
	case hasRow && !canCol, hasCol && !canRow:
		return true
	case !hasRow && !hasCol && !(canRow && canCol):
		return !z.det
	}
	return false
}

// close drops the states that cannot contribute any more, takes a finished
// row and column off the frontier and records what is alive.
func (z *frontierPlanner) close(row int, rowDone bool, col int, colDone bool, op *frontierStamp) {
	z.states = slices.DeleteFunc(z.states, func(s frontierState) bool {
		if !z.hopeless(s.mask, row, rowDone, col, colDone) {
			return false
		}
		z.free = append(z.free, s.slot)
		return true
	})
	var clear uint64
	if rowDone && row != z.borderRow {
		clear |= 1 << z.rows.bit[row]
		z.rows.leave(row)
	}
	if colDone && col != z.borderCol {
		clear |= 1 << (z.cols.bit[col] + colShift)
		z.cols.leave(col)
	}
	first := len(z.live)
	for k := range z.states {
		s := &z.states[k]
		s.mask &^= clear
		z.live = append(z.live, s.slot)
		op.bits = max(op.bits, s.bits)
		op.terms = max(op.terms, s.degree+1)
	}
	op.live = z.live[first:len(z.live):len(z.live)]
	z.charge(op)
}

func (s *frontierSide) leave(i int) {
	s.used &^= 1 << s.bit[i]
	s.bit[i] = -1
	s.done++
}

func (z *frontierPlanner) newSlot() int32 {
	if n := len(z.free); n > 0 {
		s := z.free[n-1]
		z.free = z.free[:n-1]
		return s
	}
	z.plan.slots++
	return int32(z.plan.slots - 1)
}

// charge adds the estimated time of a stamp to the cost.
func (z *frontierPlanner) charge(op *frontierStamp) {
	const perMove, perWord = 150.0, 0.6
	words := float64(op.terms) * (op.bits/64 + 1)
	passes := 1.0
	for _, x := range []*big.Int{op.g, op.c} {
		if x != nil {
			passes += 1 + float64(x.BitLen()/64)
		}
	}
	z.plan.cost += float64(len(op.moves)) * (perMove + perWord*passes*words)
}

// finish finds the results among the last states.
func (z *frontierPlanner) finish() {
	odd := oddPermutation(z.rows.order) != oddPermutation(z.cols.order)
	for _, s := range z.states {
		if s.mask == 0 {
			z.plan.det, z.plan.detOdd = int(s.slot), odd
		} else {
			z.plan.num, z.plan.numOdd = int(s.slot), odd
		}
	}
}
