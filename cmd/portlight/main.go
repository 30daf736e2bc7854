// Command portlight answers questions about linear networks written in the
// Portlight notation: as a language server for editors, and on the command
// line for people, scripts and continuous integration.
package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/signal"
	"runtime/debug"
	"strings"
	"syscall"

	"github.com/spf13/cobra"
)

// Exit statuses.
const (
	exitFine   = 0 // it ran, and nothing is wrong
	exitFaults = 1 // it ran, and something is wrong: an error in a text, a question without an answer
	exitNotRun = 2 // it could not run: wrong use, a file that cannot be read, interrupted
)

// status is an error that carries an exit status and says nothing more.
type status int

// Error implements error.
func (s status) Error() string { return fmt.Sprintf("exit status %d", int(s)) }

// streams are where a command reads and writes.
type streams struct {
	in       io.Reader
	out, err io.Writer
}

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	code := run(ctx, os.Args[1:], streams{os.Stdin, os.Stdout, os.Stderr})
	stop()
	os.Exit(code)
}

// run is the whole command; it gives the exit status. A defect of the
// program is told as one, with what a maintainer needs, never as a crash.
func run(ctx context.Context, args []string, std streams) (code int) {
	defer func() {
		if fault := recover(); fault != nil {
			fmt.Fprintf(std.err, "portlight: this is a defect of the program, please report it: %v\n%s", fault, debug.Stack())
			code = exitNotRun
		}
	}()
	root := newRoot(std)
	root.SetArgs(args)
	root.SetIn(std.in)
	root.SetOut(std.out)
	root.SetErr(std.err)
	err := root.ExecuteContext(ctx)
	var s status
	switch {
	case err == nil:
		return exitFine
	case errors.As(err, &s):
		return int(s)
	case errors.Is(err, context.Canceled):
		fmt.Fprintln(std.err, "portlight: interrupted")
	default:
		fmt.Fprintln(std.err, "portlight: "+err.Error())
	}
	return exitNotRun
}

// newRoot builds the tree of commands.
func newRoot(std streams) *cobra.Command {
	root := &cobra.Command{
		Use:           "portlight",
		Short:         "Answers about linear networks, from text",
		Long:          rootHelp,
		SilenceErrors: true,
		SilenceUsage:  true,
		Args:          noSuchCommand,
		RunE:          func(c *cobra.Command, _ []string) error { return c.Help() },
		Version:       version(),
	}
	root.CompletionOptions.HiddenDefaultCmd = true
	root.SetVersionTemplate("portlight {{.Version}}\n")
	root.AddCommand(
		newServe(std), newCheck(std), newTell(std), newTidy(std),
		newWatch(std), newPicture(std), newExplain(std),
	)
	return root
}

const rootHelp = `Portlight reads linear networks from .plight files and answers what they do:
impedances, network functions, poles, signals in closed form, limits.

A PATH is a file, a folder (every .plight file in it and below) or - for
standard input. A QUESTION is what may follow "tell" in a file:
'z[valve] at 1 kHz', 'v[coil] at 2 ms', 'poles of H'.

Exit status: 0 fine, 1 something is wrong in a text or has no answer, 2 not run.`

// noSuchCommand refuses a word that is no command.
func noSuchCommand(c *cobra.Command, args []string) error {
	if len(args) == 0 {
		return nil
	}
	var names []string
	for _, sub := range c.Commands() {
		if !sub.Hidden && sub.Name() != "help" {
			names = append(names, sub.Name())
		}
	}
	return fmt.Errorf("there is no command %q; the commands are %s", args[0], list(names))
}

// takes checks how many words follow a command; most is -1 for any number.
func takes(least, most int) cobra.PositionalArgs {
	return func(c *cobra.Command, args []string) error {
		switch n := len(args); {
		case n < least:
			return fmt.Errorf("something is missing: portlight %s", c.Use)
		case most >= 0 && n > most:
			return fmt.Errorf("%q is too much: portlight %s", args[most], c.Use)
		}
		return nil
	}
}

// version is what the build says about itself.
func version() string {
	info, ok := debug.ReadBuildInfo()
	if !ok || info.Main.Version == "" || info.Main.Version == "(devel)" {
		return "(built from source)"
	}
	return info.Main.Version
}

// formats is a --as flag that takes only the words given.
type formats struct {
	value   string
	allowed []string
}

// String implements pflag.Value.
func (f *formats) String() string { return f.value }

// Type implements pflag.Value; it is shown in the help.
func (f *formats) Type() string { return "FORM" }

// Set implements pflag.Value.
func (f *formats) Set(s string) error {
	for _, a := range f.allowed {
		if s == a {
			f.value = s
			return nil
		}
	}
	return fmt.Errorf("the forms are %s", orList(f.allowed))
}

func asFlag(c *cobra.Command, allowed ...string) *formats {
	f := &formats{value: allowed[0], allowed: allowed}
	c.Flags().Var(f, "as", "write the result as "+orList(allowed))
	return f
}

// orList and list join words as prose does.
func orList(words []string) string { return joined(words, " or ") }
func list(words []string) string   { return joined(words, " and ") }

func joined(words []string, last string) string {
	n := len(words)
	if n < 2 {
		return strings.Join(words, "")
	}
	return strings.Join(words[:n-1], ", ") + last + words[n-1]
}
