package files

import (
	"maps"
	"os"
	"path/filepath"
	"slices"
	"time"
)

// poll looks regularly at the folders that the system does not watch.
func (w *Watcher) poll() {
	defer w.done.Done()
	tick := time.NewTicker(pollEvery)
	defer tick.Stop()
	for {
		select {
		case <-w.stop:
			return
		case <-tick.C:
		}
		w.mu.Lock()
		dirs := slices.Collect(maps.Keys(w.polled))
		w.mu.Unlock()
		for _, dir := range dirs {
			w.lookAgain(dir)
		}
	}
}

// lookAgain compares a folder with what was seen last, and hands it to the
// system's watcher when that takes it by now.
func (w *Watcher) lookAgain(dir string) {
	now := look(dir)
	w.mu.Lock()
	defer w.mu.Unlock()
	before, ok := w.polled[dir]
	if !ok {
		return
	}
	for name, stamp := range now {
		if old, ok := before[name]; !ok || old != stamp {
			w.mark(name)
		}
	}
	for name := range before {
		if _, ok := now[name]; !ok {
			w.mark(name)
		}
	}
	w.polled[dir] = now
	if w.inTree(dir) {
		w.below(dir)
	}
	if w.notify != nil && w.notify.Add(dir) == nil {
		delete(w.polled, dir)
		// What was written between the look and the watch is not lost: a
		// file newer than the look counts as changed.
		for name, stamp := range look(dir) {
			if now[name] != stamp {
				w.mark(name)
			}
		}
	}
}

// below covers the folders of a polled tree that appeared since. The caller
// holds the lock.
func (w *Watcher) below(dir string) {
	entries, err := os.ReadDir(dir)
	if err != nil {
		return
	}
	var watched []string
	if w.notify != nil {
		watched = w.notify.WatchList()
	}
	for _, entry := range entries {
		path := filepath.Join(dir, entry.Name())
		if _, polled := w.polled[path]; entry.IsDir() && !leftOut(entry.Name()) && !polled && !slices.Contains(watched, path) {
			w.adopt(path)
		}
	}
}

// look lists the network files of a folder.
func look(dir string) state {
	seen := state{}
	entries, err := os.ReadDir(dir)
	if err != nil {
		return seen
	}
	for _, entry := range entries {
		if !IsNetwork(entry.Name()) {
			continue
		}
		path := filepath.Join(dir, entry.Name())
		if info, err := os.Stat(path); err == nil && info.Mode().IsRegular() {
			seen[path] = stamp{info.Size(), info.ModTime().UnixNano()}
		}
	}
	return seen
}
