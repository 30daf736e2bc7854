package dialect

import (
	"fmt"
	"sort"
	"strings"
	"unicode"
)

// findingKey tells findings apart: the same code at the same place is told
// once, however often a subnetwork is used.
type findingKey struct {
	file *File
	span Span
	code Code
}

// maxFindings bounds what one check tells; see also the parser's own bound.
const maxReported = 1000

// report adds a finding with its code's severity. The result can be given
// related places and repairs; it is never nil.
func (c *checker) report(file *File, span Span, code Code, format string, args ...any) *reported {
	return c.reportAt(Origin{File: file, Span: span}, code, format, args...)
}

func (c *checker) reportAt(origin Origin, code Code, format string, args ...any) *reported {
	e := explanationOf(code)
	if e.Severity == Error && !c.harmless && !c.muted(origin) {
		c.faults = true
	}
	key := findingKey{origin.File, origin.Span, code}
	if c.seen[key] || len(c.findings) >= maxReported || c.muted(origin) || c.brokenAt(origin) {
		return &reported{}
	}
	c.seen[key] = true
	f := &Finding{Code: code, Severity: e.Severity, Message: fmt.Sprintf(format, args...), Origin: origin}
	for i := len(origin.Use) - 1; i >= 0; i-- {
		f.Related = append(f.Related, Related{Message: "in the subnetwork as used here", Origin: origin.Use[i]})
	}
	c.findings = append(c.findings, f)
	return &reported{f}
}

// warn adds a warning of a code that is an error elsewhere: it leaves nothing
// out of the network.
func (e *evaluator) warn(span Span, code Code, format string, args ...any) *reported {
	c := e.b.c
	harmless := c.harmless
	c.harmless = true
	r := e.report(span, code, format, args...).as(Warning)
	c.harmless = harmless
	return r
}

// muted says that a finding lies in a statement of a used file that has no
// effect here: only its lets, subnetworks and use statements do.
func (c *checker) muted(origin Origin) bool {
	u := c.byFile[origin.File]
	if u == nil || u.main {
		return false
	}
	i := sort.Search(len(u.file.Statements), func(i int) bool {
		return u.file.Statements[i].Headline().Span.Start > origin.Span.Start
	}) - 1
	if i < 0 {
		return true
	}
	switch u.file.Statements[i].(type) {
	case *LetStatement, *SubnetworkStatement, *UseFileStatement:
		return false
	}
	return true
}

// brokenAt says that the parser has reported something in the statement that a
// place lies in: one thing is told about a broken statement.
func (c *checker) brokenAt(origin Origin) bool {
	u := c.byFile[origin.File]
	if u == nil || len(u.file.Findings) == 0 {
		return false
	}
	u.needBroken()
	for _, s := range u.broken {
		if s.Start <= origin.Span.Start && origin.Span.End <= s.End {
			return true
		}
	}
	return false
}

// needBroken lists the broken statements once they matter.
func (u *unit) needBroken() {
	if u.broken == nil && len(u.file.Findings) > 0 {
		u.broken = []Span{}
		u.collectBroken(u.file.Statements)
	}
}

// collectBroken lists the statements with a finding of the parser; of a
// subnetwork, its head.
func (u *unit) collectBroken(statements []Statement) {
	for _, st := range statements {
		span := st.Headline().Span
		if sub, ok := st.(*SubnetworkStatement); ok {
			u.collectBroken(sub.Statements)
			span.End = max(span.Start, sub.BraceOpen.Start)
		}
		i := sort.Search(len(u.file.Findings), func(i int) bool { return u.file.Findings[i].Origin.Span.Start >= span.Start })
		told := i < len(u.file.Findings) && u.file.Findings[i].Origin.Span.Start <= span.End && u.file.Findings[i].Severity == Error
		if told || len(u.file.Findings) >= maxFindings && st.Headline().Broken {
			u.broken = append(u.broken, span)
			switch st.(type) {
			case *BrokenStatement, *PathStatement, *PartStatement, *UsePartStatement:
				u.collectLost(span)
			}
		}
	}
}

// collectLost notes the words of a part or path that cannot be read: what it
// defines or connects is not known.
func (u *unit) collectLost(span Span) {
	if u.lost == nil {
		u.lost = map[string]bool{}
	}
	for word := range strings.FieldsFuncSeq(u.file.Text[span.Start:span.End], func(r rune) bool { return !nameRune(r) }) {
		u.lost[word] = true
	}
}

