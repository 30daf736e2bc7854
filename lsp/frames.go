package lsp

import (
	"bufio"
	"bytes"
	"errors"
	"fmt"
	"io"
	"strconv"
	"strings"
	"sync"

	"go.lsp.dev/jsonrpc2"
)

// maxFrame is the length above which a frame is taken for a malformed one:
// four times the largest text that is read, for its JSON escapes.
const maxFrame = 1 << 30

// maxHeader is the length above which a header line is no header line.
const maxHeader = 4096

const lengthField = "Content-Length:"

// frames guards the connection's byte stream. The connection above ends at
// the first malformed message; frames therefore hands it well-formed messages
// only. A malformed one is answered here, with an error without an id, and
// reading goes on at the next header.
type frames struct {
	in  *bufio.Reader
	log func(format string, args ...any)

	pending []byte // of the current message, header included, not yet read by the connection
	again   []byte // bytes after a malformed message that may hold the next one

	mu     sync.Mutex // serialises writes
	out    io.Writer
	closed bool
}

func newFrames(in io.Reader, out io.Writer, log func(string, ...any)) *frames {
	return &frames{in: bufio.NewReaderSize(in, 64<<10), out: out, log: log}
}

// Read implements io.Reader for the connection.
func (f *frames) Read(p []byte) (int, error) {
	for len(f.pending) == 0 {
		if err := f.next(); err != nil {
			return 0, err
		}
	}
	n := copy(p, f.pending)
	f.pending = f.pending[n:]
	return n, nil
}

// Write implements io.Writer: one whole message per call.
func (f *frames) Write(p []byte) (int, error) {
	f.mu.Lock()
	defer f.mu.Unlock()
	if f.closed {
		return 0, io.ErrClosedPipe
	}
	return f.out.Write(p)
}

// Close implements io.Closer. The streams themselves belong to the caller of
// Serve; only writing ends.
func (f *frames) Close() error {
	f.mu.Lock()
	defer f.mu.Unlock()
	f.closed = true
	return nil
}

// next puts the next well-formed message into pending.
func (f *frames) next() error {
	body, err := f.body()
	if err != nil {
		return err
	}
	if problem := malformed(body); problem != nil {
		f.refuse(problem)
		// A length too large has swallowed the messages that follow: they
		// are looked for in what was read.
		if at := bytes.Index(body, []byte(lengthField)); at >= 0 {
			f.again = append(bytes.Clone(body[at:]), f.again...)
		}
		return nil
	}
	f.pending = append(strconv.AppendInt([]byte(lengthField+" "), int64(len(body)), 10), "\r\n\r\n"...)
	f.pending = append(f.pending, body...)
	return nil
}

// body reads the header and the body of one message, skipping what cannot be
// a header.
func (f *frames) body() ([]byte, error) {
	length, said := -1, false
	for {
		line, err := f.line()
		if err != nil {
			return nil, err
		}
		text := strings.TrimRight(line, "\r\n")
		name, value, ok := strings.Cut(text, ":")
		switch {
		case text == "" && length > 0:
			body := make([]byte, length)
			if err := f.full(body); err != nil {
				return nil, err
			}
			return body, nil
		case text == "": // a stray empty line, or one that ends a refused header
			length = -1
		case ok && strings.EqualFold(strings.TrimSpace(name), "content-length"):
			n, err := strconv.Atoi(strings.TrimSpace(value))
			if err != nil || n <= 0 || n > maxFrame {
				f.refuse(fmt.Errorf("content length %q is not a number of bytes from 1 to %d", strings.TrimSpace(value), maxFrame))
				length, said = -1, true
				continue
			}
			length, said = n, false
		case ok && strings.EqualFold(strings.TrimSpace(name), "content-type"):
		default:
			// Not a header: skip to the next length field, which may begin
			// in the middle of what looks like a line.
			if at := strings.LastIndex(line, lengthField); at > 0 {
				f.again = append([]byte(line[at:]), f.again...)
			}
			if !said {
				f.refuse(errors.New("a message does not begin with a header"))
				said = true
			}
			length = -1
		}
	}
}

// line reads up to and with the next line feed; a line that is too long to be
// a header comes in pieces.
func (f *frames) line() (string, error) {
	var line []byte
	for len(line) < maxHeader {
		b, err := f.byte()
		if err != nil {
			if len(line) > 0 && errors.Is(err, io.EOF) {
				return "", io.ErrUnexpectedEOF
			}
			return "", err
		}
		line = append(line, b)
		if b == '\n' {
			break
		}
		// Without a line feed between a broken message and the next header,
		// the header is found by its name.
		if b == ':' && len(line) > len(lengthField) && bytes.HasSuffix(line, []byte(lengthField)) {
			rest := line[len(line)-len(lengthField):]
			f.again = append(bytes.Clone(rest), f.again...)
			return string(line[:len(line)-len(lengthField)]), nil
		}
	}
	return string(line), nil
}

func (f *frames) byte() (byte, error) {
	if len(f.again) > 0 {
		b := f.again[0]
		f.again = f.again[1:]
		return b, nil
	}
	return f.in.ReadByte()
}

func (f *frames) full(p []byte) error {
	n := copy(p, f.again)
	f.again = f.again[n:]
	if n == len(p) {
		return nil
	}
	if _, err := io.ReadFull(f.in, p[n:]); err != nil {
		if errors.Is(err, io.EOF) {
			err = io.ErrUnexpectedEOF
		}
		return err
	}
	return nil
}

// refuse answers a malformed message.
func (f *frames) refuse(problem error) {
	f.log("malformed message: %v", problem)
	code := jsonrpc2.ParseError
	if errors.Is(problem, jsonrpc2.ErrInvalidRequest) {
		code = jsonrpc2.InvalidRequest
	}
	body := jsonrpc2.AppendResponse(nil, jsonrpc2.ID{}, nil, jsonrpc2.NewError(code, problem.Error()))
	message := append(strconv.AppendInt([]byte(lengthField+" "), int64(len(body)), 10), "\r\n\r\n"...)
	_, _ = f.Write(append(message, body...))
}

// malformed says why the connection would not take a message.
func malformed(body []byte) error {
	if trimmed := bytes.TrimLeft(body, " \t\r\n"); len(trimmed) > 0 && trimmed[0] == '[' {
		_, err := jsonrpc2.ParseRequests(body)
		return err
	}
	_, err := jsonrpc2.DecodeMessage(body)
	return err
}
