package files

import (
	"fmt"
	"path/filepath"
	"slices"
	"strings"
	"sync"

	"portlight/dialect"
)

// View is the files as one reader sees them: the open buffers of the moment
// it was made, and each file on disk as it was when the view first read it.
// So one check never sees two states of a file. Safe for concurrent use.
type View struct {
	store   *Store
	buffers map[string]*Buffer

	mu   sync.Mutex
	read map[string]reading
}

type reading struct {
	file *dialect.File
	err  error
}

// Read returns a file parsed.
func (v *View) Read(name string) (*dialect.File, error) {
	v.mu.Lock()
	defer v.mu.Unlock()
	if r, ok := v.read[name]; ok {
		return r.file, r.err
	}
	var r reading
	switch {
	case v.buffers[name] != nil:
		r.file = v.buffers[name].File()
	case !filepath.IsAbs(name):
		r.err = fmt.Errorf("%s cannot be found from a text that is not saved in a folder", name)
	default:
		r.file, r.err = v.store.fromDisk(name)
	}
	if v.read == nil {
		v.read = map[string]reading{}
	}
	v.read[name] = r
	return r.file, r.err
}

// Reader hands files to dialect.Check, which joins the path of a use
// statement to the folder of the file that it stands in. Either slash
// separates folders, on every system.
func (v *View) Reader() dialect.Reader {
	return func(path string) (*dialect.File, error) {
		file, err := v.Read(path)
		if err != nil && strings.Contains(path, `\`) {
			if file, err := v.Read(strings.ReplaceAll(path, `\`, "/")); err == nil {
				return file, nil
			}
		}
		return file, err
	}
}

// Names lists the files that were asked for so far, found or not, in order.
func (v *View) Names() []string {
	v.mu.Lock()
	defer v.mu.Unlock()
	names := make([]string, 0, len(v.read))
	for name := range v.read {
		names = append(names, name)
	}
	slices.Sort(names)
	return names
}

// Buffers lists the names of the open buffers, in order.
func (v *View) Buffers() []string {
	names := make([]string, 0, len(v.buffers))
	for name := range v.buffers {
		names = append(names, name)
	}
	slices.Sort(names)
	return names
}