// nameRune says that a character can be part of a name.
func nameRune(r rune) bool { return r == '_' || unicode.IsLetter(r) || unicode.IsDigit(r) }

// lostName says that a broken statement names something, which is why it
// seems to be missing or not to be wired.
func (c *checker) lostName(u *unit, name string) bool {
	u.needBroken()
	return u.lost[name]
}

// withoutEchoes drops the warning that a part is not wired where something
// graver is told about its statement.
func (c *checker) withoutEchoes(findings []*Finding) []*Finding {
	var errors []Origin
	for _, f := range findings {
		if f.Severity == Error {
			errors = append(errors, f.Origin)
		}
	}
	kept := findings[:0]
	for _, f := range findings {
		if f.Code == "never-wired" && c.echo(f.Origin, errors) {
			continue
		}
		kept = append(kept, f)
	}
	return kept
}

func (c *checker) echo(at Origin, errors []Origin) bool {
	for _, e := range errors {
		if e.File == at.File && e.Span.Start >= at.Span.Start && c.sameStatement(at, e.Span.Start) {
			return true
		}
	}
	return false
}

// sameStatement says that an offset lies in the statement of a place.
func (c *checker) sameStatement(at Origin, offset int) bool {
	u := c.byFile[at.File]
	if u == nil {
		return false
	}
	statements := u.file.Statements
	for {
		i := sort.Search(len(statements), func(i int) bool { return statements[i].Headline().Span.Start > at.Span.Start }) - 1
		if i < 0 {
			return false
		}
		if sub, ok := statements[i].(*SubnetworkStatement); ok && len(sub.Statements) > 0 && at.Span.Start >= sub.BodyStart {
			statements = sub.Statements
			continue
		}
		return offset <= statements[i].Headline().Span.End
	}
}

// reported is a finding under construction; its methods do nothing when the
// finding had been told before.
type reported struct{ f *Finding }

// relate adds a related place.
func (r *reported) relate(file *File, span Span, format string, args ...any) *reported {
	if r.f != nil {
		r.f.Related = append(r.f.Related, Related{
			Message: fmt.Sprintf(format, args...), Origin: Origin{File: file, Span: span},
		})
	}
	return r
}

// repair adds a repair that replaces one span. The first one is preferred.
func (r *reported) repair(file *File, span Span, text, title string) *reported {
	return r.repairs(Repair{Title: title, Edits: []Edit{{File: file, Span: span, Text: text}}})
}

func (r *reported) repairs(repair Repair) *reported {
	if r.f != nil {
		repair.Preferred = len(r.f.Repairs) == 0
		r.f.Repairs = append(r.f.Repairs, repair)
	}
	return r
}

// choose says that of several repairs none is the obvious one.
func (r *reported) choose() *reported {
	if r.f != nil {
		for i := range r.f.Repairs {
			r.f.Repairs[i].Preferred = false
		}
	}
	return r
}

// remove adds a repair that takes out a statement with its line, or a span
// within a line.
func (r *reported) remove(file *File, span Span, title string) *reported {
	return r.repair(file, wholeLine(file.Text, span), "", title)
}

// as changes the severity from the code's usual one.
func (r *reported) as(s Severity) *reported {
	if r.f != nil {
		r.f.Severity = s
	}
	return r
}

// wholeLine widens a span that is alone on its lines to them and the line end.
func wholeLine(text string, span Span) Span {
	start, end := span.Start, span.End
	for start > 0 && (text[start-1] == ' ' || text[start-1] == '\t') {
		start--
	}
	for end < len(text) && (text[end] == ' ' || text[end] == '\t' || text[end] == '\r') {
		end++
	}
	if (start > 0 && text[start-1] != '\n') || (end < len(text) && text[end] != '\n') {
		return span
	}
	if end < len(text) {
		end++
	}
	return Span{start, end}
}

// sortFindings puts findings in order: the main file first, then by place.
func (c *checker) sortFindings() []Finding {
	order := map[*File]int{}
	for i, u := range c.units {
		order[u.file] = i
	}
	all := make([]Finding, len(c.findings))
	for i, f := range c.findings {
		all[i] = *f
	}
	sort.SliceStable(all, func(i, j int) bool {
		a, b := all[i].Origin, all[j].Origin
		if a.File != b.File {
			return order[a.File] < order[b.File]
		}
		if a.Span.Start != b.Span.Start {
			return a.Span.Start < b.Span.Start
		}
		return a.Span.End < b.Span.End
	})
	return all
}
