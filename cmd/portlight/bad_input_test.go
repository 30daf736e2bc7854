package main

import (
	"bytes"
	"context"
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"
	"unicode/utf8"

	"github.com/owenrumney/go-sarif/v3/pkg/report/v210/sarif"
)

// badTexts are inputs that no person writes on purpose. None may crash, hang
// or pass for a network; each has a finding or an answer, and a status.
var badTexts = []struct {
	name, text string
	status     int
	says       string // in what check writes
}{
	{"an empty file", "", exitFine, "0 errors"},
	{"blank lines", "\n\n\r\n\t\n", exitFine, "0 errors"},
	{"a binary file", "\x7fELF\x02\x01\x01\x00\x00\x00\x00\xff\xfe\x00PNG\x00\x01\x02", exitFaults, "syntax"},
	{"invalid UTF-8", "ground hull\nresistor R\xff1 = 1 kΩ\nhull -[resistor R2 = 1 kΩ]- a\xc3\x28\n", exitFaults, "error"},
	{"a line of 10 MB", "ground hull\nresistor R1 = " + strings.Repeat("1 + ", 10<<20/4) + "1 Ω\nhull -[R1]- a\n", exitFaults, "error"},
	{"a name of 10 MB", "ground hull\nhull -[" + strings.Repeat("x", 10<<20) + "]- a\n", exitFaults, "error"},
	{"unclosed brackets", "ground hull\nresistor R1 = (1 kΩ + (2 kΩ\nhull -[R1\ntell z[hull\n", exitFaults, "syntax"},
	{"10 000 nested brackets", "ground hull\nresistor R1 = " + strings.Repeat("(", 10000) + "1 Ω" + strings.Repeat(")", 10000) + "\nhull -[R1]- hull2\n", exitFaults, "error"},
	{"10 000 open brackets", "let a = " + strings.Repeat("(", 10000), exitFaults, "syntax"},
	{"10 000 signs", "let a = " + strings.Repeat("-", 10000) + "1", exitFaults, "syntax"},
	{"a tower of powers", "let a = 9^9^9^9^9^9", exitFaults, "error"},
	{"one lone bracket", "]", exitFaults, "syntax"},
	{"CRLF line ends", "ground hull\r\na -[resistor R1 = 1 kΩ || capacitor C1 = 1 nF]- hull\r\nport p at a hull\r\ntell z[p]\r\n", exitFine, "0 errors"},
	{"a byte order mark", "\ufeffground hull\na -[resistor R1 = 1 kΩ || capacitor C1 = 1 nF]- hull\n", exitFine, "0 errors"},
}

func TestBadInput(t *testing.T) {
	for _, c := range badTexts {
		t.Run(c.name, func(t *testing.T) {
			t.Chdir(t.TempDir())
			if err := os.WriteFile("bad.plight", []byte(c.text), 0o666); err != nil {
				t.Fatal(err)
			}
			out, errors, code := runArgs(t, nil, "check", "bad.plight")
			if code != c.status {
				t.Errorf("the status is %d, want %d; it writes\n%.600s%.600s", code, c.status, out, errors)
			}
			if !strings.Contains(out, c.says) {
				t.Errorf("it does not say %q but\n%.600s", c.says, out)
			}
			if !utf8.ValidString(out) || strings.ContainsRune(out, 0) {
				t.Error("what it writes is not clean text")
			}
			if len(out) > 200<<10 {
				t.Errorf("it writes %d bytes", len(out))
			}
			for _, form := range []string{"json", "sarif"} {
				out, _, code := runArgs(t, nil, "check", "--as", form, "bad.plight")
				if code != c.status || !json.Valid([]byte(out)) {
					t.Errorf("as %s the status is %d and valid is %v", form, code, json.Valid([]byte(out)))
				}
				if form == "sarif" {
					document, err := sarif.FromString(out)
					if err != nil {
						t.Fatal(err)
					}
					if err := document.Validate(); err != nil {
						t.Errorf("not the format's own schema: %.500s", err)
					}
				}
			}
			if _, errors, code := runArgs(t, nil, "tell", "bad.plight", "poles"); code > exitFaults || strings.Contains(errors, "defect") {
				t.Errorf("tell ends with %d and says %.300s", code, errors)
			}
			if out, _, code := runArgs(t, []byte(c.text), "tidy", "-"); code != exitFine || !strings.HasSuffix(c.text, "\n") && len(out) == 0 && c.text != "" {
				t.Errorf("tidy ends with %d and %d bytes", code, len(out))
			}
		})
	}
}

