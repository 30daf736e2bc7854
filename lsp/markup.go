package lsp

import (
	"strings"

	"go.lsp.dev/protocol"
)

// markup builds a text for the reader, as Markdown or plain.
type markup struct {
	markdown bool
	fence    string // what opens a block of aligned lines names as its language
	b        strings.Builder
}

// content is the text built so far.
func (m *markup) content() *protocol.MarkupContent {
	kind := protocol.MarkupKindPlainText
	if m.markdown {
		kind = protocol.MarkupKindMarkdown
	}
	return &protocol.MarkupContent{Kind: kind, Value: strings.TrimRight(m.b.String(), "\n")}
}

func (m *markup) gap() {
	if m.b.Len() > 0 {
		m.b.WriteString("\n\n")
	}
}

// title adds a line that stands out.
func (m *markup) title(text string) {
	if text == "" {
		return
	}
	m.gap()
	if m.markdown {
		m.b.WriteString("**" + escape(text) + "**")
	} else {
		m.b.WriteString(text)
	}
}

// prose adds running text; its line breaks are kept.
func (m *markup) prose(text string) {
	if strings.TrimSpace(text) == "" {
		return
	}
	m.gap()
	if !m.markdown {
		m.b.WriteString(text)
		return
	}
	lines := strings.Split(text, "\n")
	for i, line := range lines {
		lines[i] = escape(line)
	}
	m.b.WriteString(strings.Join(lines, "  \n"))
}

// block adds lines whose columns must stay aligned.
func (m *markup) block(lines []string) {
	if len(lines) == 0 {
		return
	}
	m.gap()
	text := strings.Join(lines, "\n")
	if !m.markdown {
		m.b.WriteString(text)
		return
	}
	fence := "```"
	for strings.Contains(text, fence) {
		fence += "`"
	}
	m.b.WriteString(fence + m.fence + "\n" + text + "\n" + fence)
}

// raw adds Markdown as it is.
func (m *markup) raw(text string) {
	m.gap()
	m.b.WriteString(text)
}

// escape keeps Markdown from reading meaning into a text.
func escape(text string) string {
	var b strings.Builder
	for i, r := range text {
		switch {
		case strings.ContainsRune("\\`*_{}[]<>|~$", r),
			(r == '#' || r == '+' || r == '-' || r == '=') && strings.TrimSpace(text[:i]) == "",
			r == '.' && i > 0 && strings.Trim(text[:i], "0123456789") == "",
			r == '&':
			b.WriteByte('\\')
		}
		b.WriteRune(r)
	}
	return b.String()
}
