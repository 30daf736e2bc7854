package float

import (
	"context"
	"math"
)

// minimumDegree orders the elimination of a symmetric pattern so that little
// fills in: approximate minimum degree on a quotient graph, with element
// absorption, mass elimination and supervariables (P. R. Amestoy, T. A. Davis,
// I. S. Duff, An approximate minimum degree ordering algorithm, SIAM J. Matrix
// Anal. Appl. 17 (1996)). start and index are the compressed rows of the whole
// pattern, both triangles; entries on the diagonal are ignored. weight says for
// how many unknowns each vertex stands; nil means one each. The result lists
// the vertices in the order of elimination. The error is the context's.
func minimumDegree(ctx context.Context, start, index, weight []int32) ([]int32, error) {
	q := newQuotient(start, index, weight)
	for k := 0; q.eliminated < q.total; k++ {
		if k&255 == 0 && ctx.Err() != nil {
			return nil, ctx.Err()
		}
		q.eliminate(q.least())
	}
	return q.order(), nil
}

// quotient is the quotient graph of an elimination. A vertex is a variable
// (weight > 0), an element, which is what is left of an eliminated variable, or
// gone: absorbed by into[v].
type quotient struct {
	total, eliminated int32 // unknowns

	// lists[from[v] : from[v]+length[v]] is what v is adjacent to: of a
	// variable first elements[v] elements, then variables; of an element its
	// variables.
	lists        []int32
	from, length []int32
	elements     []int32
	weight       []int32 // unknowns that a variable stands for
	into         []int32 // −1 while not absorbed
	degree       []int32 // of a variable an upper bound of its external degree, of an element the weight of its list
	isElement    []bool
	inPivot      []bool // in the list of the element that is being made
	pivots       []int32
	dense        []int32 // taken last

	head, tail, after, before []int32 // lists of variables by degree
	lowest                    int32   // no variable has a smaller degree

	mark  []int32 // of elements: stamp + |Le \ Lp|
	stamp int32

	bucket, inBucket []int32  // variables by the hash of their lists
	hash             []uint32 // of the variables of the pivot
	seen             []int32
	tag              int32
	keep, others     []int32 // scratch
}

func newQuotient(start, index, weight []int32) *quotient {
	n := len(start) - 1
	ints := make([]int32, 13*n)
	take := func() []int32 {
		s := ints[:n:n]
		ints = ints[n:]
		return s
	}
	q := &quotient{
		lists: make([]int32, 0, len(index)+len(index)/4+2*n),
		from:  take(), length: take(), elements: take(), weight: take(), into: take(), degree: take(),
		after: take(), before: take(), mark: take(), bucket: take(), inBucket: take(), seen: take(),
		pivots: take()[:0], hash: make([]uint32, n), stamp: 1,
		isElement: make([]bool, n), inPivot: make([]bool, n),
	}
	for v := range n {
		q.into[v], q.bucket[v], q.weight[v] = -1, -1, 1
		if weight != nil {
			q.weight[v] = weight[v]
		}
		q.total += q.weight[v]
	}
	q.head = make([]int32, q.total+1)
	q.tail = make([]int32, q.total+1)
	for d := range q.head {
		q.head[d], q.tail[d] = -1, -1
	}
	q.setAside(start)
	for v := range int32(n) {
		q.from[v] = int32(len(q.lists))
		if q.weight[v] == 0 {
			continue
		}
		for _, w := range index[start[v]:start[v+1]] {
			if w != v && q.weight[w] > 0 {
				q.lists = append(q.lists, w)
				q.degree[v] += q.weight[w]
			}
		}
		q.length[v] = int32(len(q.lists)) - q.from[v]
		q.insert(v)
	}
	return q
}

// setAside takes out vertices joined to very many others, to be eliminated
// last: they make every degree alike (section 5 of the paper).
func (q *quotient) setAside(start []int32) {
	limit := max(16, int32(10*math.Sqrt(float64(len(q.weight)))))
	for v := range q.weight {
		if start[v+1]-start[v] > limit {
			q.dense = append(q.dense, int32(v))
			q.eliminated += q.weight[v]
			q.weight[v] = 0
		}
	}
}

