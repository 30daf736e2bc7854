package lsp

import (
	"context"
	"path/filepath"
	"strings"

	"go.lsp.dev/protocol"
	"go.lsp.dev/uri"
)

// willRenameFiles handles workspace/willRenameFiles: use statements follow
// the files that they name, and those of a moved file stay right.
func willRenameFiles(ctx context.Context, r *request, p *protocol.RenameFilesParams) (*protocol.WorkspaceEdit, error) {
	moved := func(name string) string {
		for _, f := range p.Files {
			from, to := r.mapper.name(uri.URI(f.OldURI)), r.mapper.name(uri.URI(f.NewURI))
			if name == from {
				return to
			}
			if rest, inside := strings.CutPrefix(name, from+string(filepath.Separator)); inside {
				return filepath.Join(to, rest)
			}
		}
		return name
	}
	changes := edits{}
	for _, name := range r.workspaceFiles() {
		if ctx.Err() != nil {
			return nil, ctx.Err()
		}
		checked, _ := r.unit(name).check()
		if checked == nil || !isPath(name) {
			continue
		}
		for _, link := range checked.Links(checked.Main) {
			if link.File == nil {
				continue
			}
			home, target := moved(name), moved(link.File.Name)
			if home == name && target == link.File.Name {
				continue
			}
			old := strings.Trim(checked.Main.Text[link.Span.Start:link.Span.End], `"`)
			if path, err := filepath.Rel(filepath.Dir(home), target); err == nil && filepath.ToSlash(path) != old && !filepath.IsAbs(old) {
				changes.add(checked.Main, link.Span, `"`+filepath.ToSlash(path)+`"`)
			}
		}
	}
	if len(changes) == 0 {
		return nil, nil
	}
	return r.workspaceEdit(changes), nil
}
