package main

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"portlight/analyze"
)

// pictureSize is the size of a picture in pixels.
type pictureSize struct{ width, height int }

// The sizes in pixels that a picture can have.
const (
	leastPixels = 120
	mostPixels  = 8000
)

func newPicture(std streams) *cobra.Command {
	var output string
	size := pictureSize{analyze.FileWidth, analyze.FileHeight}
	c := &cobra.Command{
		Use:   "picture FILE QUESTION -o FILE.svg|FILE.png",
		Short: "Draw a function, a signal, a range or roots",
		Args:  takes(2, 2),
		RunE: func(c *cobra.Command, args []string) error {
			return picture(c.Context(), std, args[0], args[1], output, size)
		},
	}
	c.Flags().StringVarP(&output, "output", "o", "", "the picture's file, ending .svg or .png")
	c.Flags().IntVar(&size.width, "width", size.width, "width in pixels")
	c.Flags().IntVar(&size.height, "height", size.height, "height in pixels")
	return c
}

func picture(ctx context.Context, std streams, path, question, output string, size pictureSize) error {
	if output == "" {
		return fmt.Errorf("where to? Name the picture's file: -o FILE.svg or -o FILE.png")
	}
	form := strings.ToLower(filepath.Ext(output))
	if form != ".svg" && form != ".png" {
		return fmt.Errorf("%s: the name of a picture ends in .svg or .png", output)
	}
	for _, n := range []int{size.width, size.height} {
		if n < leastPixels || n > mostPixels {
			return fmt.Errorf("a picture is between %d and %d pixels wide and high", leastPixels, mostPixels)
		}
	}
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
	p.at("answering %s", question)
	drawing, answer, err := analysis.Picture(ctx, question)
	if refused, ok := answer.(*analyze.RefusedAnswer); ok {
		if err := warnAboutFaults(ctx, std.err, src, name, analysis); err != nil {
			return err
		}
		fmt.Fprintln(std.err, "portlight: no answer: "+refused.Why)
		return status(exitFaults)
	}
	if err != nil {
		return err
	}
	p.at("drawing %s", output)
	draw := drawing.SVG
	if form == ".png" {
		draw = drawing.PNG
	}
	data, err := draw(size.width, size.height)
	if err != nil {
		return err
	}
	return os.WriteFile(output, data, 0o666)
}
