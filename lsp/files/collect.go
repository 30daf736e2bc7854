package files

import (
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
)

// Collect lists the network files that paths stand for: a file stands for
// itself whatever its name, a folder for every network file in it and below.
// Folders whose name begins with a dot, and node_modules, are left out.
// Names are absolute, in order and each once. Paths that cannot be read are
// in problems, one error each.
func Collect(paths ...string) (names []string, problems []error) {
	seen := map[string]bool{}
	add := func(name string) {
		if !seen[name] {
			seen[name] = true
			names = append(names, name)
		}
	}
	for _, path := range paths {
		name, err := filepath.Abs(path)
		if err != nil {
			problems = append(problems, fmt.Errorf("%s: %w", path, err))
			continue
		}
		info, err := os.Stat(name)
		switch {
		case err != nil:
			problems = append(problems, plain(path, err))
		case !info.IsDir():
			add(name)
		default:
			problems = append(problems, walk(name, add)...)
		}
	}
	slices.Sort(names)
	return names, problems
}

// walk calls add for every network file below root.
func walk(root string, add func(string)) (problems []error) {
	err := filepath.WalkDir(root, func(path string, entry fs.DirEntry, err error) error {
		switch {
		case err != nil:
			problems = append(problems, plain(path, err))
			if entry != nil && entry.IsDir() {
				return fs.SkipDir
			}
		case entry.IsDir():
			if path != root && leftOut(entry.Name()) {
				return fs.SkipDir
			}
		case IsNetwork(path):
			if info, err := os.Stat(path); err == nil && info.Mode().IsRegular() {
				add(path)
			}
		}
		return nil
	})
	if err != nil {
		problems = append(problems, plain(root, err))
	}
	return problems
}

// leftOut says that a folder below a root is not searched.
func leftOut(name string) bool {
	return strings.HasPrefix(name, ".") || name == "node_modules"
}

// folders lists root and the folders below it that are searched.
func folders(root string) []string {
	var list []string
	_ = filepath.WalkDir(root, func(path string, entry fs.DirEntry, err error) error {
		switch {
		case err != nil || !entry.IsDir():
			return nil
		case path != root && leftOut(entry.Name()):
			return fs.SkipDir
		}
		list = append(list, path)
		return nil
	})
	return list
}
