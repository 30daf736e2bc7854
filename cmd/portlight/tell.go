package main

import (
	"context"
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"portlight/analyze"
	"portlight/dialect"
)

func newTell(std streams) *cobra.Command {
	c := &cobra.Command{
		Use:   "tell FILE [QUESTION…]",
		Short: "Answer the file's questions, or the ones given",
		Long: `Answers the "tell" lines of a file, or the questions given instead.

Exit status: 0 all answered, 1 a question has no answer, 2 not run.`,
		Args: takes(1, -1),
	}
	as := asFlag(c, "text", "json", "markdown")
	c.RunE = func(c *cobra.Command, args []string) error {
		return tell(c.Context(), std, args[0], args[1:], as.value)
	}
	return c
}

func tell(ctx context.Context, std streams, path string, questions []string, form string) error {
	src := newSources(std)
	name, err := src.one(path)
	if err != nil {
		return err
	}
	p := startProgress(std.err)
	defer p.stop()
	p.at("reading %s", src.shown(name))
	analysis, _, err := src.analysis(name)
	if err != nil {
		return err
	}
	answers, err := ask(ctx, analysis, questions, p)
	if err != nil {
		return err
	}
	if err := warnAboutFaults(ctx, std.err, src, name, analysis); err != nil {
		return err
	}
	if len(answers) == 0 {
		fmt.Fprintf(std.err, "portlight: %s asks nothing; write tell lines in it, or questions after its name\n", src.shown(name))
	}
	p.at("writing the answers")
	if err := writeAnswers(ctx, std.out, answers, form); err != nil {
		return err
	}
	for _, a := range answers {
		if _, refused := a.(*analyze.RefusedAnswer); refused {
			return status(exitFaults)
		}
	}
	return nil
}

// ask puts the questions given, or those of the file, one after the other.
func ask(ctx context.Context, analysis *analyze.Analysis, questions []string, p *progress) ([]analyze.Answer, error) {
	var answers []analyze.Answer
	for _, q := range questions {
		p.at("answering %s", q)
		a, err := analysis.Ask(ctx, q)
		if err != nil {
			return nil, err
		}
		answers = append(answers, a)
	}
	if len(questions) > 0 {
		return answers, nil
	}
	description := analysis.Checked().Description
	for i := range description.Questions {
		q := &description.Questions[i]
		p.at("answering %s", q.Text)
		a, err := analysis.Answer(ctx, q)
		if err != nil {
			return nil, err
		}
		answers = append(answers, a)
	}
	return answers, nil
}

// warnAboutFaults says on standard error that the file has errors, which may
// be why a question has no answer.
func warnAboutFaults(ctx context.Context, to io.Writer, src *sources, name string, analysis *analyze.Analysis) error {
	findings, err := analysis.Structure(ctx)
	if err != nil {
		return err
	}
	n := 0
	for _, f := range findings {
		if f.Severity == dialect.Error {
			n++
		}
	}
	if n > 0 {
		fmt.Fprintf(to, "portlight: %s in %s; `portlight check` tells them\n", plural(n, "error", "errors"), src.shown(name))
	}
	return nil
}

// writeAnswers writes answers in the form asked for.
func writeAnswers(ctx context.Context, to io.Writer, answers []analyze.Answer, form string) error {
	switch form {
	case "json":
		data, err := analyze.MarshalAnswers(ctx, answers)
		if err != nil {
			return err
		}
		_, err = to.Write(data)
		return err
	case "markdown":
		var parts []string
		for _, a := range answers {
			text, err := analyze.MarkdownContext(ctx, a)
			if err != nil {
				return err
			}
			parts = append(parts, text)
		}
		_, err := io.WriteString(to, strings.Join(parts, "\n"))
		return err
	}
	for i, a := range answers {
		if i > 0 {
			fmt.Fprintln(to)
		}
		fmt.Fprintln(to, clean(a.Asked()))
		lines, err := analyze.WordsContext(ctx, a)
		if err != nil {
			return err
		}
		for _, l := range lines {
			fmt.Fprintln(to, "    "+clean(l))
		}
	}
	return nil
}
