package main

import (
	"context"
	"fmt"

	"github.com/spf13/cobra"

	"portlight/analyze"
	"portlight/dialect"
)

func newCheck(std streams) *cobra.Command {
	c := &cobra.Command{
		Use:   "check PATH…",
		Short: "Tell what is wrong, and decide every limit",
		Long: `Reads every file, tells all findings and decides every "require" line.

Exit status: 0 no finding of severity error, 1 some, 2 not run.`,
		Args: takes(1, -1),
	}
	as := asFlag(c, "text", "json", "sarif")
	c.RunE = func(c *cobra.Command, paths []string) error {
		return check(c.Context(), std, paths, as.value)
	}
	return c
}

// checked is what is known about one file after checking it.
type checked struct {
	name     string
	findings []dialect.Finding
	verdicts []analyze.Verdict
}

// check checks files and reports in the form asked for.
func check(ctx context.Context, std streams, paths []string, form string) error {
	src := newSources(std)
	names, readable := src.names(paths)
	p := startProgress(std.err)
	var all []checked
	for i, name := range names {
		p.at("checking %s, %d of %d", src.shown(name), i+1, len(names))
		one, err := checkFile(ctx, src, name)
		if ctx.Err() != nil {
			p.stop()
			return ctx.Err()
		}
		if err != nil {
			p.stop()
			fmt.Fprintln(std.err, "portlight: "+err.Error())
			readable = false
			p = startProgress(std.err)
			continue
		}
		all = append(all, one)
	}
	p.stop()
	all = onceEach(all)
	if len(names) == 0 && readable {
		return fmt.Errorf("no .plight file in %s", orList(paths))
	}
	if len(all) > 0 || form != "text" {
		if err := report(std.out, src, all, form); err != nil {
			return err
		}
	}
	if !readable {
		return status(exitNotRun)
	}
	for _, c := range all {
		for _, f := range c.findings {
			if f.Severity == dialect.Error {
				return status(exitFaults)
			}
		}
	}
	return nil
}

// checkFile checks one file; the error is about reading it.
func checkFile(ctx context.Context, src *sources, name string) (checked, error) {
	analysis, _, err := src.analysis(name)
	if err != nil {
		return checked{}, err
	}
	out := checked{name: name}
	if out.findings, err = analysis.Findings(ctx); err != nil {
		return out, err
	}
	out.verdicts, err = analysis.Verdicts(ctx)
	return out, err
}

// onceEach drops findings that an earlier file has told already: a used file
// is checked by itself too when a folder is.
func onceEach(all []checked) []checked {
	type key struct {
		name, message string
		code          dialect.Code
		span          dialect.Span
	}
	seen := map[key]bool{}
	for i := range all {
		kept := all[i].findings[:0:0]
		for _, f := range all[i].findings {
			k := key{message: f.Message, code: f.Code, span: f.Origin.Span}
			if f.Origin.File != nil {
				k.name = f.Origin.File.Name
			}
			if !seen[k] {
				seen[k] = true
				kept = append(kept, f)
			}
		}
		all[i].findings = kept
	}
	return all
}
