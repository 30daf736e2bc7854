package dialect

// slabSize is how many nodes of one sort are allocated together. A file's
// nodes live and die together, so sharing blocks costs nothing and saves most
// of the parser's time.
const slabSize = 64

// slabs holds blocks of the most frequent nodes that are not used up yet.
type slabs struct {
	numbers    []NumberExpr
	units      []UnitExpr
	names      []NameExpr
	binaries   []BinaryExpr
	calls      []CallExpr
	subscripts []SubscriptExpr
	parens     []ParenExpr
	parts      []PartStatement
	paths      []PathStatement
	chains     []Chain
	groups     []Group
	boxes      []NameBox
	options    []PartOption
	tolerances []ToleranceClause
	qualifiers []Qualifier

	factorRoom    []UnitFactor
	exprRoom      []Expr
	wordRoom      []Word
	boundRoom     []ToleranceBound
	chainRoom     []*Chain
	groupRoom     []*Group
	boxRoom       []Box
	optionRoom    []*PartOption
	nameRoom      []*NameExpr
	qualifierRoom []*Qualifier
}

// fresh gives a zero node from a block.
func fresh[T any](block *[]T) *T {
	if len(*block) == 0 {
		*block = make([]T, slabSize)
	}
	x := &(*block)[0]
	*block = (*block)[1:]
	return x
}

// one gives a slice that holds x, from a block. Appending to it moves it.
func one[T any](block *[]T, x T) []T {
	if len(*block) == 0 {
		*block = make([]T, slabSize)
	}
	list := (*block)[:1:1]
	*block = (*block)[1:]
	list[0] = x
	return list
}

// add appends to a slice whose first element lives in a block.
func add[T any](block *[]T, list []T, x T) []T {
	if list == nil {
		return one(block, x)
	}
	return append(list, x)
}
