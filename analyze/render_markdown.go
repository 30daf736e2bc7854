package analyze

import (
	"context"
	"strings"
)

// The Markdown view: for hovers and reports. Formulas are Unicode text; code
// spans keep their spacing.

// Markdown tells an answer as Markdown: the question as a heading line, the
// answer in bold, the detail as text, tables as tables.
func Markdown(answer Answer) string { return markdown(context.Background(), answer) }

// MarkdownContext is Markdown with a way to stop it; the error is the context's.
func MarkdownContext(ctx context.Context, answer Answer) (string, error) {
	text := markdown(ctx, answer)
	return text, ctx.Err()
}

func markdown(ctx context.Context, answer Answer) string {
	var b strings.Builder
	b.WriteString("**" + escape(answer.Asked()) + "**\n\n")
	switch a := answer.(type) {
	case *TableAnswer:
		writeTable(&b, tableCells(a))
		return b.String() + remarkText(a.Remarks)
	case *InitialAnswer:
		cells := [][]string{{"part", "before 0", "after 0"}}
		for _, p := range a.Parts {
			unit := p.Dimension.Unit()
			cells = append(cells, []string{p.Part, exactFigure(p.Before, unit), exactFigure(p.After, unit)})
		}
		writeTable(&b, cells)
		return b.String() + remarkText(a.Remarks)
	}
	lines, remarks := wordsOf(ctx, answer)
	for _, l := range lines {
		l = strings.TrimRight(l, " ")
		indented := strings.HasPrefix(l, "  ")
		l = escape(strings.TrimSpace(l))
		switch {
		case indented:
			b.WriteString("  - " + l + "\n")
		case len(lines) == 1:
			b.WriteString(l + "\n")
		default:
			b.WriteString("- " + l + "\n")
		}
	}
	return b.String() + remarkText(remarks)
}

func remarkText(remarks []string) string {
	var b strings.Builder
	for _, r := range remarks {
		b.WriteString("\n*" + escape(r) + "*\n")
	}
	return b.String()
}

// tableCells are a table's title and every row.
func tableCells(a *TableAnswer) [][]string {
	title := make([]string, len(a.Columns))
	for i, c := range a.Columns {
		title[i] = columnTitle(c)
	}
	cells := [][]string{title}
	for _, r := range a.Rows {
		row := make([]string, len(r))
		for j, ball := range r {
			row[j] = figure(ball, columnUnit(a.Columns[j]))
		}
		cells = append(cells, row)
	}
	return cells
}

func writeTable(b *strings.Builder, rows [][]string) {
	for i, r := range rows {
		b.WriteString("|")
		for _, c := range r {
			b.WriteString(" " + strings.ReplaceAll(escape(c), "|", "\\|") + " |")
		}
		b.WriteString("\n")
		if i == 0 {
			b.WriteString("|" + strings.Repeat(" ---: |", len(r)) + "\n")
		}
	}
}

// escape keeps Markdown from reading marks in plain text.
func escape(s string) string {
	return strings.NewReplacer("\\", "\\\\", "*", "\\*", "_", "\\_", "`", "\\`", "[", "\\[", "]", "\\]", "<", "&lt;").Replace(s)
}
