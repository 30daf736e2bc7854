package analyze

import (
	"sync"

	"portlight/dialect"
)

// Analysis answers everything about one checked file. It is cheap to make,
// computes on demand, keeps what it computed, and is safe for concurrent use.
type Analysis struct {
	checked     *dialect.Checked
	description *dialect.Description
	memo        memo // what depends on places in the text

	asWritten sync.Once  // guards stretches
	stretches []interval // of the network as it is written

	previous *Analysis  // until shared is first used
	sharing  sync.Mutex // guards previous and common
	common   *arithmetic
}

// New prepares the analysis of a checked file; nothing is computed yet.
func New(checked *dialect.Checked) *Analysis {
	return &Analysis{checked: checked, description: checked.Description}
}

// Checked is the checked file under analysis.
func (a *Analysis) Checked() *dialect.Checked { return a.checked }
