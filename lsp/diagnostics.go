package lsp

import (
	"encoding/json"
	"maps"
	"slices"
	"strings"
	"sync"
	"time"

	"go.lsp.dev/protocol"

	"portlight/dialect"
)

// publisher remembers what the client shows, file by file.
type publisher struct {
	mu      sync.Mutex
	shown   map[string]published
	waiting map[string]bool // files whose findings were not whole yet
}

type published struct {
	version int32
	open    bool
	text    string // the diagnostics as sent
	empty   bool
}

// slow is how long the client hears nothing of an analysis: longer ones show
// their progress.
const slow = time.Second

// report analyses a unit behind and publishes what it made complete.
func (s *session) report(snap *snapshot, u *unit) {
	defer s.contain("analysing " + u.name)
	if s.pulled() {
		u.check() // the client asks for the findings; this lets it wait less
		s.watchFor(snap)
		return
	}
	u.check()
	s.watchFor(snap)
	stop := s.progressAfter(slow, "Analysing "+base(u.name), u.end)
	_, err := u.findings(u.ctx)
	stop()
	if err != nil {
		return
	}
	names := []string{u.name}
	if u.checked != nil {
		for _, f := range u.checked.Files {
			names = append(names, f.Name)
		}
	}
	s.publishChanged(names)
}

// publishChanged publishes the findings of files, each unless the client
// shows them already or a unit that may add to them is still being analysed.
func (s *session) publishChanged(names []string) {
	if s.pulled() {
		return
	}
	s.publisher.mu.Lock()
	defer s.publisher.mu.Unlock()
	snap := s.current.Load()
	if s.publisher.waiting == nil {
		s.publisher.waiting = map[string]bool{}
	}
	for _, name := range names {
		s.publisher.waiting[name] = true
	}
	for _, name := range slices.Sorted(maps.Keys(s.publisher.waiting)) {
		if list, whole := snap.findingsOf(name); whole {
			delete(s.publisher.waiting, name)
			s.publish(snap, name, list)
		}
	}
	s.clearForgotten(snap)
}

// clearForgotten takes back what is shown for files that no open document is
// or uses any more.
func (s *session) clearForgotten(snap *snapshot) {
	for name, shown := range s.publisher.shown {
		if shown.empty && !shown.open {
			delete(s.publisher.shown, name)
			continue
		}
		used := slices.ContainsFunc(snap.open(), func(u *unit) bool { return u.uses(name) })
		if !used {
			s.publish(snap, name, nil)
		}
	}
}

// publish sends a file's findings if they are news. The caller holds the
// publisher's lock, so that messages go out in the order of their snapshots.
func (s *session) publish(snap *snapshot, name string, list []dialect.Finding) {
	p := &protocol.PublishDiagnosticsParams{URI: snap.uriOf(name), Diagnostics: snap.diagnostics(list)}
	next := published{empty: len(list) == 0}
	if u := snap.units[name]; u != nil {
		next.version, next.open = u.version, true
		p.Version = protocol.NewOptional(u.version)
	}
	if raw, err := protocol.Marshal(p); err == nil {
		next.text = string(raw)
	}
	if s.publisher.shown == nil {
		s.publisher.shown = map[string]published{}
	}
	before, known := s.publisher.shown[name]
	if known && before == next || !known && next.empty && !next.open {
		return
	}
	s.publisher.shown[name] = next
	s.notify(protocol.MethodTextDocumentPublishDiagnostics, p)
}

// findingsOf gathers the findings that lie in a file, from every open
// document that is or uses it, each once. whole is false while one of them
// is still being analysed.
func (s *snapshot) findingsOf(name string) (list []dialect.Finding, whole bool) {
	for _, u := range s.open() {
		if !u.uses(name) {
			continue
		}
		found := u.found.Load()
		if found == nil {
			return nil, false
		}
		list = gather(list, *found, name)
	}
	return list, true
}

// gather adds the findings that lie in a file to a list, each once.
func gather(list, found []dialect.Finding, name string) []dialect.Finding {
	for _, f := range found {
		if f.Origin.File == nil || f.Origin.File.Name != name {
			continue
		}
		if !slices.ContainsFunc(list, func(g dialect.Finding) bool { return sameFinding(f, g) }) {
			list = append(list, f)
		}
	}
	return list
}

// sameFinding says that two findings tell a reader of the file the same.
func sameFinding(a, b dialect.Finding) bool {
	return a.Code == b.Code && a.Origin.Span == b.Origin.Span && a.Message == b.Message
}

// diagnostics words findings for the client.
func (s *snapshot) diagnostics(list []dialect.Finding) []protocol.Diagnostic {
	out := make([]protocol.Diagnostic, 0, len(list))
	for _, f := range list {
		out = append(out, s.diagnostic(f))
	}
	return out
}

func (s *snapshot) diagnostic(f dialect.Finding) protocol.Diagnostic {
	c, m := s.session.client, s.session.mapper
	d := protocol.Diagnostic{
		Range:    m.reach(f.Origin.File.Lines, f.Origin.Span),
		Severity: protocol.DiagnosticSeverity(f.Severity + 1),
		Code:     protocol.String(f.Code),
		Source:   protocol.NewOptional("portlight"),
		Message:  protocol.String(f.Message),
	}
	if c.codeDescription && c.ownPages {
		d.CodeDescription.Href = explanationURI(f.Code)
	}
	for _, r := range f.Related {
		if c.relatedInformation && r.Origin.File != nil {
			d.RelatedInformation = append(d.RelatedInformation, protocol.DiagnosticRelatedInformation{
				Location: m.location(s.uriOf(r.Origin.File.Name), r.Origin.File, r.Origin.Span), Message: r.Message,
			})
		} else if r.Origin.File != nil {
			line, _ := r.Origin.File.Lines.Position(r.Origin.Span.Start, dialect.CodePoints)
			d.Message = protocol.String(string(d.Message.(protocol.String)) + "\n" + whereRelated(f, r, line) + r.Message)
		}
	}
	if f.Code == "never-wired" {
		d.Tags = protocol.NewDiagnosticTags(protocol.DiagnosticTagUnnecessary)
	}
	return d
}

// whereRelated names a related place for clients that cannot show it themselves.
func whereRelated(f dialect.Finding, r dialect.Related, line int) string {
	where := "line " + itoa(line+1)
	if r.Origin.File != f.Origin.File {
		where = base(r.Origin.File.Name) + ", " + where
	}
	return where + ": "
}

// contain logs a panic of background work instead of ending the process.
func (s *session) contain(what string) {
	if p := recover(); p != nil {
		s.logPanic(what, p)
	}
}

func base(name string) string { return name[strings.LastIndexAny(name, `/\`)+1:] }

func itoa(n int) string { b, _ := json.Marshal(n); return string(b) }
