package main

import (
	"fmt"
	"strings"

	"portlight/dialect"
)

// explanation is the page of a finding's code, as text for a terminal.
func explanation(code dialect.Code) (page, bool) {
	e, ok := dialect.Explain(code)
	if !ok {
		return page{}, false
	}
	var b strings.Builder
	fmt.Fprintf(&b, "%s (%s)\n%s\n\n%s\n", e.Code, e.Severity, e.Title, wrapped(e.Meaning))
	if e.Mend != "" {
		fmt.Fprintf(&b, "\nHow to mend it:\n%s\n", wrapped(e.Mend))
	}
	if e.Example != "" {
		fmt.Fprintf(&b, "\nFor example, in\n\n    %s\n", strings.ReplaceAll(strings.TrimRight(e.Example, "\n"), "\n", "\n    "))
		if e.Question != "" {
			fmt.Fprintf(&b, "\nthe question %s is refused with it.\n", e.Question)
		}
	}
	return page{e.Title, b.String()}, true
}

// pageWidth is how wide explanations are set.
const pageWidth = 88

// wrapped sets a paragraph in lines of at most pageWidth characters.
func wrapped(text string) string {
	var b strings.Builder
	column := 0
	for i, word := range strings.Fields(text) {
		n := len([]rune(word))
		switch {
		case i > 0 && column+1+n > pageWidth:
			b.WriteByte('\n')
			column = 0
		case i > 0:
			b.WriteByte(' ')
			column++
		}
		b.WriteString(word)
		column += n
	}
	return b.String()
}
