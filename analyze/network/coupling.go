package network

import (
	"math/big"

	"portlight/dialect/number"
)

// coilGroup is a set of inductors that couplings join.
type coilGroup struct {
	coils, couplings []int
}

// coilGroups lists the sets of coupled inductors in the order of their first
// couplings.
func (f *frame) coilGroups() []coilGroup {
	var all []int
	for i := range f.Elements {
		if f.Elements[i].Kind == Coupling {
			all = append(all, i)
		}
	}
	if all == nil {
		return nil
	}
	s := newSets(len(f.Elements))
	for _, i := range all {
		s.join(f.Elements[i].Coils[0], f.Elements[i].Coils[1])
	}
	number := map[int]int{}
	var out []coilGroup
	seen := map[int]bool{}
	for _, i := range all {
		r := s.find(f.Elements[i].Coils[0])
		g, ok := number[r]
		if !ok {
			g = len(out)
			number[r] = g
			out = append(out, coilGroup{})
		}
		out[g].couplings = append(out[g].couplings, i)
		for _, c := range f.Elements[i].Coils {
			if !seen[c] {
				seen[c] = true
				out[g].coils = append(out[g].coils, c)
			}
		}
	}
	return out
}

// couplings reports couplings out of range and sets of coils whose stored
// energy could be negative.
func (f *frame) couplings() []Problem {
	var out []Problem
	for _, g := range f.coilGroups() {
		before := len(out)
		for _, i := range g.couplings {
			e := &f.Elements[i]
			limit, square := number.FromInt(1), e.Value.Mul(e.Value)
			if e.Mutual {
				limit = f.coilProduct(e)
			}
			if c, decided := square.Cmp(limit); decided && c > 0 {
				out = append(out, Problem{Kind: CouplingRange, Elements: []int{i, e.Coils[0], e.Coils[1]}})
			}
		}
		if len(out) > before || len(g.couplings) == 1 {
			continue
		}
		m, err := f.couplingMatrix(g)
		if err != nil {
			continue // a coil of a value that badValue reports
		}
		if ok, _ := semidefinite(m); !ok {
			p := Problem{Kind: InductanceMatrix, Elements: append(append([]int(nil), g.couplings...), g.coils...)}
			out = append(out, p)
		}
	}
	return out
}

// couplingMatrix returns a matrix with the definiteness of the group's
// inductance matrix: the inductances themselves where all couplings are given
// in henry, otherwise the coefficients k (the inductances with each coil
// scaled to 1). A coefficient that its bound does not tell from ±1 is ±1.
func (f *frame) couplingMatrix(g coilGroup) ([][]number.Exact, error) {
	henry := true
	place := map[int]int{}
	m := make([][]number.Exact, len(g.coils))
	for k, c := range g.coils {
		place[c] = k
		m[k] = make([]number.Exact, len(g.coils))
	}
	for _, i := range g.couplings {
		henry = henry && f.Elements[i].Mutual
	}
	for k, c := range g.coils {
		m[k][k] = number.FromInt(1)
		if henry {
			m[k][k] = f.Elements[c].Value
		}
	}
	for _, i := range g.couplings {
		e := &f.Elements[i]
		v := e.Value
		if e.Mutual && !henry {
			var err error
			if v, err = f.coefficient(e); err != nil {
				return nil, err
			}
		}
		a, b := place[e.Coils[0]], place[e.Coils[1]]
		m[a][b] = m[a][b].Add(v)
		m[b][a] = m[a][b]
	}
	return m, nil
}

// coefficient returns k of a coupling, whichever way it is given.
func (f *frame) coefficient(e *Element) (number.Exact, error) {
	if !e.Mutual {
		return e.Value, nil
	}
	product := f.coilProduct(e)
	if _, decided := e.Value.Mul(e.Value).Cmp(product); !decided {
		return number.FromInt(int64(e.Value.Rat().Sign())), nil
	}
	root, err := number.Sqrt(product)
	if err != nil {
		return number.Exact{}, err
	}
	return e.Value.Quo(root)
}

