package main

import (
	"fmt"
	"io"
	"strings"
	"unicode/utf8"

	"portlight/analyze"
	"portlight/dialect"
)

// report writes what checking found, in the form asked for.
func report(to io.Writer, src *sources, all []checked, form string) error {
	switch form {
	case "json":
		return reportJSON(to, src, all)
	case "sarif":
		return reportSARIF(to, src, all)
	}
	reportText(to, src, all)
	return nil
}

// place is a span as a person is told it: lines and columns count from 1,
// columns in code points.
type place struct {
	file                             string
	line, column, endLine, endColumn int
}

func (s *sources) place(o dialect.Origin) place {
	if o.File == nil {
		return place{line: 1, column: 1, endLine: 1, endColumn: 1}
	}
	line, column := o.File.Lines.Position(o.Span.Start, dialect.CodePoints)
	endLine, endColumn := o.File.Lines.Position(o.Span.End, dialect.CodePoints)
	return place{s.shown(o.File.Name), line + 1, column + 1, endLine + 1, endColumn + 1}
}

// String writes file:line:column, which terminals and editors follow.
func (p place) String() string { return fmt.Sprintf("%s:%d:%d", p.file, p.line, p.column) }

// reportText writes findings, verdicts and a closing count for people.
func reportText(to io.Writer, src *sources, all []checked) {
	counts := map[dialect.Severity]int{}
	decided := map[analyze.Decision]int{}
	outside := 0
	for _, c := range all {
		told := map[textPlace]bool{}
		for _, f := range c.findings {
			counts[f.Severity]++
			writeFinding(to, src, f)
			if strings.HasPrefix(string(f.Code), "limit-") {
				told[placeKey(f.Origin)] = true
			}
		}
		for _, v := range c.verdicts {
			decided[v.Decision]++
			if v.InTolerance == analyze.Broken && v.Decision == analyze.Holds {
				outside++
			}
			if v.Limit == nil || !told[placeKey(v.Limit.Origin)] {
				writeVerdict(to, src, v)
			}
		}
	}
	fmt.Fprintln(to, summary(len(all), counts, decided, outside))
}

// textPlace is a place in a file, to tell whether two things stand there.
type textPlace struct {
	file *dialect.File
	span dialect.Span
}

func placeKey(o dialect.Origin) textPlace { return textPlace{o.File, o.Span} }

// writeFinding writes one finding: where, what, the line with the fault
// marked, other places that belong to it and how to mend it.
func writeFinding(to io.Writer, src *sources, f dialect.Finding) {
	fmt.Fprintf(to, "%s  %s  %s\n", src.place(f.Origin), f.Severity, f.Code)
	fmt.Fprintf(to, "  %s\n", f.Message)
	for _, l := range excerpt(f.Origin) {
		fmt.Fprintf(to, "      %s\n", l)
	}
	for _, use := range f.Origin.Use {
		fmt.Fprintf(to, "  used at %s\n", src.place(use))
	}
	for _, r := range f.Related {
		fmt.Fprintf(to, "  see %s: %s\n", src.place(r.Origin), r.Message)
	}
	for _, r := range f.Repairs {
		fmt.Fprintf(to, "  mend: %s\n", r.Title)
	}
	fmt.Fprintln(to)
}

// excerptWidth is how much of a long line is shown.
const excerptWidth = 96

// excerpt is the line of a fault and a line that marks it.
func excerpt(o dialect.Origin) []string {
	if o.File == nil {
		return nil
	}
	number := o.File.Lines.Line(min(max(o.Span.Start, 0), len(o.File.Text)))
	span := o.File.Lines.Span(number)
	start := min(max(o.Span.Start, span.Start), span.End)
	end := max(min(o.Span.End, span.End), start)
	if strings.TrimSpace(o.File.Text[span.Start:span.End]) == "" {
		return nil
	}
	from, before := span.Start, ""
	if utf8.RuneCountInString(o.File.Text[span.Start:start]) > excerptWidth/2 {
		from, before = back(o.File.Text, start, excerptWidth/3), "… "
	}
	to, after := span.End, ""
	if utf8.RuneCountInString(o.File.Text[from:to]) > excerptWidth {
		to, after = forward(o.File.Text, from, excerptWidth), " …"
	}
	end = min(end, to)
	lead := clean(o.File.Text[from:start])
	marks := max(1, width(clean(o.File.Text[start:end])))
	return []string{
		before + clean(o.File.Text[from:to]) + after,
		strings.Repeat(" ", width(before)+width(lead)) + strings.Repeat("‾", marks),
	}
}

// back and forward go n characters through a text.
func back(text string, at, n int) int {
	for ; n > 0 && at > 0; n-- {
		_, size := utf8.DecodeLastRuneInString(text[:at])
		at -= size
	}
	return at
}

func forward(text string, at, n int) int {
	for ; n > 0 && at < len(text); n-- {
		_, size := utf8.DecodeRuneInString(text[at:])
		at += size
	}
	return at
}

// clean makes a piece of a text fit to be shown: no control characters, no
// invalid bytes, tabs as two spaces.
func clean(s string) string {
	var b strings.Builder
	for _, r := range s {
		switch {
		case r == '\t':
			b.WriteString("  ")
		case r < ' ' || r == 0x7f || r >= 0x80 && r < 0xa0 || r == utf8.RuneError:
			b.WriteRune('·')
		default:
			b.WriteRune(r)
		}
	}
	return b.String()
}

func width(s string) int { return utf8.RuneCountInString(s) }

// writeVerdict writes the outcome of one limit.
func writeVerdict(to io.Writer, src *sources, v analyze.Verdict) {
	where, text := "", ""
	if v.Limit != nil {
		p := src.place(v.Limit.Origin)
		where, text = fmt.Sprintf("%s:%d  ", p.file, p.line), v.Limit.Text
	}
	fmt.Fprintf(to, "%srequire %s\n  %s\n\n", where, text, analyze.VerdictWords(v))
}

// summary counts what was told.
func summary(files int, counts map[dialect.Severity]int, decided map[analyze.Decision]int, outside int) string {
	var parts []string
	for _, s := range []dialect.Severity{dialect.Error, dialect.Warning} {
		parts = append(parts, plural(counts[s], s.String(), s.String()+"s"))
	}
	if n := counts[dialect.Information] + counts[dialect.Hint]; n > 0 {
		parts = append(parts, plural(n, "remark", "remarks"))
	}
	text := plural(files, "file", "files") + ": " + strings.Join(parts, ", ")
	if n := decided[analyze.Holds] + decided[analyze.Broken] + decided[analyze.Undecided]; n > 0 {
		text += fmt.Sprintf("; of %s %d hold, %d broken, %d undecided", plural(n, "limit", "limits"),
			decided[analyze.Holds], decided[analyze.Broken], decided[analyze.Undecided])
		if outside > 0 {
			text += fmt.Sprintf("; %d of those that hold broken within the tolerances", outside)
		}
	}
	return text
}

func plural(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}
