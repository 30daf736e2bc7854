package network

import "slices"

// branch is one two-terminal path for a current: a two-terminal element, a
// winding of a transformer, or an op amp's output, which returns to the
// reference.
type branch struct {
	element, winding int
	from, to         int
}

// frame is a network prepared for structural questions: elements that refer
// to what is not there are taken out, branches listed, islands found.
type frame struct {
	*Network
	bad      []Problem // BadReference
	branches []branch
	kinds    []Kind // of each branch's element

	island []int // of each node
	roots  []int // reference node of each island, -1 for a lone unwired node
	// connections counts what is wired to each node; wired is connections > 0
	// or something senses the node.
	connections []int
	senses      []int
	wired       [][]int // elements at each node, made on demand
}

// newFrame checks references and finds branches and islands.
func newFrame(n *Network) *frame {
	f := &frame{}
	f.Network, f.bad = n.checked()
	f.connections = make([]int, n.Nodes)
	f.senses = make([]int, n.Nodes)
	f.branches = make([]branch, 0, len(n.Elements))
	for i := range f.Elements {
		e := &f.Elements[i]
		e.terminals(func(v int) { f.connections[v]++ })
		e.probes(func(p Probe) {
			if p.Quantity == NodePair {
				f.senses[p.Plus]++
				f.senses[p.Minus]++
			}
		})
		switch {
		case e.Kind.twoTerminal():
			f.add(branch{i, 0, e.From, e.To})
		case e.Kind == OpAmp && f.Ground >= 0:
			f.add(branch{i, 0, e.Output, f.Ground})
		case e.Kind == Transformer:
			for w := range e.Windings {
				f.add(branch{i, w, e.Windings[w].Plus, e.Windings[w].Minus})
			}
		}
	}
	f.findIslands()
	return f
}

func (f *frame) add(b branch) {
	f.branches = append(f.branches, b)
	f.kinds = append(f.kinds, f.Elements[b.element].Kind)
}

// findIslands numbers the connected parts; the ground's is number 0 where
// there is one.
func (f *frame) findIslands() {
	sets := newSets(f.Nodes)
	for _, b := range f.branches {
		sets.join(b.from, b.to)
	}
	f.island = make([]int, f.Nodes)
	number := make([]int, f.Nodes)
	for i := range number {
		number[i] = -1
	}
	if f.Ground >= 0 {
		number[sets.find(f.Ground)] = 0
		f.roots = append(f.roots, f.Ground)
	}
	for v := range f.Nodes {
		r := sets.find(v)
		if number[r] < 0 {
			number[r] = len(f.roots)
			f.roots = append(f.roots, v)
		}
		f.island[v] = number[r]
	}
}

// sets is a partition of 0 … n−1 into disjoint sets (union–find with path
// halving and union by size).
type sets struct {
	parent []int32
	size   []int32
}

func newSets(n int) *sets {
	s := &sets{make([]int32, n), make([]int32, n)}
	for i := range s.parent {
		s.parent[i], s.size[i] = int32(i), 1
	}
	return s
}

func (s *sets) find(v int) int {
	x := int32(v)
	for s.parent[x] != x {
		s.parent[x] = s.parent[s.parent[x]]
		x = s.parent[x]
	}
	return int(x)
}

// join unites the sets of a and b and tells whether they were apart.
func (s *sets) join(a, b int) bool {
	x, y := int32(s.find(a)), int32(s.find(b))
	if x == y {
		return false
	}
	if s.size[x] < s.size[y] {
		x, y = y, x
	}
	s.parent[y] = x
	s.size[x] += s.size[y]
	return true
}

// edge is an edge of a graph used in a structural question; id is a branch.
type edge struct{ from, to, id int }

// incidence lists for each vertex the edges that end there (compressed rows).
type incidence struct {
	start []int32
	edges []int32
}

func newIncidence(vertices int, edges []edge) incidence {
	in := incidence{make([]int32, vertices+1), make([]int32, 2*len(edges))}
	for _, e := range edges {
		in.start[e.from+1]++
		in.start[e.to+1]++
	}
	for v := range vertices {
		in.start[v+1] += in.start[v]
	}
	fill := append([]int32(nil), in.start[:vertices]...)
	for i, e := range edges {
		in.edges[fill[e.from]] = int32(i)
		fill[e.from]++
		in.edges[fill[e.to]] = int32(i)
		fill[e.to]++
	}
	return in
}

// at returns the indices of the edges at v; a self-loop is there twice.
func (in incidence) at(v int) []int32 { return in.edges[in.start[v]:in.start[v+1]] }

// forest is a spanning forest that prefers early edges, with a rooted tree
// per component.
type forest struct {
	edges  []edge
	chords []int // indices of edges that close a loop, self-loops left out
	up     []int32
	depth  []int32
}

