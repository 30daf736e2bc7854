package main

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"portlight/dialect"
)

func newExplain(std streams) *cobra.Command {
	return &cobra.Command{
		Use:   "explain [CODE|WORD]",
		Short: "What a finding means, and how to mend it",
		Long: `Explains the code of a finding, or a word of the notation: a part kind, a unit,
a statement, a function or measure. Without a word it lists the codes; with
"measures" the functions and measures.`,
		Args: takes(0, 1),
		RunE: func(_ *cobra.Command, args []string) error {
			if len(args) == 0 {
				fmt.Fprintln(std.out, "Words of the notation are explained too; `portlight explain measures` lists functions\nand measures. The codes of findings are:")
				for _, e := range dialect.Explanations() {
					fmt.Fprintf(std.out, "  %-26s %s\n", e.Code, e.Title)
				}
				return nil
			}
			if args[0] == "measures" {
				listMeasures(std.out)
				return nil
			}
			page, ok := explanation(dialect.Code(args[0]))
			if !ok {
				page, ok = wordPage(args[0])
			}
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

// listMeasures lists the functions and measures of the notation.
func listMeasures(to io.Writer) {
	for _, s := range dialect.Signatures() {
		form := s.Name + "(" + strings.Join(s.Parameters, ", ") + ")"
		fmt.Fprintf(to, "%s\n%s\n", form, indented(s.Definition, "    "))
	}
}

// wordPage explains a word of the notation.
func wordPage(word string) (page, bool) {
	e, ok := dialect.ExplainWord(word)
	if !ok {
		return page{}, false
	}
	text := word + ": " + e.Title + "\n\n" + indented(e.Meaning, "") + "\n"
	if e.Example != "" {
		text += "\nFor example:\n\n" + indentLines(e.Example, "    ") + "\n"
	}
	return page{e.Title, text}, true
}

// indented sets a paragraph in lines, each after an indent.
func indented(text, indent string) string {
	return indent + strings.ReplaceAll(strings.TrimRight(wrapped(text, lineWidth-len(indent)), "\n"), "\n", "\n"+indent)
}

// indentLines puts an indent before every line as it is.
func indentLines(text, indent string) string {
	return indent + strings.ReplaceAll(strings.TrimRight(text, "\n"), "\n", "\n"+indent)
}

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
