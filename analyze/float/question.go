package float

import (
	"math/big"

	"portlight/analyze/network"
)

// Result is what outputs show at one frequency for right-hand sides.
type Result struct {
	// Values[i][j] is output i driven by column j, as a complex amplitude in
	// the output's unit. The true value is within Radius[i][j] of it.
	Values [][]complex128
	Radius [][]float64
	// Amplification[i][j] bounds how much more the value changes than the
	// entries of the equations, both relative and to first order: the
	// condition number of the value itself (R. D. Skeel, Scaling for numerical
	// stability in Gaussian elimination, J. ACM 26 (1979)).
	Amplification [][]float64
	// Condition estimates the condition number, in the 1-norm, of the matrix
	// with rows and columns scaled; 0 where it was not asked for.
	Condition float64
	// Method is "LU" or "LDLᵀ".
	Method string
}

// newResult makes room for so many outputs and columns.
func newResult(outs, cols int, method string) *Result {
	r := &Result{Method: method, Values: make([][]complex128, outs), Radius: make([][]float64, outs), Amplification: make([][]float64, outs)}
	values, floats := make([]complex128, outs*cols), make([]float64, 2*outs*cols)
	for i := range outs {
		r.Values[i] = values[i*cols : (i+1)*cols : (i+1)*cols]
		r.Radius[i] = floats[2*i*cols : (2*i+1)*cols : (2*i+1)*cols]
		r.Amplification[i] = floats[(2*i+1)*cols : (2*i+2)*cols : (2*i+2)*cols]
	}
	return r
}

// question is what is asked, with values rounded to the doubles that are
// computed with.
type question struct {
	outs, cols []*vector
	direct     [][]double
	// same[i] is the column that output i equals, where the matrix is
	// symmetric, so that its transposed solution is that of the column; or −1.
	same []int
}

func (s *Solver) question(outs []network.Output, cols []network.Column) (*question, error) {
	q := &question{same: make([]int, len(outs))}
	for _, c := range cols {
		v := &vector{}
		for _, x := range c.RHS {
			if err := v.add(x.Index, x.Value, false); err != nil {
				return nil, err
			}
		}
		q.cols = append(q.cols, v)
	}
	for i, o := range outs {
		v, err := outputVector(o)
		if err != nil {
			return nil, err
		}
		q.outs = append(q.outs, v)
		q.direct = append(q.direct, make([]double, len(cols)))
		q.same[i] = -1
		for j, c := range cols {
			var ok bool
			if q.direct[i][j], ok = doubleOf(direct(o, c)); !ok {
				return nil, ErrRange
			}
			if s.symmetric && v.equal(q.cols[j]) {
				q.same[i] = j
			}
		}
	}
	return q, nil
}

func outputVector(o network.Output) (*vector, error) {
	v := &vector{}
	for _, x := range o.G {
		if err := v.add(x.Index, x.Value, false); err != nil {
			return nil, err
		}
	}
	for _, x := range o.C {
		if err := v.add(x.Index, x.Value, true); err != nil {
			return nil, err
		}
	}
	return v, nil
}

// direct is what an output holds of a column without the network's doing.
func direct(o network.Output, c network.Column) *big.Rat {
	sum := new(big.Rat)
	for _, pair := range [][2]map[int]*big.Rat{{o.Input, c.Input}, {o.State, c.State}} {
		for k, v := range pair[0] {
			if w := pair[1][k]; w != nil {
				sum.Add(sum, new(big.Rat).Mul(v, w))
			}
		}
	}
	return sum
}
