package lsp

import (
	"fmt"
	"maps"
	"slices"
	"sync"

	"go.lsp.dev/jsonrpc2"
	"go.lsp.dev/uri"
)

// snapshot is the state of all documents at one moment. It is never changed:
// the session's writer makes the next one. What is computed about a document
// is kept in its unit, which lives through many snapshots.
type snapshot struct {
	session  *session
	units    map[string]*unit // the open documents, by name
	others   *others          // files that are not open
	settings settings
	roots    []root
}

// others keeps units of files that are not open, as long as nothing changes.
type others struct {
	mu    sync.Mutex
	units map[string]*unit
}

// maxOthers bounds how many files that are not open are kept checked.
const maxOthers = 64

// change makes the next snapshot: edit changes a copy of the present one and
// returns the names of the documents and files that are different in it.
// Every open document that depends on one of them starts anew; the others
// keep all that is known about them.
func (s *session) change(edit func(next *snapshot) (changed []string)) {
	s.writing.Lock()
	defer s.writing.Unlock()
	before := s.current.Load()
	next := &snapshot{session: s, units: maps.Clone(before.units), settings: before.settings, roots: before.roots}
	changed := edit(next)
	var started []*unit
	for name, u := range next.units {
		switch {
		case before.units[name] != u:
			if old := before.units[name]; old != nil {
				u.before.Store(old.latest())
			}
			started = append(started, u)
		case u.dependsOn(changed):
			old := u
			u = u.again()
			u.before.Store(old.latest())
			next.units[name] = u
			started = append(started, u)
		}
	}
	next.others = before.others.without(changed)
	s.current.Store(next)
	for name, u := range before.units {
		if next.units[name] != u {
			u.end()
		}
	}
	s.watchFor(next)
	again := false
	for _, u := range started {
		go s.report(next, u)
		again = again || !slices.Contains(changed, u.name)
	}
	if again { // a client that asks for diagnostics does not know of this
		s.refreshDiagnostics()
	}
	if len(changed) > 0 && len(started) == 0 {
		go s.publishChanged(changed)
	}
}

// without is the collection with everything left out that depends on one of
// the changed files.
func (o *others) without(changed []string) *others {
	o.mu.Lock()
	defer o.mu.Unlock()
	next := &others{units: map[string]*unit{}}
	for name, u := range o.units {
		if !u.dependsOn(changed) {
			next.units[name] = u
		}
	}
	return next
}

// unit is the unit of a document: an open one, else the file on disk.
func (s *snapshot) unit(name string) *unit {
	if u := s.units[name]; u != nil {
		return u
	}
	s.others.mu.Lock()
	defer s.others.mu.Unlock()
	if u := s.others.units[name]; u != nil {
		return u
	}
	u := newUnit(s.session, name, nil)
	if s.others.units == nil || len(s.others.units) >= maxOthers {
		s.others.units = map[string]*unit{}
	}
	s.others.units[name] = u
	return u
}

// document is the unit of the document that a request names.
func (s *snapshot) document(u uri.URI) (*unit, error) {
	unit := s.unit(s.session.mapper.name(u))
	if _, err := unit.file(); err != nil {
		return nil, jsonrpc2.Errorf(jsonrpc2.InvalidParams, "%s", fmt.Sprint(err))
	}
	return unit, nil
}

// open lists the open documents in order of their names.
func (s *snapshot) open() []*unit {
	var list []*unit
	for _, name := range slices.Sorted(maps.Keys(s.units)) {
		list = append(list, s.units[name])
	}
	return list
}

// uriOf is how the client knows a file: as it opened it, if it did.
func (s *snapshot) uriOf(name string) uri.URI {
	if u := s.units[name]; u != nil {
		return u.uri
	}
	return s.session.mapper.uri(name)
}
