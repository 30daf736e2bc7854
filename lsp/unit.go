package lsp

import (
	"context"
	"fmt"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"sync/atomic"

	"go.lsp.dev/uri"

	"portlight/analyze"
	"portlight/dialect"
	"portlight/lsp/files"
)

// unit is one version of one document as a main file, with all that it uses:
// checked and analysed when first asked for, each once. It never changes;
// when the document or a file it uses does, a new unit takes its place and
// this one's work is called off.
type unit struct {
	session *session
	name    string
	uri     uri.URI
	version int32
	buffer  *files.Buffer // nil for a file that is not open
	view    *files.View

	ctx    context.Context // ends when the unit is superseded
	cancel context.CancelCauseFunc

	once     sync.Once
	settled  atomic.Bool // checking is over, so view.Names is complete
	checked  *dialect.Checked
	analysis *analyze.Analysis
	problem  error                             // the file cannot be read
	found    atomic.Pointer[[]dialect.Finding] // all findings, once they are known

	// before is the analysis of the version that this one took the place of:
	// what it knows of the network serves again where that is the same.
	before atomic.Pointer[analyze.Analysis]
}

// latest is the analysis that the next version may take over from, nil where
// nothing was computed that is worth it.
func (u *unit) latest() *analyze.Analysis {
	if u.settled.Load() && u.analysis != nil {
		return u.analysis.Computed()
	}
	return u.before.Load()
}

// newUnit makes the unit of a document that is open, or of a file on disk
// when buffer is nil.
func newUnit(s *session, name string, buffer *files.Buffer) *unit {
	u := &unit{session: s, name: name, uri: s.mapper.uri(name), buffer: buffer, view: s.store.View()}
	u.ctx, u.cancel = context.WithCancelCause(s.life)
	return u
}

// again is the same document, to be checked anew.
func (u *unit) again() *unit {
	next := newUnit(u.session, u.name, u.buffer)
	next.uri, next.version = u.uri, u.version
	return next
}

// end calls off all work on the unit.
func (u *unit) end() { u.cancel(errModified) }

// with binds a request's context to the unit too: it ends as well when the
// unit is superseded.
func (u *unit) with(ctx context.Context) (context.Context, func()) {
	ctx, cancel := context.WithCancelCause(ctx)
	stop := context.AfterFunc(u.ctx, func() { cancel(context.Cause(u.ctx)) })
	return ctx, func() { stop(); cancel(nil) }
}

// file is the document parsed.
func (u *unit) file() (*dialect.File, error) {
	if u.buffer != nil {
		return u.buffer.File(), nil
	}
	return u.view.Read(u.name)
}

// check checks the document. The result is nil when it cannot be read, or when
// checking failed inside the server; then problem says so.
func (u *unit) check() (*dialect.Checked, *analyze.Analysis) {
	u.once.Do(func() {
		defer func() {
			if p := recover(); p != nil {
				u.session.logPanic("checking "+u.name, p)
				u.checked, u.analysis, u.problem = nil, nil, fmt.Errorf("%s cannot be checked: %v", u.name, p)
			}
			u.settled.Store(true)
			u.before.Store(nil) // the analysis keeps what it needs
		}()
		file, err := u.file()
		if err != nil {
			u.problem = err
			return
		}
		u.checked = dialect.Check(file, u.view.Reader())
		u.analysis = analyze.NewAfter(u.checked, u.before.Load())
	})
	return u.checked, u.analysis
}

// findings gives all findings of the unit, in whichever file they lie.
func (u *unit) findings(ctx context.Context) ([]dialect.Finding, error) {
	if found := u.found.Load(); found != nil {
		return *found, nil
	}
	u.check()
	list, err := u.analyse(ctx)
	if err != nil {
		return nil, err
	}
	u.found.Store(&list)
	return list, nil
}

// analyse finds what the analysis finds. Should it fail inside the server,
// what checking found is still told.
func (u *unit) analyse(ctx context.Context) (list []dialect.Finding, err error) {
	if u.analysis == nil {
		return nil, nil
	}
	defer func() {
		if p := recover(); p != nil {
			u.session.logPanic("analysing "+u.name, p)
			list, err = u.checked.Findings, nil
		}
	}()
	return u.analysis.Findings(ctx)
}

// dependsOn says that the unit may be different because files changed. As
// long as it is not known what it uses, it may be.
func (u *unit) dependsOn(changed []string) bool {
	if len(changed) == 0 {
		return false
	}
	if !u.settled.Load() {
		return true
	}
	if slices.Contains(changed, u.name) {
		return true
	}
	return slices.ContainsFunc(u.view.Names(), func(name string) bool { return slices.Contains(changed, name) })
}

// uses says that the unit read a file, or is that file.
func (u *unit) uses(name string) bool { return u.dependsOn([]string{name}) }

// isPath says that a document's name is a path in the file system.
func isPath(name string) bool { return filepath.IsAbs(name) && !strings.HasPrefix(name, "untitled:") }
