package files

import (
	"sync"

	"portlight/dialect"
)

// Buffer is one version of an open document's text. It is parsed when its
// tree is first asked for: a version that the next keystroke replaces before
// anybody looks at it costs nothing. Safe for concurrent use.
type Buffer struct {
	name, text string

	mu   sync.Mutex
	base *dialect.File // an earlier version, let go once this one is parsed
	file *dialect.File
}

// Name is the document's name.
func (b *Buffer) Name() string { return b.name }

// Text is the document's text.
func (b *Buffer) Text() string { return b.text }

// File is the text parsed.
func (b *Buffer) File() *dialect.File {
	b.mu.Lock()
	defer b.mu.Unlock()
	if b.file == nil {
		if b.base != nil && b.base.Text == b.text {
			b.file = b.base
		} else {
			b.file = dialect.Parse(b.name, b.text)
		}
		b.base = nil
	}
	return b.file
}

// latest is the newest tree at hand that this version, or one before it, has.
func (b *Buffer) latest() *dialect.File {
	b.mu.Lock()
	defer b.mu.Unlock()
	if b.file != nil {
		return b.file
	}
	return b.base
}
