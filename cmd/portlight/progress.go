package main

import (
	"fmt"
	"io"
	"sync"
	"time"
)

// quiet is how long a command works in silence.
const quiet = time.Second

// progress tells on standard error what a command is at, once it has worked
// for more than a second, and at most once a second.
type progress struct {
	mu      sync.Mutex
	to      io.Writer
	doing   string
	told    string
	stopped chan struct{}
	done    sync.WaitGroup
}

func startProgress(to io.Writer) *progress {
	p := &progress{to: to, stopped: make(chan struct{})}
	p.done.Add(1)
	go p.run()
	return p
}

func (p *progress) run() {
	defer p.done.Done()
	tick := time.NewTicker(quiet)
	defer tick.Stop()
	for {
		select {
		case <-p.stopped:
			return
		case <-tick.C:
			p.mu.Lock()
			if p.doing != "" && p.doing != p.told {
				fmt.Fprintln(p.to, "… "+p.doing)
				p.told = p.doing
			}
			p.mu.Unlock()
		}
	}
}

// at says what the command is at now.
func (p *progress) at(format string, args ...any) {
	p.mu.Lock()
	p.doing = fmt.Sprintf(format, args...)
	p.mu.Unlock()
}

// stop ends the telling; nothing is written after it returns.
func (p *progress) stop() {
	close(p.stopped)
	p.done.Wait()
}
