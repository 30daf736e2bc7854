package float

// recall returns a solution with the given values of the memories, as far as
// they can all be had at once, and the charges and fluxes by which they differ
// from those of the solution; nil for none. Voltages between nodes are laid out
// along a spanning forest, so that large capacitances between nodes that are
// tied to the rest by small ones falsify nothing.
func (s *Solver) recall(values []float64) (x, jump []float64) {
	x = make([]float64, s.m.n)
	known := make([]bool, s.m.n)
	edges := make([][]int32, s.m.n) // memories that are differences, by unknown
	var queue []int32
	for k, f := range s.memories {
		switch {
		case len(f.index) == 1:
			if i := f.index[0]; !known[i] && f.value[0] != 0 {
				x[i], known[i] = values[k]/f.value[0], true
				queue = append(queue, i)
			}
		case len(f.index) == 2 && f.value[0] == -f.value[1]:
			edges[f.index[0]] = append(edges[f.index[0]], int32(k))
			edges[f.index[1]] = append(edges[f.index[1]], int32(k))
		}
	}
	spread := func() {
		for len(queue) > 0 {
			i := queue[len(queue)-1]
			queue = queue[:len(queue)-1]
			for _, k := range edges[i] {
				f := s.memories[k]
				from, to := 0, 1
				if f.index[0] != i {
					from, to = 1, 0
				}
				j := f.index[to]
				if known[j] {
					continue
				}
				x[j], known[j] = (values[k]-f.value[from]*x[i])/f.value[to], true
				queue = append(queue, j)
			}
		}
	}
	spread()
	for i := range int32(s.m.n) {
		if !known[i] && len(edges[i]) > 0 {
			known[i] = true
			queue = append(queue, i)
			spread()
		}
	}
	for k, f := range s.memories {
		rest := values[k] - f.of(x)
		// What is no more than the rounding of the sums above is none.
		size := 0.0
		for t, i := range f.index {
			size = max(size, norm1(complex(f.value[t]*x[i], 0)))
		}
		if norm1(complex(rest, 0)) <= 64*unit*size {
			continue
		}
		if jump == nil {
			jump = make([]float64, s.m.n)
		}
		s.states[k].add(jump, rest)
	}
	return x, jump
}
