package main

import (
	"context"
	"errors"
	"log"
	"os"

	"github.com/spf13/cobra"

	"portlight/lsp"
)

func newServe(std streams) *cobra.Command {
	var verbose bool
	c := &cobra.Command{
		Use:   "serve",
		Short: "Be a language server on standard input and output",
		Args:  takes(0, 0),
		RunE: func(c *cobra.Command, _ []string) error {
			return serve(c.Context(), std, verbose)
		},
	}
	c.Flags().Bool("stdio", true, "use standard input and output (always so)")
	c.Flags().BoolVar(&verbose, "verbose", false, "log to standard error")
	return c
}

func serve(ctx context.Context, std streams, verbose bool) error {
	options := lsp.Options{Version: version()}
	if verbose {
		options.Log = log.New(std.err, "portlight: ", log.LstdFlags)
	}
	lsp.TuneProcess(os.Getenv)
	err := lsp.Serve(ctx, std.in, std.out, options)
	if errors.Is(err, lsp.ErrNoShutdown) {
		// The protocol's own rule for a client that leaves without asking.
		return status(exitFaults)
	}
	return err
}
