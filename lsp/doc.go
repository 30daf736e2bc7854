// Package lsp is the language server: it shows the checked descriptions and
// the answers of the packages below it in any editor that speaks the Language
// Server Protocol 3.18. It computes nothing about networks itself.
//
// From the wire upwards:
//
//	frames.go      the byte stream in messages; a malformed one costs itself only
//	dispatch.go    edits in order on the read loop, requests concurrently on the
//	               snapshot of their moment, cancellation, panics contained
//	methods.go     the table of every method that is served, one line each
//	absent.go      every method that is deliberately not served, and why
//	session.go     what lives as long as the connection; its one writer
//	snapshot.go    the state of all documents at one moment, never changed
//	unit.go        one document checked and analysed, once, on demand
//	mapper.go      every conversion between editor positions and byte offsets
//	client.go      what the client can do, asked in one place
//	sync.go        open, change, save and close
//	diagnostics.go findings published once per version, complete; pull.go hands
//	               out the same on request
//
// and one short file per family of requests: hover, completion, symbols, and
// so on. Positions are byte offsets everywhere but in the mapper.
package lsp
