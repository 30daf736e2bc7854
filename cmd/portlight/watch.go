package main

import (
	"context"
	"fmt"
	"path/filepath"
	"slices"
	"time"

	"github.com/spf13/cobra"

	"portlight/lsp/files"
)

func newWatch(std streams) *cobra.Command {
	return &cobra.Command{
		Use:   "watch PATH…",
		Short: "Check again at every change, until interrupted",
		Args:  takes(1, -1),
		RunE: func(c *cobra.Command, paths []string) error {
			return watch(c.Context(), std, paths)
		},
	}
}

// watch checks files, and again whenever they or the files they use change.
func watch(ctx context.Context, std streams, paths []string) error {
	for _, p := range paths {
		if p == "-" {
			return fmt.Errorf("standard input cannot be watched")
		}
	}
	if _, problems := files.Collect(paths...); len(problems) > 0 {
		return problems[0]
	}
	src := newSources(std)
	changes := make(chan []string, 16)
	watcher := files.Watch(func(names []string) {
		select {
		case changes <- names:
		case <-ctx.Done():
		}
	}, func(sentence string) { fmt.Fprintln(std.err, "portlight: "+sentence) })
	defer watcher.Close()
	for {
		watched, err := checkWatched(ctx, std, src, watcher, paths)
		if err != nil {
			return nil // interrupted, which is how watching ends
		}
		if !waitForChange(ctx, src, changes, watched, paths) {
			return nil
		}
		fmt.Fprintf(std.out, "── changed, %s\n", time.Now().Format("15:04:05"))
	}
}

// checkWatched checks everything once and watches the folders it read from.
// It gives the names of all files that count.
func checkWatched(ctx context.Context, std streams, src *sources, watcher *files.Watcher, paths []string) (map[string]bool, error) {
	for _, p := range paths {
		if name, err := filepath.Abs(p); err == nil {
			if files.IsNetwork(name) {
				watcher.AddFolder(filepath.Dir(name))
			} else {
				watcher.AddTree(name)
			}
		}
	}
	names, _ := files.Collect(paths...)
	watched := map[string]bool{}
	var all []checked
	p := startProgress(std.err)
	defer p.stop()
	for i, name := range names {
		p.at("checking %s, %d of %d", src.shown(name), i+1, len(names))
		watched[name] = true
		analysis, view, err := src.analysis(name)
		for _, used := range view.Names() {
			watched[used] = true
			watcher.AddFolder(filepath.Dir(used))
		}
		if err != nil {
			fmt.Fprintln(std.err, "portlight: "+err.Error())
			continue
		}
		one := checked{name: name}
		if one.findings, err = analysis.Findings(ctx); err != nil {
			return watched, err
		}
		if one.verdicts, err = analysis.Verdicts(ctx); err != nil {
			return watched, err
		}
		all = append(all, one)
	}
	reportText(std.out, src, onceEach(all))
	return watched, nil
}

// waitForChange waits until a file that counts changes, or a new one appears
// under the paths; false when interrupted.
func waitForChange(ctx context.Context, src *sources, changes <-chan []string, watched map[string]bool, paths []string) bool {
	for {
		select {
		case <-ctx.Done():
			return false
		case names := <-changes:
			src.store.Forget(names...)
			now, _ := files.Collect(paths...)
			for _, n := range names {
				if watched[n] || slices.Contains(now, n) {
					return true
				}
			}
		}
	}
}
