package files

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"portlight/dialect"
)

func write(t *testing.T, name, text string) string {
	t.Helper()
	if err := os.MkdirAll(filepath.Dir(name), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(name, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	return name
}

func TestReadsDiskAndPrefersBuffers(t *testing.T) {
	name := write(t, filepath.Join(t.TempDir(), "valve.plight"), "ground hull\n")
	s := NewStore()
	first, err := s.Read(name)
	if err != nil || first.Text != "ground hull\n" || first.Name != name {
		t.Fatalf("read %+v, %v", first, err)
	}
	if again, _ := s.Read(name); again != first {
		t.Error("an unchanged file was parsed again")
	}
	view := s.View()
	buffer := s.Open(name, "ground deck\n")
	if got, _ := s.Read(name); got != buffer.File() {
		t.Error("the open buffer does not win over the disk")
	}
	if got, _ := view.Read(name); got != first {
		t.Error("a view made before the edit sees the edit")
	}
	s.Close(name)
	if got, _ := s.Read(name); got.Text != "ground hull\n" {
		t.Errorf("after closing the buffer: %q", got.Text)
	}
}

func TestSeesWritesOfSameSize(t *testing.T) {
	name := write(t, filepath.Join(t.TempDir(), "a.plight"), "ground a\n")
	s := NewStore()
	if _, err := s.Read(name); err != nil {
		t.Fatal(err)
	}
	for _, text := range []string{"ground b\n", "ground c\n", "ground d\n"} {
		write(t, name, text)
		if got, _ := s.Read(name); got.Text != text {
			t.Fatalf("read %q after writing %q", got.Text, text)
		}
	}
}

func TestReadErrorsAreSentences(t *testing.T) {
	dir := t.TempDir()
	s := NewStore()
	_, err := s.Read(filepath.Join(dir, "none.plight"))
	if !errors.Is(err, fs.ErrNotExist) || !strings.Contains(err.Error(), "there is no such file") {
		t.Errorf("missing file: %v", err)
	}
	if _, err := s.Read(dir); err == nil || !strings.Contains(err.Error(), "is not a file of text") {
		t.Errorf("folder: %v", err)
	}
	name := write(t, filepath.Join(dir, "gone.plight"), "")
	if _, err := s.Read(name); err != nil {
		t.Fatal(err)
	}
	if err := os.Remove(name); err != nil {
		t.Fatal(err)
	}
	if _, err := s.Read(name); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("a file that vanished: %v", err)
	}
}

func TestReaderTakesEitherSlash(t *testing.T) {
	dir := t.TempDir()
	name := write(t, filepath.Join(dir, "lib", "real.plight"), "let x = 1\n")
	read := NewStore().View().Reader()
	for _, path := range []string{"lib/real.plight", `lib\real.plight`} {
		if f, err := read(dir + "/" + path); err != nil || f.Name != name {
			t.Errorf("%s: %v", path, err)
		}
	}
	if _, err := read("real.plight"); err == nil || !strings.Contains(err.Error(), "not saved in a folder") {
		t.Errorf("a relative path: %v", err)
	}
}

func mustRead(t *testing.T, view *View, name string) *dialect.File {
	t.Helper()
	f, err := view.Read(name)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func TestViewRemembersWhatWasAsked(t *testing.T) {
	dir := t.TempDir()
	main := write(t, filepath.Join(dir, "main.plight"), "use \"real.plight\"\n")
	write(t, filepath.Join(dir, "real.plight"), "")
	view := NewStore().View()
	if c := dialect.Check(mustRead(t, view, main), view.Reader()); len(c.Files) != 2 {
		t.Errorf("%d files were read", len(c.Files))
	}
	if _, err := view.Reader()(filepath.Join(dir, "missing.plight")); err == nil {
		t.Error("no error for a missing file")
	}
	want := []string{main, filepath.Join(dir, "missing.plight"), filepath.Join(dir, "real.plight")}
	if got := view.Names(); !slices.Equal(got, want) {
		t.Errorf("asked %v, want %v", got, want)
	}
}

func TestCollect(t *testing.T) {
	dir := t.TempDir()
	for _, name := range []string{"b.plight", "a.plight", "sub/c.plight", ".hidden/d.plight", "node_modules/e.plight", "notes.txt"} {
		write(t, filepath.Join(dir, filepath.FromSlash(name)), "")
	}
	names, problems := Collect(dir, filepath.Join(dir, "a.plight"), filepath.Join(dir, "notes.txt"), filepath.Join(dir, "none"))
	var got []string
	for _, name := range names {
		rel, _ := filepath.Rel(dir, name)
		got = append(got, filepath.ToSlash(rel))
	}
	if want := []string{"a.plight", "b.plight", "notes.txt", "sub/c.plight"}; !slices.Equal(got, want) {
		t.Errorf("collected %v, want %v", got, want)
	}
	if len(problems) != 1 || !strings.Contains(problems[0].Error(), "there is no such file") {
		t.Errorf("problems %v", problems)
	}
}

// watched starts a watcher and returns a function that waits for the next report.
func watched(t *testing.T) (*Watcher, func() []string) {
	t.Helper()
	reports := make(chan []string, 100)
	w := Watch(func(names []string) { reports <- names }, nil)
	t.Cleanup(w.Close)
	return w, func() []string {
		t.Helper()
		select {
		case names := <-reports:
			return names
		case <-time.After(10 * time.Second):
			t.Fatal("no change was reported within 10 s")
			return nil
		}
	}
}

func TestWatchReportsWritesAndReplacement(t *testing.T) {
	dir := t.TempDir()
	name := write(t, filepath.Join(dir, "a.plight"), "1")
	w, next := watched(t)
	w.AddFolder(dir)
	for i := range 3 { // replaced atomically, again and again
		tmp := write(t, filepath.Join(dir, "a.tmp"), strings.Repeat("x", i))
		if err := os.Rename(tmp, name); err != nil {
			t.Fatal(err)
		}
		if got := next(); !slices.Equal(got, []string{name}) {
			t.Fatalf("replacement %d: reported %v", i, got)
		}
	}
	if err := os.Remove(name); err != nil {
		t.Fatal(err)
	}
	if got := next(); !slices.Equal(got, []string{name}) {
		t.Fatalf("removal: reported %v", got)
	}
}

func TestWatchSettlesBursts(t *testing.T) {
	dir := t.TempDir()
	w, next := watched(t)
	w.AddFolder(dir)
	for i := range 20 {
		write(t, filepath.Join(dir, "a.plight"), strings.Repeat("x", i))
		write(t, filepath.Join(dir, "b.plight"), strings.Repeat("x", i))
	}
	seen := map[string]bool{}
	reports := 0
	for len(seen) < 2 {
		reports++
		for _, name := range next() {
			seen[name] = true
		}
	}
	// On a busy machine the burst itself may pause; it is not told write by write.
	if reports > 10 {
		t.Errorf("a burst of 40 writes was reported in %d parts", reports)
	}
}

func TestWatchTreeTakesInNewFolders(t *testing.T) {
	root := t.TempDir()
	w, next := watched(t)
	w.AddTree(root)
	name := write(t, filepath.Join(root, "x", "y", "new.plight"), "1")
	if got := next(); !slices.Equal(got, []string{name}) {
		t.Fatalf("new folder: reported %v", got)
	}
	write(t, name, "2")
	if got := next(); !slices.Equal(got, []string{name}) {
		t.Fatalf("write in a new folder: reported %v", got)
	}
}

func TestWatchFolderThatComesLater(t *testing.T) {
	root := t.TempDir()
	w, next := watched(t)
	w.AddFolder(filepath.Join(root, "later"))
	name := write(t, filepath.Join(root, "later", "a.plight"), "1")
	if got := next(); !slices.Equal(got, []string{name}) {
		t.Fatalf("reported %v", got)
	}
	if err := os.RemoveAll(filepath.Dir(name)); err != nil {
		t.Fatal(err)
	}
	next()
	write(t, name, "again")
	if got := next(); !slices.Equal(got, []string{name}) {
		t.Fatalf("after the folder went and came back: reported %v", got)
	}
}

func TestPollingAloneSeesChanges(t *testing.T) {
	dir := t.TempDir()
	name := write(t, filepath.Join(dir, "a.plight"), "1")
	w, next := watched(t)
	w.mu.Lock()
	notify := w.notify
	w.notify = nil // as if the system offered no watching
	w.mu.Unlock()
	t.Cleanup(func() { _ = notify.Close() })
	w.AddTree(dir)
	write(t, name, "22")
	if got := next(); !slices.Equal(got, []string{name}) {
		t.Fatalf("reported %v", got)
	}
	inner := write(t, filepath.Join(dir, "sub", "b.plight"), "1")
	if got := next(); !slices.Equal(got, []string{inner}) {
		t.Fatalf("new folder: reported %v", got)
	}
}
