// Package files gives texts to everything that reads networks: the buffers
// that an editor has open, else the files on disk, each text parsed once.
// The command and the language server read through it, so that both see the
// same files, follow use statements in the same way and notice the same
// changes.
//
// A file goes by its name: an absolute, cleaned path, or for a buffer
// without a file the editor's own URI.
package files

import (
	"errors"
	"fmt"
	"io/fs"
	"maps"
	"os"
	"path/filepath"
	"sync"
	"time"

	"portlight/dialect"
)

// Extension is how the names of network files end.
const Extension = ".plight"

// MaxSize is the size in bytes above which a file is refused: far beyond any
// network written by hand or by a program, small enough never to exhaust memory.
const MaxSize = 256 << 20

// racy is the age below which a file's time stamp does not prove that it is
// unchanged: two writes within one tick of a coarse clock look alike.
const racy = 2 * time.Second

// Store keeps parsed files. It is safe for concurrent use.
type Store struct {
	mu      sync.Mutex
	buffers map[string]*Buffer // copied on write, so that views share it
	disk    map[string]*onDisk
}

// onDisk is what is known of a file on disk.
type onDisk struct {
	file   *dialect.File
	info   os.FileInfo
	readAt time.Time
}

// NewStore returns an empty store.
func NewStore() *Store {
	return &Store{buffers: map[string]*Buffer{}, disk: map[string]*onDisk{}}
}

// Open sets the text of an open buffer, which from then on wins over the
// file on disk.
func (s *Store) Open(name, text string) *Buffer {
	s.mu.Lock()
	defer s.mu.Unlock()
	b := &Buffer{name: name, text: text}
	if old := s.buffers[name]; old != nil && old.text == text {
		b.file = old.parsed()
	} else if d := s.disk[name]; old == nil && d != nil && d.file.Text == text {
		b.file = d.file
	}
	buffers := maps.Clone(s.buffers)
	buffers[name] = b
	s.buffers = buffers
	return b
}

// Close drops an open buffer; the file on disk counts again.
func (s *Store) Close(name string) {
	s.mu.Lock()
	defer s.mu.Unlock()
	buffers := maps.Clone(s.buffers)
	delete(buffers, name)
	s.buffers = buffers
}

// Forget drops files on disk from the memory, because a watcher saw them
// change or because nobody uses them any more.
func (s *Store) Forget(names ...string) {
	s.mu.Lock()
	defer s.mu.Unlock()
	for _, name := range names {
		delete(s.disk, name)
	}
}

// Read returns a file parsed: the open buffer, else the file on disk.
func (s *Store) Read(name string) (*dialect.File, error) { return s.View().Read(name) }

// View fixes the open buffers as they are now.
func (s *Store) View() *View {
	s.mu.Lock()
	defer s.mu.Unlock()
	return &View{store: s, buffers: s.buffers}
}

// fromDisk reads and parses a file on disk, or returns it from memory when
// nothing shows that it changed.
func (s *Store) fromDisk(name string) (*dialect.File, error) {
	info, err := os.Stat(name)
	if err != nil {
		s.Forget(name)
		return nil, plain(name, err)
	}
	if !info.Mode().IsRegular() {
		return nil, fmt.Errorf("%s is not a file of text", name)
	}
	if info.Size() > MaxSize {
		return nil, fmt.Errorf("%s has %d MiB, more than the %d MiB that are read", name, info.Size()>>20, MaxSize>>20)
	}
	s.mu.Lock()
	known := s.disk[name]
	s.mu.Unlock()
	if known != nil && same(known.info, info) && known.readAt.Sub(info.ModTime()) > racy {
		return known.file, nil
	}
	readAt := time.Now()
	text, err := os.ReadFile(name)
	if err != nil {
		return nil, plain(name, err)
	}
	next := &onDisk{info: info, readAt: readAt}
	if known != nil && known.file.Text == string(text) {
		next.file = known.file
	} else {
		next.file = dialect.Parse(name, string(text))
	}
	s.mu.Lock()
	defer s.mu.Unlock()
	s.disk[name] = next
	return next.file, nil
}

// same says that two looks at a name saw the same file, unwritten in between.
func same(a, b os.FileInfo) bool {
	return a.Size() == b.Size() && a.ModTime().Equal(b.ModTime()) && os.SameFile(a, b)
}

// plain words an error of the file system without the system call's name.
func plain(name string, err error) error {
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return fmt.Errorf("%s: %w", name, errMissing)
	case errors.Is(err, fs.ErrPermission):
		return fmt.Errorf("%s: %w", name, errForbidden)
	}
	var path *fs.PathError
	if errors.As(err, &path) {
		return fmt.Errorf("%s: %w", name, path.Err)
	}
	return err
}

// wording is an error with words of our own that still is one of fs's.
type wording struct {
	text string
	is   error
}

func (w wording) Error() string        { return w.text }
func (w wording) Is(target error) bool { return target == w.is }

var (
	errMissing   = wording{"there is no such file", fs.ErrNotExist}
	errForbidden = wording{"no permission to read it", fs.ErrPermission}
)

// IsNetwork says whether a name is that of a network file.
func IsNetwork(name string) bool { return filepath.Ext(name) == Extension }
