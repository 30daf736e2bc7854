package main

import (
	"bytes"
	"fmt"
	"os"
	"path/filepath"

	"github.com/spf13/cobra"

	"portlight/dialect"
)

func newTidy(std streams) *cobra.Command {
	var write bool
	c := &cobra.Command{
		Use:   "tidy FILE…",
		Short: "Show files in canonical form, or write them so",
		Long: `Prints each file in canonical form; with -w writes it back where it differs.
Comments and blank lines stay; a statement that cannot be read stays as it is.`,
		Args: takes(1, -1),
		RunE: func(_ *cobra.Command, paths []string) error {
			return tidy(std, paths, write)
		},
	}
	c.Flags().BoolVarP(&write, "write", "w", false, "write the files instead of printing them")
	return c
}

func tidy(std streams, paths []string, write bool) error {
	src := newSources(std)
	names, readable := src.names(paths)
	for _, name := range names {
		file, err := src.store.Read(name)
		if err != nil {
			fmt.Fprintln(std.err, "portlight: "+err.Error())
			readable = false
			continue
		}
		text := dialect.Tidy(file)
		switch {
		case !write || name == src.stdin:
			fmt.Fprint(std.out, text)
		case text != file.Text:
			if err := replaceFile(name, []byte(text)); err != nil {
				fmt.Fprintln(std.err, "portlight: "+err.Error())
				readable = false
				continue
			}
			fmt.Fprintln(std.out, src.shown(name))
		}
	}
	if !readable {
		return status(exitNotRun)
	}
	return nil
}

// replaceFile writes a file anew so that a reader or a crash in between finds
// the old text or the new one, never a part. A symbolic link stays one.
func replaceFile(name string, data []byte) error {
	target, err := filepath.EvalSymlinks(name)
	if err != nil {
		return err
	}
	info, err := os.Stat(target)
	if err != nil {
		return err
	}
	if old, err := os.ReadFile(target); err == nil && bytes.Equal(old, data) {
		return nil
	}
	temporary, err := os.CreateTemp(filepath.Dir(target), ".tidy-*")
	if err != nil {
		return err
	}
	defer os.Remove(temporary.Name())
	_, err = temporary.Write(data)
	if e := temporary.Chmod(info.Mode().Perm()); err == nil {
		err = e
	}
	if e := temporary.Sync(); err == nil {
		err = e
	}
	if e := temporary.Close(); err == nil {
		err = e
	}
	if err != nil {
		return err
	}
	return os.Rename(temporary.Name(), target)
}
