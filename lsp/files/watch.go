package files

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"sync"
	"time"

	"github.com/fsnotify/fsnotify"
)

// Times of the watcher.
const (
	settleQuiet = 25 * time.Millisecond  // a burst is over after this much quiet: an editor's write-and-rename takes less
	settleMost  = 250 * time.Millisecond // and is reported at the latest after this
	pollEvery   = 700 * time.Millisecond // how often folders are looked at that the system does not watch for us
)

// Watcher reports network files that appear, change or vanish, whoever
// changes them. It watches folders, never single files, so that a file
// replaced by renaming another over it stays watched. Folders that the
// system cannot watch, or that are not there yet, are looked at regularly.
type Watcher struct {
	changed func(names []string)
	say     func(string)

	mu     sync.Mutex
	notify *fsnotify.Watcher // nil when the system offers none
	flat   map[string]bool   // folders watched for their own files
	trees  map[string]bool   // folders watched with all below
	polled map[string]state  // folders looked at regularly, and what was seen
	said   bool
	dirty  map[string]bool // changed names, not yet reported

	poke chan struct{}
	stop chan struct{}
	done sync.WaitGroup
	once sync.Once
}

// state is what a folder looked like: its network files.
type state map[string]stamp

type stamp struct {
	size int64
	time int64 // of the last change, ns
}

// Watch starts a watcher that watches nothing yet. changed is called, from
// one goroutine, with the names of the files that changed since the last
// call, in order. say is called at most once, with a sentence for the user
// when folders have to be polled; it may be nil.
func Watch(changed func(names []string), say func(string)) *Watcher {
	w := &Watcher{
		changed: changed, say: say,
		flat: map[string]bool{}, trees: map[string]bool{}, polled: map[string]state{}, dirty: map[string]bool{},
		poke: make(chan struct{}, 1), stop: make(chan struct{}),
	}
	notify, err := fsnotify.NewWatcher()
	if err != nil {
		w.tellOnce(err)
	} else {
		w.notify = notify
		w.done.Add(1)
		go w.listen(notify)
	}
	w.done.Add(2)
	go w.poll()
	go w.settle()
	return w
}

// AddFolder watches the network files of one folder.
func (w *Watcher) AddFolder(dir string) {
	w.mu.Lock()
	defer w.mu.Unlock()
	if !w.flat[dir] {
		w.flat[dir] = true
		w.cover(dir)
	}
}

// AddTree watches the network files of a folder and of those below it, new
// ones too.
func (w *Watcher) AddTree(root string) {
	w.mu.Lock()
	defer w.mu.Unlock()
	if w.trees[root] {
		return
	}
	w.trees[root] = true
	w.cover(root)
	for _, dir := range folders(root) {
		w.cover(dir)
	}
}

// RemoveTree ends what AddTree began, except for folders added singly.
func (w *Watcher) RemoveTree(root string) {
	w.mu.Lock()
	defer w.mu.Unlock()
	delete(w.trees, root)
	var listed []string
	if w.notify != nil {
		listed = w.notify.WatchList()
	}
	for dir := range w.polled {
		listed = append(listed, dir)
	}
	for _, dir := range listed {
		if w.flat[dir] || w.inTree(dir) {
			continue
		}
		delete(w.polled, dir)
		if w.notify != nil {
			_ = w.notify.Remove(dir)
		}
	}
}

// Close ends the watcher; changed is not called any more once it returned.
func (w *Watcher) Close() {
	w.once.Do(func() {
		close(w.stop)
		if w.notify != nil {
			_ = w.notify.Close()
		}
	})
	w.done.Wait()
}

// inTree says that a folder is, or lies in, a watched tree.
func (w *Watcher) inTree(dir string) bool {
	for root := range w.trees {
		if dir == root {
			return true
		}
		rel, err := filepath.Rel(root, dir)
		if err == nil && filepath.IsLocal(rel) {
			return true
		}
	}
	return false
}

// cover makes sure that a folder is watched, by the system or by looking.
// The caller holds the lock.
func (w *Watcher) cover(dir string) {
	if _, ok := w.polled[dir]; ok {
		return
	}
	if w.notify != nil {
		err := w.notify.Add(dir)
		if err == nil {
			return
		}
		if !os.IsNotExist(err) {
			w.tellOnce(err)
		}
	}
	w.polled[dir] = look(dir)
}

// tellOnce says that folders are polled, the first time.
func (w *Watcher) tellOnce(err error) {
	if w.said || w.say == nil {
		return
	}
	w.said = true
	w.say(fmt.Sprintf("The system cannot watch all folders (%v); they are looked at every %v instead.", err, pollEvery))
}

// listen takes in what the system reports.
func (w *Watcher) listen(notify *fsnotify.Watcher) {
	defer w.done.Done()
	for {
		select {
		case <-w.stop:
			return
		case event, ok := <-notify.Events:
			if !ok {
				return
			}
			w.event(event)
		case err, ok := <-notify.Errors:
			if !ok {
				return
			}
			w.overflow(err)
		}
	}
}

// event takes in one change.
func (w *Watcher) event(event fsnotify.Event) {
	if event.Op == fsnotify.Chmod {
		return
	}
	w.mu.Lock()
	defer w.mu.Unlock()
	name := filepath.Clean(event.Name)
	if IsNetwork(name) {
		w.mark(name)
	}
	switch {
	case event.Has(fsnotify.Remove) || event.Has(fsnotify.Rename):
		if w.flat[name] || w.trees[name] { // a watched folder went: look for its return
			_ = w.notify.Remove(name)
			w.polled[name] = state{}
		}
	case event.Has(fsnotify.Create):
		if !leftOut(filepath.Base(name)) && w.inTree(name) {
			w.adopt(name)
		}
	}
}

// adopt watches a folder that appeared in a tree; the files already in it
// count as changed. The caller holds the lock.
func (w *Watcher) adopt(dir string) {
	if info, err := os.Lstat(dir); err != nil || !info.IsDir() {
		return
	}
	for _, dir := range folders(dir) {
		w.cover(dir)
		for name := range look(dir) {
			w.mark(name)
		}
	}
}

// overflow answers a report of lost events by taking every file as changed.
func (w *Watcher) overflow(error) {
	w.mu.Lock()
	defer w.mu.Unlock()
	for _, dir := range w.notify.WatchList() {
		for name := range look(dir) {
			w.mark(name)
		}
	}
}

// mark notes a change. The caller holds the lock.
func (w *Watcher) mark(name string) {
	w.dirty[name] = true
	select {
	case w.poke <- struct{}{}:
	default:
	}
}

// settle reports changes once a burst is over.
func (w *Watcher) settle() {
	defer w.done.Done()
	for {
		select {
		case <-w.stop:
			return
		case <-w.poke:
		}
		latest := time.After(settleMost)
	burst:
		for {
			select {
			case <-w.stop:
				return
			case <-w.poke:
			case <-time.After(settleQuiet):
				break burst
			case <-latest:
				break burst
			}
		}
		if names := w.take(); len(names) > 0 {
			w.changed(names)
		}
	}
}

// take empties the set of changed names.
func (w *Watcher) take() []string {
	w.mu.Lock()
	defer w.mu.Unlock()
	names := make([]string, 0, len(w.dirty))
	for name := range w.dirty {
		names = append(names, name)
	}
	clear(w.dirty)
	slices.Sort(names)
	return names
}