// insert files variable v by its degree.
func (q *quotient) insert(v int32) {
	d := q.degree[v]
	t := q.tail[d]
	q.after[v], q.before[v] = -1, t
	if t >= 0 {
		q.after[t] = v
	} else {
		q.head[d] = v
	}
	q.tail[d] = v
	q.lowest = min(q.lowest, d)
}

// remove takes variable v out of the lists by degree.
func (q *quotient) remove(v int32) {
	a, b := q.after[v], q.before[v]
	if a >= 0 {
		q.before[a] = b
	} else {
		q.tail[q.degree[v]] = b
	}
	if b >= 0 {
		q.after[b] = a
	} else {
		q.head[q.degree[v]] = a
	}
}

// least takes out a variable of least degree.
func (q *quotient) least() int32 {
	for q.head[q.lowest] < 0 {
		q.lowest++
	}
	v := q.head[q.lowest]
	q.remove(v)
	return v
}

// of returns the list of v.
func (q *quotient) of(v int32) []int32 { return q.lists[q.from[v]:][:q.length[v]] }

// eliminate makes variable p an element and brings what is around it up to
// date.
func (q *quotient) eliminate(p int32) {
	q.pivots = append(q.pivots, p)
	q.eliminated += q.weight[p]
	q.weight[p] = 0
	q.form(p)
	q.measure(p)
	q.update(p)
	q.merge(p)
	q.finish(p)
}

// form makes the list of element p: the variables joined to p directly or
// through elements, which p absorbs.
func (q *quotient) form(p int32) {
	need := int(q.length[p])
	for _, e := range q.of(p)[:q.elements[p]] {
		need += int(q.length[e])
	}
	q.reserve(need)
	begin, weight := int32(len(q.lists)), int32(0)
	join := func(list []int32) {
		for _, i := range list {
			if q.weight[i] > 0 && !q.inPivot[i] {
				q.inPivot[i] = true
				weight += q.weight[i]
				q.lists = append(q.lists, i)
				q.remove(i)
			}
		}
	}
	adjacent := q.of(p)
	for _, e := range adjacent[:q.elements[p]] {
		join(q.of(e))
		q.absorb(e, p)
	}
	join(adjacent[q.elements[p]:])
	q.isElement[p] = true
	q.from[p], q.length[p], q.elements[p] = begin, int32(len(q.lists))-begin, 0
	q.degree[p] = weight
}

// absorb lets vertex v be gone.
func (q *quotient) absorb(v, into int32) {
	q.into[v], q.length[v], q.isElement[v] = into, 0, false
}

// reserve makes room for more entries; lists no longer in use are dropped.
func (q *quotient) reserve(more int) {
	if len(q.lists)+more <= cap(q.lists) {
		return
	}
	live := 0
	for _, l := range q.length {
		live += int(l)
	}
	lists := make([]int32, 0, 2*(live+more)+len(q.from))
	for v := range q.from {
		list := q.of(int32(v))
		q.from[v] = int32(len(lists))
		lists = append(lists, list...)
	}
	q.lists = lists
}

// measure finds |Le \ Lp| for every element e next to a variable of p, as
// mark[e] − stamp.
func (q *quotient) measure(p int32) {
	if q.stamp > math.MaxInt32-2*q.total-2 {
		clear(q.mark)
		q.stamp = 1
	}
	for _, i := range q.of(p) {
		w := q.weight[i]
		for _, e := range q.of(i)[:q.elements[i]] {
			switch {
			case !q.isElement[e]:
			case q.mark[e] >= q.stamp:
				q.mark[e] -= w
			default:
				q.mark[e] = q.degree[e] - w + q.stamp
			}
		}
	}
}

