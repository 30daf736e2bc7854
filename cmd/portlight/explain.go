package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"portlight/dialect"
)

func newExplain(std streams) *cobra.Command {
	return &cobra.Command{
		Use:   "explain CODE",
		Short: "What a finding means, and how to mend it",
		Args:  cobra.MaximumNArgs(1),
		RunE: func(_ *cobra.Command, args []string) error {
			if len(args) == 0 {
				fmt.Fprintln(std.out, "The codes are:")
				for _, e := range dialect.Explanations() {
					fmt.Fprintf(std.out, "  %-26s %s\n", e.Code, e.Title)
				}
				return nil
			}
			page, ok := explanation(dialect.Code(args[0]))
			if !ok {
				return fmt.Errorf("there is no finding %q%s", args[0], similarCode(args[0]))
			}
			fmt.Fprint(std.out, page.text)
			return nil
		},
	}
}

// page is the explanation of a code as text.
type page struct{ title, text string }

// similarCode offers codes that share a word with what was asked for.
func similarCode(asked string) string {
	var near []string
	for _, e := range dialect.Explanations() {
		for _, word := range strings.FieldsFunc(strings.ToLower(asked), func(r rune) bool { return r < 'a' || r > 'z' }) {
			if len(word) > 2 && strings.Contains(string(e.Code), word) {
				near = append(near, string(e.Code))
				break
			}
		}
	}
	if len(near) == 0 {
		return "; `portlight explain` lists them all"
	}
	return "; did you mean " + orList(near) + "?"
}
