package main

import (
	"context"
	"errors"
	"math"
	"syscall"
	"time"

	"portlight/analyze/exact"
	"portlight/analyze/float"
	"portlight/analyze/network"
	"portlight/analyze/response"
	"portlight/dialect/number"
)

// processorTime is what the process has used so far.
func processorTime() time.Duration {
	var u syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &u); err != nil {
		panic(err)
	}
	return time.Duration(u.Utime.Nano() + u.Stime.Nano())
}

// best returns the microseconds that work takes, at the best of batches of about
// 20 ms, as clock.h does for the other side.
func best(work func() error) (float64, error) {
	once := func(count int) (time.Duration, error) {
		start := processorTime()
		for range count {
			if err := work(); err != nil {
				return 0, err
			}
		}
		return processorTime() - start, nil
	}
	least, err := once(1)
	if err != nil {
		return 0, err
	}
	count := 1
	if least < 20*time.Millisecond {
		count = int(20*time.Millisecond/(least+time.Nanosecond)) + 1
		count = min(count, 100000)
	}
	micro := least.Seconds() * 1e6
	for batch, spent := 0, time.Duration(0); batch < 40 && spent < 2*time.Second; batch++ {
		t, err := once(count)
		if err != nil {
			return 0, err
		}
		spent += t
		micro = math.Min(micro, t.Seconds()*1e6/float64(count))
	}
	return micro, nil
}

// ourDeterminant times numerator and denominator of the driving-point response,
// from the pencil on.
func ourDeterminant(t polynomialTask) (float64, exact.Poly, error) {
	ctx := context.Background()
	var d exact.Poly
	micro, err := best(func() error {
		f, err := t.pencil.Prepare(ctx)
		if err != nil {
			return err
		}
		if _, err := f.Numerators(ctx, []exact.Vector{t.rhs}, []exact.Vector{exact.Unit(0)}); err != nil {
			return err
		}
		d, err = f.DeterminantContext(ctx)
		return err
	})
	return micro, d, err
}

// ourRoots times the roots of a polynomial with proved radii below 1e-15 of
// their magnitudes.
func ourRoots(d exact.Poly) (float64, []complex128, error) {
	var roots []exact.Root
	micro, err := best(func() error {
		set, err := exact.Roots(context.Background(), d)
		if err == nil {
			roots, err = set.At(50)
		}
		return err
	})
	var z []complex128
	for _, r := range roots {
		for range r.Multiplicity {
			z = append(z, complex(r.Re.MidFloat64(), r.Im.MidFloat64()))
		}
	}
	return micro, z, err
}

// ourValue times one value with its proved bound and condition number, and each
// of the values of a sweep, with their bounds.
func ourValue(t frequencyTask) (micro, sweep float64, value complex128, radius float64, err error) {
	out, problem := t.system.NodeVoltage(1, 0)
	column, other := t.system.InjectColumn(1, 0)
	if problem != nil || other != nil {
		return 0, 0, 0, 0, errors.New(t.name + ": no driving point")
	}
	outs, columns := []network.Output{out}, []network.Column{column}
	s, err := float.New(t.system)
	if err != nil {
		return 0, 0, 0, 0, err
	}
	frequencies := make([]float64, 40)
	for k := range frequencies {
		frequencies[k] = omega * math.Pow(1.0001, float64(k))
	}
	sweep, err = best(func() error {
		_, err := s.Sweep(context.Background(), frequencies, outs, columns)
		return err
	})
	if err != nil {
		return 0, 0, 0, 0, err
	}
	micro, err = best(func() error {
		r, err := s.At(context.Background(), omega, outs, columns)
		if err == nil {
			value, radius = r.Values[0][0], r.Radius[0][0]
		}
		return err
	})
	return micro, sweep / float64(len(frequencies)), value, radius, err
}

// ourStep times the samples of the step response, its poles being known.
func ourStep() (micro float64, values []float64, bound float64, err error) {
	ctx := context.Background()
	n, last := stepNetwork()
	sys, problems := network.Assemble(n)
	if sys == nil {
		return 0, nil, 0, errors.New(problems[0].String())
	}
	unit := response.Wave{Pieces: []response.WavePiece{{Terms: []response.WaveTerm{{Cosine: number.FromInt(1)}}}}}
	solution, err := response.Solve(ctx, response.Setup{
		Intervals: []response.Interval{{System: sys}},
		Sources:   []response.Source{{Element: 0, Wave: unit}},
	})
	if err != nil {
		return 0, nil, 0, err
	}
	signal, err := solution.Signal(ctx, func(sys *network.System) (network.Output, error) {
		o, problem := sys.NodeVoltage(last, 0)
		if problem != nil {
			return o, errors.New(problem.String())
		}
		return o, nil
	})
	if err != nil {
		return 0, nil, 0, err
	}
	sampler, err := signal.Sampler(ctx)
	if err != nil {
		return 0, nil, 0, err
	}
	micro, err = best(func() error {
		values, bound = sampler.Uniform(0, stepInterval, stepSamples)
		return nil
	})
	return micro, values, bound, err
}
