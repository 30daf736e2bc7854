package lsp

import (
	"path/filepath"
	"slices"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"

	"portlight/lsp/files"
)

// root is a folder of the workspace.
type root struct{ name, path string }

// rootsOf reads the folders of an initialize request. There may be several,
// one, or none; the older ways to name one count only where the newer is
// absent.
func (s *session) rootsOf(p *protocol.InitializeParams) []root {
	if folders, ok := p.WorkspaceFolders.Get(); ok {
		return s.roots(folders)
	}
	if p.RootURI != nil && *p.RootURI != "" {
		return s.roots([]protocol.WorkspaceFolder{{URI: *p.RootURI}})
	}
	if path, ok := p.RootPath.Get(); ok && filepath.IsAbs(path) {
		return s.roots([]protocol.WorkspaceFolder{{URI: uri.File(path)}})
	}
	return nil
}

func (s *session) roots(folders []protocol.WorkspaceFolder) []root {
	var list []root
	for _, f := range folders {
		if path := s.mapper.name(f.URI); isPath(path) {
			list = append(list, root{name: f.Name, path: filepath.Clean(path)})
		}
	}
	return list
}

// didChangeWorkspaceFolders handles the notification of that name.
func (s *session) didChangeWorkspaceFolders(p *protocol.DidChangeWorkspaceFoldersParams) error {
	removed, added := s.roots(p.Event.Removed), s.roots(p.Event.Added)
	s.change(func(next *snapshot) []string {
		next.roots = slices.DeleteFunc(slices.Clone(next.roots), func(r root) bool {
			return slices.ContainsFunc(removed, func(q root) bool { return q.path == r.path })
		})
		for _, r := range added {
			if !slices.ContainsFunc(next.roots, func(q root) bool { return q.path == r.path }) {
				next.roots = append(next.roots, r)
			}
		}
		return nil
	})
	for _, r := range removed {
		s.watcher.RemoveTree(r.path)
	}
	for _, r := range added {
		go s.watcher.AddTree(r.path)
	}
	s.refreshDiagnostics()
	return nil
}

// startWatching watches the workspace ourselves, whatever the client watches:
// not every client reports what other programs write.
func (s *session) startWatching(roots []root) {
	s.watcher = files.Watch(s.filesChanged, func(text string) { s.logf(protocol.MessageTypeWarning, "%s", text) })
	go func() {
		for _, r := range roots {
			s.watcher.AddTree(r.path)
		}
	}()
}

// watchFor watches the folders of every file that an open document uses, or
// would use if it were there.
func (s *session) watchFor(snap *snapshot) {
	if s.watcher == nil {
		return
	}
	for _, u := range snap.units {
		if isPath(u.name) {
			s.watcher.AddFolder(filepath.Dir(u.name))
		}
		if !u.settled.Load() {
			continue
		}
		for _, name := range u.view.Names() {
			if isPath(name) {
				s.watcher.AddFolder(filepath.Dir(name))
			}
		}
	}
}

// filesChanged takes in that files on disk changed. An open document's file
// does not count.
func (s *session) filesChanged(names []string) {
	s.change(func(next *snapshot) []string {
		names = slices.DeleteFunc(names, func(name string) bool { return next.units[name] != nil })
		s.store.Forget(names...)
		return names
	})
	if len(names) > 0 {
		s.refreshDiagnostics()
	}
}

// didChangeWatchedFiles handles the client's reports of changed files. Our
// own watcher may report the same; the second report finds nothing changed.
func (s *session) didChangeWatchedFiles(p *protocol.DidChangeWatchedFilesParams) error {
	var names []string
	for _, change := range p.Changes {
		if name := s.mapper.name(change.URI); files.IsNetwork(name) {
			names = append(names, name)
		}
	}
	if len(names) > 0 {
		s.filesChanged(names)
	}
	return nil
}

// workspaceFiles lists the network files of the workspace's folders and the
// open documents, in order.
func (s *snapshot) workspaceFiles() []string {
	paths := make([]string, 0, len(s.roots))
	for _, r := range s.roots {
		paths = append(paths, r.path)
	}
	names, _ := files.Collect(paths...)
	for name := range s.units {
		names = append(names, name)
	}
	slices.Sort(names)
	return slices.Compact(names)
}