// semidefinite tells whether a symmetric matrix, which it overwrites, is
// positive semidefinite, and whether it is singular. It eliminates by
// symmetric pivots with a decided positive sign (LDLᵀ); what is left when
// there is none must be zero. What the bounds do not decide counts as zero.
func semidefinite(m [][]number.Exact) (ok, singular bool) {
	left := make([]int, len(m))
	for i := range left {
		left[i] = i
	}
	for len(left) > 0 {
		pivot := -1
		for k, i := range left {
			s, decided := m[i][i].Sign()
			if decided && s < 0 {
				return false, false
			}
			if decided && s > 0 && pivot < 0 {
				pivot = k
			}
		}
		if pivot < 0 {
			return zero(m, left), true
		}
		p := left[pivot]
		left = append(left[:pivot], left[pivot+1:]...)
		for _, i := range left {
			q, err := m[i][p].Quo(m[p][p])
			if err != nil {
				return false, false
			}
			for _, j := range left {
				m[i][j] = m[i][j].Sub(q.Mul(m[p][j]))
			}
		}
	}
	return true, false
}

// zero tells whether no entry of a principal part without positive diagonal
// is decided to be other than zero.
func zero(m [][]number.Exact, part []int) bool {
	for _, i := range part {
		for _, j := range part {
			if s, decided := m[i][j].Sign(); decided && s != 0 {
				return false
			}
		}
	}
	return true
}

// inductances are the self and mutual inductances as they enter the equations.
type inductances struct {
	self   []*big.Rat // by element
	mutual [][]mutual // by element
}

type mutual struct {
	coil  int
	value *big.Rat
}

// inductances returns all inductances, M = k·√(La·Lb) where k is given.
//
// A set of coils with a singular matrix of coefficients (perfect coupling)
// lowers the order of the network, which a stand-in for an irrational root
// would undo. Then the inductances of the set are taken as L₀·rᵢ·rⱼ·kᵢⱼ with
// rational stand-ins rᵢ for √(Lᵢ/L₀), the self-inductances too, so that the
// matrix stays exactly singular.
func (f *frame) inductances(rat func(number.Exact) *big.Rat) inductances {
	l := inductances{make([]*big.Rat, len(f.Elements)), make([][]mutual, len(f.Elements))}
	for i := range f.Elements {
		if f.Elements[i].Kind == Inductor {
			l.self[i] = rat(f.Elements[i].Value)
		}
	}
	for _, g := range f.coilGroups() {
		if f.plain(g, &l, rat) {
			continue
		}
		f.perfect(g, &l, rat)
	}
	return l
}

// plain enters a group's mutual inductances unless the group needs the
// treatment of perfect.
func (f *frame) plain(g coilGroup, l *inductances, rat func(number.Exact) *big.Rat) bool {
	values := make([]number.Exact, len(g.couplings))
	irrational := false
	for k, i := range g.couplings {
		e := &f.Elements[i]
		values[k] = e.Value
		if !e.Mutual {
			root, err := number.Sqrt(f.coilProduct(e))
			if err != nil {
				root = number.Exact{}
			}
			values[k] = e.Value.Mul(root)
		}
		irrational = irrational || !values[k].IsExact()
	}
	if irrational {
		if m, err := f.couplingMatrix(g); err == nil {
			if ok, singular := semidefinite(m); ok && singular {
				return false
			}
		}
	}
	for k, i := range g.couplings {
		l.couple(f.Elements[i].Coils, rat(values[k]))
	}
	return true
}

// perfect enters a group whose coefficients form a singular matrix.
func (f *frame) perfect(g coilGroup, l *inductances, rat func(number.Exact) *big.Rat) {
	base := f.Elements[g.coils[0]].Value
	ratio := map[int]*big.Rat{}
	for _, c := range g.coils {
		r, err := f.Elements[c].Value.Quo(base)
		if err == nil {
			r, err = number.Sqrt(r)
		}
		if err != nil { // a value that badValue reports
			r = number.FromInt(1)
		}
		ratio[c] = rat(r)
		l.self[c] = new(big.Rat).Mul(rat(base), new(big.Rat).Mul(ratio[c], ratio[c]))
	}
	for _, i := range g.couplings {
		e := &f.Elements[i]
		k, err := f.coefficient(e)
		if err != nil {
			k = number.Exact{}
		}
		m := new(big.Rat).Mul(rat(k), rat(base))
		m.Mul(m, ratio[e.Coils[0]])
		l.couple(e.Coils, m.Mul(m, ratio[e.Coils[1]]))
	}
}

// couple enters a mutual inductance for both coils.
func (l *inductances) couple(coils [2]int, m *big.Rat) {
	a, b := coils[0], coils[1]
	l.mutual[a] = append(l.mutual[a], mutual{b, m})
	l.mutual[b] = append(l.mutual[b], mutual{a, m})
}
