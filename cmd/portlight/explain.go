package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"portlight/dialect"
)

func newExplain(std streams) *cobra.Command {
	return &cobra.Command{
		Use:   "explain [CODE]",
		Short: "What a finding means, and how to mend it",
		Args:  takes(0, 1),
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

// lineWidth is how wide explanations are set.
const lineWidth = 78

// explanation gives the page of a code.
func explanation(code dialect.Code) (page, bool) {
	e, ok := dialect.Explain(code)
	if !ok {
		return page{}, false
	}
	var b strings.Builder
	fmt.Fprintf(&b, "%s  (%s)\n%s\n\n", e.Code, e.Severity, e.Title)
	b.WriteString(wrapped(e.Meaning, lineWidth))
	if e.Mend != "" {
		b.WriteString("\n" + wrapped("To mend it: "+e.Mend, lineWidth))
	}
	if e.Example != "" {
		b.WriteString("\nA file that has it:\n\n")
		for _, l := range strings.Split(strings.TrimRight(e.Example, "\n"), "\n") {
			b.WriteString(strings.TrimRight("    "+l, " ") + "\n")
		}
	}
	if e.Question != "" {
		fmt.Fprintf(&b, "\nasked: %s\n", e.Question)
	}
	return page{e.Title, b.String()}, true
}

// wrapped sets a paragraph in lines of at most a width, where words allow.
func wrapped(text string, width int) string {
	var b strings.Builder
	at := 0
	for _, word := range strings.Fields(text) {
		n := len([]rune(word))
		switch {
		case at == 0:
		case at+1+n > width:
			b.WriteString("\n")
			at = 0
		default:
			b.WriteString(" ")
			at++
		}
		b.WriteString(word)
		at += n
	}
	b.WriteString("\n")
	return b.String()
}