// runArgs runs the command in a test, with a bound on its time.
func runArgs(t *testing.T, in []byte, args ...string) (out, errors string, code int) {
	t.Helper()
	ctx, stop := context.WithTimeout(t.Context(), time.Minute)
	defer stop()
	var o, e bytes.Buffer
	code = run(ctx, args, streams{bytes.NewReader(in), &o, &e})
	return o.String(), e.String(), code
}

func TestVanishedFile(t *testing.T) {
	t.Chdir(t.TempDir())
	for _, args := range [][]string{
		{"check", "gone.plight"}, {"tell", "gone.plight"}, {"tidy", "gone.plight"},
		{"picture", "gone.plight", "poles", "-o", "p.svg"}, {"watch", "gone.plight"},
	} {
		_, errors, code := runArgs(t, nil, args...)
		if code != exitNotRun || !strings.Contains(errors, "gone.plight") {
			t.Errorf("%v ends with %d and says %q", args, code, errors)
		}
	}
}

func TestUnreadableUse(t *testing.T) {
	t.Chdir(t.TempDir())
	if err := os.WriteFile("main.plight", []byte("use \"gone.plight\"\nground hull\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	out, _, code := runArgs(t, nil, "check", "main.plight")
	if code != exitFaults || !strings.Contains(out, "gone.plight") {
		t.Errorf("it ends with %d and writes %s", code, out)
	}
}

// TestInterrupted checks that a command that is stopped says so and has the
// status for it.
func TestInterrupted(t *testing.T) {
	t.Chdir(t.TempDir())
	if err := os.WriteFile("a.plight", []byte("ground hull\na -[resistor R1 = 1 Ω]- hull\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	ctx, stop := context.WithCancel(t.Context())
	stop()
	var out, errors bytes.Buffer
	code := run(ctx, []string{"check", "a.plight"}, streams{strings.NewReader(""), &out, &errors})
	if code != exitNotRun || !strings.Contains(errors.String(), "interrupted") {
		t.Errorf("it ends with %d and says %q", code, errors.String())
	}
}

// TestTidyWrites checks that -w keeps the mode of a file and a symbolic link.
func TestTidyWrites(t *testing.T) {
	t.Chdir(t.TempDir())
	if err := os.WriteFile("real.plight", []byte("ground   hull\nlet a=3\n"), 0o640); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink("real.plight", "link.plight"); err != nil {
		t.Skip("no symbolic links here")
	}
	if out, errors, code := runArgs(t, nil, "tidy", "-w", "link.plight"); code != exitFine || !strings.Contains(out, "link.plight") {
		t.Fatalf("it ends with %d: %s%s", code, out, errors)
	}
	info, err := os.Lstat("link.plight")
	if err != nil || info.Mode()&os.ModeSymlink == 0 {
		t.Errorf("the link is gone: %v %v", info, err)
	}
	if info, err := os.Stat("real.plight"); err != nil || info.Mode().Perm() != 0o640 {
		t.Errorf("the mode is %v, %v", info.Mode(), err)
	}
	data, _ := os.ReadFile("real.plight")
	if string(data) != "ground hull\nlet a = 3\n" {
		t.Errorf("the file is %q", data)
	}
	if left, _ := filepath.Glob(".tidy-*"); len(left) > 0 {
		t.Errorf("%v is left over", left)
	}
	if out, _, code := runArgs(t, nil, "tidy", "-w", "real.plight"); code != exitFine || out != "" {
		t.Errorf("a second time ends with %d and writes %q", code, out)
	}
}
