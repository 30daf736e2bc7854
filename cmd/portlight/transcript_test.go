package main

import (
	"bytes"
	"context"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "write the transcripts anew from what the command says now")

// A transcript is a session as a user would see it. Lines that begin "$ " are
// commands; below each stands what it writes, standard error marked "! ", and
// "[exit N]" where the status is not 0. After a line "=== NAME" comes the text
// of a file that the session has in its folder, until the next such line.
// "$ show FILE" writes a file. A line "# " is a remark.
type transcript struct {
	remarks  []string
	commands []transcriptCommand
	files    []transcriptFile
}

type transcriptCommand struct {
	remarks []string
	line    string
	output  string
}

type transcriptFile struct{ name, text string }

// TestTranscripts replays every transcript of testdata.
func TestTranscripts(t *testing.T) {
	names, _ := filepath.Glob("testdata/*.transcript")
	if len(names) < 8 {
		t.Fatalf("only %d transcripts", len(names))
	}
	for _, name := range names {
		t.Run(strings.TrimSuffix(filepath.Base(name), ".transcript"), func(t *testing.T) {
			path, err := filepath.Abs(name)
			if err != nil {
				t.Fatal(err)
			}
			replay(t, path)
		})
	}
}

func replay(t *testing.T, path string) {
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	session := readTranscript(string(data))
	folder := t.TempDir()
	t.Chdir(folder)
	for _, f := range session.files {
		if err := os.MkdirAll(filepath.Dir(f.name), 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(f.name, []byte(f.text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	changed := false
	for i, c := range session.commands {
		got := strings.ReplaceAll(perform(t, c.line), folder, "FOLDER")
		if got == c.output {
			continue
		}
		if !*update {
			t.Errorf("$ %s\nwrites\n%s\nwant\n%s", c.line, got, c.output)
		}
		session.commands[i].output = got
		changed = true
	}
	if changed && *update {
		if err := os.WriteFile(path, []byte(session.text()), 0o666); err != nil {
			t.Fatal(err)
		}
	}
}

// perform runs one line of a transcript and gives what it writes.
func perform(t *testing.T, line string) string {
	args := splitLine(t, line)
	if len(args) > 1 && args[0] == "show" {
		data, err := os.ReadFile(args[1])
		if err != nil {
			t.Fatal(err)
		}
		return string(data)
	}
	if len(args) == 0 || args[0] != "portlight" {
		t.Fatalf("%q is no command of a transcript", line)
	}
	var in bytes.Reader
	if n := len(args); n > 2 && args[n-2] == "<" {
		data, err := os.ReadFile(args[n-1])
		if err != nil {
			t.Fatal(err)
		}
		in.Reset(data)
		args = args[:n-2]
	}
	var out, errors bytes.Buffer
	code := run(context.Background(), args[1:], streams{&in, &out, &errors})
	text := out.String()
	if text != "" && !strings.HasSuffix(text, "\n") {
		text += "\n"
	}
	for _, l := range strings.Split(strings.TrimSuffix(errors.String(), "\n"), "\n") {
		if errors.Len() > 0 {
			text += "! " + l + "\n"
		}
	}
	if code != exitFine {
		text += fmt.Sprintf("[exit %d]\n", code)
	}
	return text
}

// splitLine splits a command line at spaces; '…' holds a word together.
func splitLine(t *testing.T, line string) []string {
	var words []string
	for {
		line = strings.TrimLeft(line, " ")
		switch {
		case line == "":
			return words
		case line[0] == '\'':
			word, rest, ok := strings.Cut(line[1:], "'")
			if !ok {
				t.Fatalf("an open quote in %q", line)
			}
			words, line = append(words, word), rest
		default:
			word, rest, _ := strings.Cut(line, " ")
			words, line = append(words, word), rest
		}
	}
}

func readTranscript(text string) transcript {
	var s transcript
	var remarks []string
	body, tail, _ := strings.Cut("\n"+text, "\n=== ")
	for _, l := range strings.SplitAfter(strings.TrimPrefix(body, "\n")+"\n", "\n") {
		switch {
		case strings.HasPrefix(l, "# "):
			remarks = append(remarks, strings.TrimSuffix(l, "\n"))
		case strings.HasPrefix(l, "$ "):
			s.commands = append(s.commands, transcriptCommand{remarks: remarks, line: strings.TrimSuffix(l[2:], "\n")})
			remarks = nil
		case len(s.commands) > 0:
			s.commands[len(s.commands)-1].output += l
		}
	}
	for i := range s.commands {
		s.commands[i].output = strings.TrimRight(s.commands[i].output, "\n")
		if s.commands[i].output != "" {
			s.commands[i].output += "\n"
		}
	}
	s.remarks = remarks
	if tail == "" {
		return s
	}
	for _, part := range strings.Split(tail, "\n=== ") {
		name, content, _ := strings.Cut(part, "\n")
		if content != "" && !strings.HasSuffix(content, "\n") {
			content += "\n"
		}
		s.files = append(s.files, transcriptFile{name, content})
	}
	return s
}

// text writes the transcript again.
func (s transcript) text() string {
	var b strings.Builder
	for _, c := range s.commands {
		for _, r := range c.remarks {
			b.WriteString(r + "\n")
		}
		b.WriteString("$ " + c.line + "\n" + c.output + "\n")
	}
	for _, f := range s.files {
		b.WriteString("=== " + f.name + "\n" + f.text)
	}
	return b.String()
}
