package float

import (
	"errors"

	"portlight/analyze/network"
)

// ErrIntervals tells that the intervals of a setup are not in ascending order
// from t = 0 on.
var ErrIntervals = errors.New("intervals must begin at t = 0 and ascend")

// ErrTime tells that a response was asked for before t = 0, or at no time.
var ErrTime = errors.New("responses are known from t = 0 on")

// Interval is a network that holds from Start (s) on, until the next interval
// begins. All networks of a Setup have the same elements by index.
type Interval struct {
	Start  float64
	Solver *Solver
}

// Source is an independent source, by its element index, and what it does.
type Source struct {
	Element int
	Wave    Wave
}

// Initial is the value of a memory at 0−: V for a capacitor, A for an inductor.
// Index is 0 except for inner states of elements that have several.
type Initial struct {
	Element, Index int
	Value          float64
}

// Setup is what happens to a network: the position of its switches interval by
// interval, its sources and the state at 0−. Sources that are not listed are
// zero.
type Setup struct {
	Intervals []Interval
	Sources   []Source
	Initial   []Initial
}

// Value is what an output shows at an instant, in the output's unit: ZeroInput
// is due to the state at 0−, ZeroState to the sources, Total their sum. Each is
// within its radius of the true value, as far as comparing two computations
// with steps of different lengths and differently rounded entries can tell. A
// radius is +Inf right after a jump where double precision cannot tell what
// moved and died out there.
type Value struct {
	Total, ZeroInput, ZeroState                   float64
	TotalRadius, ZeroInputRadius, ZeroStateRadius float64
}

// Response computes how a network answers in time, without its natural
// frequencies: by steps with an A-stable approximant of the exponential of high
// order. It is immutable and safe for concurrent use.
type Response struct {
	setup Setup
}

// NewResponse checks a setup. The error is ErrIntervals, or a *network.Problem's
// for a source or memory that is not there.
func NewResponse(setup Setup) (*Response, error) {
	if len(setup.Intervals) == 0 || setup.Intervals[0].Start != 0 {
		return nil, ErrIntervals
	}
	for k, v := range setup.Intervals {
		if v.Solver == nil || k > 0 && !(setup.Intervals[k-1].Start < v.Start) {
			return nil, ErrIntervals
		}
		for _, s := range setup.Sources {
			if s.Element < 0 || s.Element >= len(v.Solver.system.Network().Elements) {
				return nil, ErrSource
			}
			if _, problem := v.Solver.system.InputColumn(s.Element); problem != nil {
				return nil, ErrSource
			}
		}
	}
	first := setup.Intervals[0].Solver.system
	for _, x := range setup.Initial {
		if first.MemoryIndex(network.Memory{Element: x.Element, Index: x.Index}) < 0 {
			return nil, ErrMemoryValue
		}
	}
	return &Response{setup}, nil
}

// ErrSource tells that an element is not an independent source, ErrMemoryValue
// that an element has no initial value.
var (
	ErrSource      = errors.New("the element is not an independent source")
	ErrMemoryValue = errors.New("the element has no initial value")
)
