package exact

import "context"

// solve returns the wanted block determinants and the numerators of a system
// by the method that is estimated to be faster; see solveModular for the
// meaning of the results.
func (y *system) solve(ctx context.Context, wantDet []bool) ([]Poly, []Poly, error) {
	plans, cost := y.frontierPlans(wantDet)
	if plans != nil && (cost < modularSetup || cost < y.leastModularCost()) {
		return y.solveFrontier(ctx, plans, wantDet)
	}
	plan, err := y.order(ctx)
	if err != nil {
		return nil, nil, err
	}
	r := y.newModularRun(plan, wantDet)
	if plans != nil && cost < r.cost() {
		return y.solveFrontier(ctx, plans, wantDet)
	}
	return r.solve(ctx, y, wantDet)
}

// frontierPlans returns a plan for every pair of borders, the first with the
// determinant if that is wanted, and the estimated time in nanoseconds; nil
// if the system is not chain-like or falls into several blocks.
func (y *system) frontierPlans(wantDet []bool) ([]*frontierPlan, float64) {
	if len(y.end) != 1 {
		return nil, 0
	}
	if y.outs*y.rhs == 0 {
		p := y.planFrontier(-1, -1, true)
		if p == nil {
			return nil, 0
		}
		return []*frontierPlan{p}, p.cost
	}
	var plans []*frontierPlan
	cost := 0.0
	for o := range y.outs {
		for j := range y.rhs {
			p := y.planFrontier(o, j, wantDet[0] && plans == nil)
			if p == nil {
				return nil, 0
			}
			plans = append(plans, p)
			cost += p.cost
		}
	}
	return plans, cost
}

// modularSetup is about the time in nanoseconds that ordering and compiling
// take for the smallest systems.
const modularSetup = 2e4

// leastModularCost is a lower estimate, in nanoseconds, of the time the
// modular method takes, from sizes alone.
func (y *system) leastModularCost() float64 {
	const perEntry = 4.0
	entries := 0
	for _, r := range y.rows {
		entries += len(r)
	}
	dets, _ := y.coefficientBounds()
	degrees, _ := y.degreeBounds()
	sum := modularSetup
	for b, bits := range dets {
		sum += perEntry * float64(entries) * float64(degrees[b]+1) * float64(primesFor(bits))
	}
	return sum
}