// newForest builds the spanning forest of the graph; roots come first from
// the given vertex (if not negative), then in ascending order.
func newForest(vertices, root int, edges []edge) *forest {
	f := &forest{edges: edges, up: make([]int32, vertices), depth: make([]int32, vertices)}
	s := newSets(vertices)
	tree := make([]edge, 0, min(vertices, len(edges)))
	for i, e := range edges {
		switch {
		case e.from == e.to:
		case s.join(e.from, e.to):
			tree = append(tree, edge{e.from, e.to, i})
		default:
			f.chords = append(f.chords, i)
		}
	}
	in := newIncidence(vertices, tree)
	for v := range f.up {
		f.up[v] = -2
	}
	var queue []int
	grow := func(r int) {
		if f.up[r] != -2 {
			return
		}
		f.up[r] = -1
		queue = append(queue[:0], r)
		for len(queue) > 0 {
			v := queue[0]
			queue = queue[1:]
			for _, t := range in.at(v) {
				w := tree[t].from + tree[t].to - v
				if f.up[w] == -2 {
					f.up[w] = int32(tree[t].id)
					f.depth[w] = f.depth[v] + 1
					queue = append(queue, w)
				}
			}
		}
	}
	if root >= 0 {
		grow(root)
	}
	for v := range vertices {
		grow(v)
	}
	return f
}

// parent returns the vertex above v and the edge that leads there.
func (f *forest) parent(v int) (up, id int) {
	id = int(f.up[v])
	return f.edges[id].from + f.edges[id].to - v, id
}

// loop returns the edges of the loop that a chord closes, the chord first and
// then on from its to end, and for each +1 when the loop runs through it from
// from to to.
func (f *forest) loop(chord int) (ids, signs []int) {
	c := f.edges[chord]
	ids, signs = []int{c.id}, []int{1}
	var backIDs, backSigns []int
	a, b := c.to, c.from // from a up, then down to b
	for a != b {
		if f.depth[a] >= f.depth[b] {
			up, id := f.parent(a)
			ids, signs = append(ids, f.edges[id].id), append(signs, sign(f.edges[id].from == a))
			a = up
		} else {
			up, id := f.parent(b)
			backIDs, backSigns = append(backIDs, f.edges[id].id), append(backSigns, sign(f.edges[id].to == b))
			b = up
		}
	}
	for i := len(backIDs) - 1; i >= 0; i-- {
		ids, signs = append(ids, backIDs[i]), append(signs, backSigns[i])
	}
	return ids, signs
}

func sign(positive bool) int {
	if positive {
		return 1
	}
	return -1
}

// stars returns, for a connected or unconnected multigraph, one minimal cutset
// for each vertex except one per component: the edges of one biconnected block
// at that vertex which lead towards the component's root. They are a basis of
// all cutsets and their total size is linear. Self-loops are left out.
//
// A vertex's edges inside a block are a minimal cutset because a block stays
// connected without the vertex; summed over a block's vertices but one they
// have full rank, and the cutsets of a graph are the sum of its blocks'.
func stars(vertices, root int, edges []edge, report func(vertex int, ids []int)) {
	in := newIncidence(vertices, edges)
	order := make([]int32, vertices) // 0: not yet reached
	low := make([]int32, vertices)
	next := make([]int32, vertices)
	enter := make([]int32, vertices)
	copy(next, in.start[:vertices])
	var count int32
	var stack []int32 // edges of unfinished blocks
	cut := make(map[int][]int)
	var members []int
	block := func(top int, until int32) {
		members = members[:0]
		for {
			e := stack[len(stack)-1]
			stack = stack[:len(stack)-1]
			for _, v := range []int{edges[e].from, edges[e].to} {
				if v == top {
					continue
				}
				if len(cut[v]) == 0 {
					members = append(members, v)
				}
				cut[v] = append(cut[v], edges[e].id)
			}
			if e == until {
				break
			}
		}
		for _, v := range members {
			slices.Sort(cut[v])
			report(v, cut[v])
			delete(cut, v)
		}
	}
	walk := func(r int) {
		if order[r] != 0 {
			return
		}
		count++
		order[r], low[r], enter[r] = count, count, -1
		path := []int{r}
		for len(path) > 0 {
			v := path[len(path)-1]
			if next[v] < in.start[v+1] {
				e := in.edges[next[v]]
				next[v]++
				w := edges[e].from + edges[e].to - v
				switch {
				case w == v || e == enter[v]:
				case order[w] == 0:
					stack = append(stack, e)
					count++
					order[w], low[w], enter[w] = count, count, e
					path = append(path, w)
				case order[w] < order[v]:
					stack = append(stack, e)
					low[v] = min(low[v], order[w])
				}
				continue
			}
			path = path[:len(path)-1]
			if len(path) == 0 {
				break
			}
			u := path[len(path)-1]
			low[u] = min(low[u], low[v])
			if low[v] >= order[u] {
				block(u, enter[v])
			}
		}
	}
	if root >= 0 {
		walk(root)
	}
	for v := range vertices {
		walk(v)
	}
}
