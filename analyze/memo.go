package analyze

import (
	"context"
	"sync"
)

// memo keeps results by key. A computation that ended because its caller gave
// up is not kept, so that the next caller computes afresh.
type memo struct {
	mu   sync.Mutex
	kept map[string]*entry
}

type entry struct {
	done  chan struct{}
	value any
	err   error
}

// recall returns the value kept under key, computing it when nobody has. Other
// callers of the same key wait for it, or for the end of their own context.
func recall[T any](ctx context.Context, m *memo, key string, compute func(context.Context) (T, error)) (T, error) {
	for {
		m.mu.Lock()
		if m.kept == nil {
			m.kept = map[string]*entry{}
		}
		e, found := m.kept[key]
		if !found {
			e = &entry{done: make(chan struct{})}
			m.kept[key] = e
			m.mu.Unlock()
			return fill(ctx, m, key, e, compute)
		}
		m.mu.Unlock()
		select {
		case <-e.done:
			if e.err != nil && ctx.Err() == nil && isCancelled(e.err) {
				continue
			}
			value, _ := e.value.(T)
			return value, e.err
		case <-ctx.Done():
			var none T
			return none, ctx.Err()
		}
	}
}

func fill[T any](ctx context.Context, m *memo, key string, e *entry, compute func(context.Context) (T, error)) (T, error) {
	finished := false
	defer func() {
		// A cancelled or panicking computation leaves no entry behind.
		if !finished || isCancelled(e.err) {
			m.mu.Lock()
			delete(m.kept, key)
			m.mu.Unlock()
			if e.err == nil {
				e.err = context.Canceled
			}
		}
		close(e.done)
	}()
	value, err := compute(ctx)
	e.value, e.err = value, err
	finished = true
	return value, err
}
