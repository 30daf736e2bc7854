package symbolic

import (
	"context"
	"math/big"
)

// Space holds the symbols that functions are written in and the budget for
// one formula. Functions can only be combined within their space. It serves
// one goroutine.
type Space struct {
	work
	symbols []symbol // by place; the first is s
	places  map[int]int
}

// symbol is what a place of monomials stands for.
type symbol struct {
	name  string // "" when there is no name for it
	value *big.Rat
	order int // in the text
	// coupled is set for the mutual inductance of a coupling that is given by
	// its coefficient.
	coupled *coefficient
}

// coefficient is a coupling given by its coefficient k between two coils.
type coefficient struct {
	value *big.Rat
	coils [2]int // elements
	names [2]string
	// self are the inductances as they stand in the equations.
	self [2]*big.Rat
}

// NewSpace makes a space with a fresh budget that ends with the context.
func NewSpace(ctx context.Context) *Space {
	return &Space{
		work:    work{ctx: ctx, left: budget},
		symbols: []symbol{{name: "s", order: -1}},
		places:  map[int]int{},
	}
}

// sPlace is the place of the variable s.
const sPlace = 0

// place gives the symbol of a key, made on first use. A key that comes with
// another value is another symbol by the same name, for which there is no
// formula.
func (sp *Space) place(key int, s symbol) int {
	if at, known := sp.places[key]; known {
		if old := sp.symbols[at].value; s.value != nil && (old == nil || old.Cmp(s.value) != 0) {
			sp.failed = true
		}
		return at
	}
	if len(sp.symbols) == places {
		sp.failed = true
		return sPlace
	}
	sp.places[key] = len(sp.symbols)
	sp.symbols = append(sp.symbols, s)
	return len(sp.symbols) - 1
}

// Elements are keyed by three times their index, so that a coupling has keys
// for its coefficient and for the root of the product of its inductances too.
// The keys are also the order of the symbols in formulas.

func elementKey(element int) int     { return 3 * element }
func coefficientKey(element int) int { return 3*element + 1 }
func rootKey(element int) int        { return 3*element + 2 }
