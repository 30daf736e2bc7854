package dialect

import "fmt"

// Span is a half-open range of byte offsets in a file's text.
type Span struct{ Start, End int }

// Severity ranks a finding.
type Severity int

// Severities, gravest first.
const (
	Error Severity = iota
	Warning
	Information
	Hint
)

// String gives the word that JSON and the terminal use.
func (s Severity) String() string {
	return [...]string{"error", "warning", "information", "hint"}[s]
}

// Code is the short name of a finding, in plain words ("unit-mismatch").
// All codes are defined in one table; see Explanations.
type Code string

// Finding is one thing the reader is told about the text.
type Finding struct {
	Code     Code
	Severity Severity
	Message  string
	Origin   Origin
	Related  []Related
	Repairs  []Repair
}

// Related points at another place that belongs to a finding.
type Related struct {
	Message string
	Origin  Origin
}

// Repair is a change of text that mends a finding.
type Repair struct {
	Title     string
	Edits     []Edit
	Preferred bool // the obvious one
}

// Edit replaces a span of a file by new text.
type Edit struct {
	File *File
	Span Span
	Text string
}

// String shows the finding without its place, for logs and tests.
func (f Finding) String() string {
	return fmt.Sprintf("%s %s: %s", f.Severity, f.Code, f.Message)
}
