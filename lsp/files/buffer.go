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
	file *dialect.File // nil until it is asked for
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
		b.file = dialect.Parse(b.name, b.text)
	}
	return b.file
}

// parsed is the tree if it was asked for already, nil if not.
func (b *Buffer) parsed() *dialect.File {
	b.mu.Lock()
	defer b.mu.Unlock()
	return b.file
}