// update rewrites the lists of the variables of p. Variables that are joined
// to nothing but p are eliminated with it.
func (q *quotient) update(p int32) {
	for _, i := range q.of(p) {
		list := q.of(i)
		outside, hash := int32(0), uint32(0)
		q.keep, q.others = append(q.keep[:0], p), q.others[:0]
		for _, e := range list[:q.elements[i]] {
			if !q.isElement[e] {
				continue
			}
			if d := q.mark[e] - q.stamp; d > 0 {
				outside += d
				hash += uint32(e)
				q.keep = append(q.keep, e)
			} else {
				q.absorb(e, p) // all it joins, p joins
			}
		}
		for _, j := range list[q.elements[i]:] {
			if w := q.weight[j]; w > 0 && !q.inPivot[j] {
				outside += w
				hash += uint32(j)
				q.others = append(q.others, j)
			}
		}
		if len(q.keep) == 1 && len(q.others) == 0 {
			q.eliminated += q.weight[i]
			q.degree[p] -= q.weight[i]
			q.weight[i], q.inPivot[i] = 0, false
			q.absorb(i, p)
			continue
		}
		// An entry for p is free: p itself or an element it absorbed was here.
		q.elements[i] = int32(copy(list, q.keep))
		q.length[i] = q.elements[i] + int32(copy(list[q.elements[i]:], q.others))
		q.degree[i] = min(q.degree[i], outside)
		q.hash[i] = hash
		b := hash % uint32(len(q.bucket))
		q.inBucket[i] = q.bucket[b]
		q.bucket[b] = i
	}
	q.stamp += q.total + 1
}

// merge makes variables of p with equal lists one.
func (q *quotient) merge(p int32) {
	for _, v := range q.of(p) {
		if q.weight[v] == 0 {
			continue
		}
		b := q.hash[v] % uint32(len(q.bucket))
		i := q.bucket[b]
		q.bucket[b] = -1
		for ; i >= 0; i = q.inBucket[i] {
			q.mergeInto(i)
		}
	}
}

// mergeInto merges what follows in the bucket into variable i where it is
// equal.
func (q *quotient) mergeInto(i int32) {
	last, j := i, q.inBucket[i]
	if j < 0 {
		return
	}
	q.tag++
	for _, x := range q.of(i) {
		q.seen[x] = q.tag
	}
	for ; j >= 0; j = q.inBucket[j] {
		if !q.equal(i, j) {
			last = j
			continue
		}
		q.weight[i] += q.weight[j]
		q.weight[j], q.inPivot[j] = 0, false
		q.absorb(j, i)
		q.inBucket[last] = q.inBucket[j]
	}
}

// equal tells whether variable j has the list of i, which has been seen.
func (q *quotient) equal(i, j int32) bool {
	if q.hash[i] != q.hash[j] || q.length[i] != q.length[j] || q.elements[i] != q.elements[j] {
		return false
	}
	for _, x := range q.of(j) {
		if q.seen[x] != q.tag {
			return false
		}
	}
	return true
}

// finish files the variables of p by their new degrees.
func (q *quotient) finish(p int32) {
	list := q.of(p)
	k := 0
	for _, i := range list {
		if q.weight[i] == 0 {
			continue
		}
		q.inPivot[i] = false
		list[k] = i
		k++
		others := q.degree[p] - q.weight[i]
		q.degree[i] = min(q.degree[i]+others, q.total-q.eliminated-q.weight[i])
		q.insert(i)
	}
	q.length[p] = int32(k)
	if k == 0 {
		q.isElement[p] = false
	}
}

// order lists all vertices: every pivot is followed by what it or its
// supervariable took in.
func (q *quotient) order() []int32 {
	n := len(q.into)
	place := make([]int32, n) // position of a pivot, plus one
	for k, p := range q.pivots {
		place[p] = int32(k) + 1
	}
	for _, v := range q.dense {
		place[v] = math.MaxInt32
	}
	members := make([][]int32, len(q.pivots))
	for v := range int32(n) {
		if place[v] != 0 {
			continue
		}
		root := q.into[v]
		for place[root] == 0 {
			root = q.into[root]
		}
		k := place[root] - 1
		members[k] = append(members[k], v)
	}
	out := make([]int32, 0, n)
	for k, p := range q.pivots {
		out = append(out, p)
		out = append(out, members[k]...)
	}
	return append(out, q.dense...)
}
