package main

import (
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"

	"portlight/analyze"
	"portlight/dialect"
	"portlight/lsp/files"
)

// stdinName is how a text from standard input is called in messages.
const stdinName = "standard input"

// sources reads the files that a command is given, each once.
type sources struct {
	std   streams
	store *files.Store
	here  string // the working folder, for short names
	stdin string // the name of the text from standard input, when there is one
}

func newSources(std streams) *sources {
	here, err := os.Getwd()
	if err != nil {
		here = ""
	}
	return &sources{std: std, store: files.NewStore(), here: here}
}

// names lists the files that paths stand for; what cannot be read is told
// and makes ok false.
func (s *sources) names(paths []string) (names []string, ok bool) {
	ok = true
	var onDisk []string
	for _, p := range paths {
		if p != "-" {
			onDisk = append(onDisk, p)
			continue
		}
		name, err := s.readStdin()
		if err != nil {
			fmt.Fprintln(s.std.err, "portlight: "+err.Error())
			ok = false
			continue
		}
		names = append(names, name)
	}
	found, problems := files.Collect(onDisk...)
	for _, p := range problems {
		fmt.Fprintln(s.std.err, "portlight: "+p.Error())
		ok = false
	}
	return append(names, found...), ok
}

// readStdin takes the text from standard input as a file of the working
// folder, so that the files it uses are found beside it.
func (s *sources) readStdin() (string, error) {
	if s.stdin != "" {
		return s.stdin, nil
	}
	data, err := io.ReadAll(io.LimitReader(s.std.in, files.MaxSize+1))
	if err != nil {
		return "", fmt.Errorf("%s: %w", stdinName, err)
	}
	if len(data) > files.MaxSize {
		return "", fmt.Errorf("%s: more than %d bytes", stdinName, files.MaxSize)
	}
	s.stdin = filepath.Join(s.here, "<"+stdinName+">")
	s.store.Open(s.stdin, string(data))
	return s.stdin, nil
}

// analysis reads, checks and prepares one file.
func (s *sources) analysis(name string) (*analyze.Analysis, *files.View, error) {
	view := s.store.View()
	file, err := view.Read(name)
	if err != nil {
		return nil, view, err
	}
	return analyze.New(dialect.Check(file, view.Reader())), view, nil
}

// shown is the name of a file as a person is told it: from the working
// folder where that is shorter.
func (s *sources) shown(name string) string {
	if name == s.stdin && name != "" {
		return stdinName
	}
	if rel, err := filepath.Rel(s.here, name); s.here != "" && err == nil && filepath.IsLocal(rel) {
		return filepath.ToSlash(rel)
	}
	return name
}

// one gives the single file that a command works on.
func (s *sources) one(path string) (string, error) {
	if path == "-" {
		return s.readStdin()
	}
	info, err := os.Stat(path)
	if err == nil && info.IsDir() {
		return "", fmt.Errorf("%s is a folder; this takes one file", path)
	}
	if strings.TrimSpace(path) == "" {
		return "", fmt.Errorf("the name of the file is empty")
	}
	return filepath.Abs(path)
}
