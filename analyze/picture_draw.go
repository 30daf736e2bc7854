package analyze

import (
	"bytes"
	"context"
	"fmt"
	"image/color"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"
)

// The look of pictures: dark ink on warm paper, hairlines for the grid, a few
// muted colours that differ in lightness too, so that they can be told apart
// without seeing colour.
var (
	paper   = color.NRGBA{0xfc, 0xfa, 0xf5, 0xff}
	ink     = color.NRGBA{0x2a, 0x2f, 0x36, 0xff}
	hair    = color.NRGBA{0xdd, 0xd8, 0xcc, 0xff}
	faint   = color.NRGBA{0xee, 0xea, 0xe1, 0xff}
	strokes = []color.NRGBA{
		{0x0f, 0x5c, 0x63, 0xff}, // deep teal
		{0xc4, 0x6a, 0x2d, 0xff}, // rust
		{0x8a, 0x94, 0xb8, 0xff}, // slate
		{0x7d, 0x3c, 0x6b, 0xff}, // plum
	}
	dashes = [][]vg.Length{nil, {5, 3}, {1.5, 2.5}, {7, 2, 1.5, 2}}
)

// HoverWidth and HoverHeight are the size in pixels of a picture in a hover;
// FileWidth and FileHeight of one in a file, where nothing else is asked for.
const (
	HoverWidth, HoverHeight = 700, 180
	FileWidth, FileHeight   = 960, 640
)

// PictureSVG draws an answer as an SVG document of a size in pixels.
func PictureSVG(answer Answer, width, height int) ([]byte, error) {
	p, err := PictureOf(context.Background(), answer)
	if err != nil {
		return nil, err
	}
	return p.SVG(width, height)
}

// CurveSVG draws one curve as an SVG document of a size in pixels.
func CurveSVG(c PlotCurve, width, height int) ([]byte, error) {
	return (&Picture{Title: c.Title, Panels: []PlotCurve{c}}).SVG(width, height)
}

// pixel is the length of a pixel at 96 pixels to the inch.
const pixel = vg.Inch / 96

// SVG draws the picture as an SVG document of a size in pixels.
func (p *Picture) SVG(width, height int) ([]byte, error) {
	canvas := vgsvg.New(vg.Length(width)*pixel, vg.Length(height)*pixel)
	if err := p.draw(draw.New(canvas)); err != nil {
		return nil, err
	}
	var b bytes.Buffer
	_, err := canvas.WriteTo(&b)
	return b.Bytes(), err
}

// PNG draws the picture as a PNG image of a size in pixels.
func (p *Picture) PNG(width, height int) ([]byte, error) {
	canvas := vgimg.NewWith(vgimg.UseWH(vg.Length(width)*pixel, vg.Length(height)*pixel), vgimg.UseDPI(96))
	if err := p.draw(draw.New(canvas)); err != nil {
		return nil, err
	}
	var b bytes.Buffer
	_, err := vgimg.PngCanvas{Canvas: canvas}.WriteTo(&b)
	return b.Bytes(), err
}

// draw fills a canvas: the panels side by side where it is wide, else one
// above the other.
func (p *Picture) draw(c draw.Canvas) error {
	c.SetColor(paper)
	c.Fill(c.Rectangle.Path())
	size := c.Rectangle.Size()
	var plots []*plot.Plot
	if p.Roots != nil {
		q, err := p.Roots.plot(size.X, size.Y)
		if err != nil {
			return err
		}
		plots = append(plots, q)
	}
	for _, panel := range p.Panels {
		q, err := panel.plot()
		if err != nil {
			return err
		}
		plots = append(plots, q)
	}
	if len(plots) == 0 {
		return ErrNoPicture
	}
	n := vg.Length(len(plots))
	for i, q := range plots {
		box := c
		at := vg.Length(i)
		if size.X > 2.2*size.Y {
			box = draw.Crop(c, at*size.X/n, -(n-1-at)*size.X/n, 0, 0)
		} else {
			box = draw.Crop(c, 0, 0, (n-1-at)*size.Y/n, -at*size.Y/n)
		}
		q.Draw(draw.Crop(box, 6, -10, 4, -6))
	}
	return nil
}

// newPlot is an empty plot in the project's look.
func newPlot() *plot.Plot {
	p := plot.New()
	p.TextHandler = text.Plain{Fonts: font.DefaultCache}
	p.BackgroundColor = paper
	face := font.Font{Typeface: "Liberation", Variant: "Sans", Size: 9}
	p.Title.TextStyle.Font, p.Title.TextStyle.Color = face, ink
	p.Title.TextStyle.Font.Size = 10
	p.Title.Padding = 4
	for _, a := range []*plot.Axis{&p.X, &p.Y} {
		a.Color, a.Label.TextStyle.Color, a.Tick.Color, a.Tick.Label.Color = ink, ink, ink, ink
		a.Label.TextStyle.Font, a.Tick.Label.Font = face, face
		a.LineStyle.Width, a.Tick.LineStyle.Width = 0.5, 0.5
		a.Tick.Length, a.Padding = 3, 3
	}
	p.Legend.TextStyle.Font, p.Legend.TextStyle.Color = face, ink
	p.Legend.Top = true
	p.Legend.ThumbnailWidth = 18
	return p
}

// plot makes a panel of curves. Gaps (values that are no numbers) stay gaps.
func (c PlotCurve) plot() (*plot.Plot, error) {
	p := newPlot()
	p.Title.Text = c.Title
	p.X.Tick.Marker = unitTicks{c.XLabel}
	if c.LogX {
		p.X.Scale, p.X.Tick.Marker = plot.LogScale{}, decadeTicks{c.XLabel}
	}
	p.Y.Tick.Marker = unitTicks{c.YLabel}
	logY := c.LogX && c.YLabel != "dB" && c.YLabel != "°" && positive(c.Y)
	if logY {
		p.Y.Scale, p.Y.Tick.Marker = plot.LogScale{}, decadeTicks{c.YLabel}
	}
	grid := plotter.NewGrid()
	grid.Vertical = draw.LineStyle{Color: hair, Width: 0.5}
	grid.Horizontal = grid.Vertical
	p.Add(grid)
	drawn := false
	for i, y := range c.Y {
		name := ""
		if i < len(c.Names) && len(c.Y) > 1 {
			name = c.Names[i]
		}
		for _, run := range runs(c.X, y) {
			line, err := plotter.NewLine(run)
			if err != nil {
				return nil, fmt.Errorf("drawing %s: %w", c.Title, err)
			}
			line.LineStyle = draw.LineStyle{Color: strokes[i%len(strokes)], Width: 1.4, Dashes: dashes[i%len(dashes)]}
			p.Add(line)
			drawn = true
			if name != "" {
				p.Legend.Add(name, line)
				name = ""
			}
		}
	}
	if !drawn {
		return nil, fmt.Errorf("drawing %s: nothing in it is a number", c.Title)
	}
	settleRange(&p.Y, logY)
	return p, nil
}

// runs are the stretches of a curve without gaps.
func runs(x, y []float64) []plotter.XYs {
	var out []plotter.XYs
	var run plotter.XYs
	for i := range x {
		if math.IsNaN(y[i]) || math.IsInf(y[i], 0) {
			if len(run) > 1 {
				out = append(out, run)
			}
			run = nil
			continue
		}
		run = append(run, plotter.XY{X: x[i], Y: y[i]})
	}
	if len(run) > 1 {
		out = append(out, run)
	}
	return out
}

func positive(list [][]float64) bool {
	for _, y := range list {
		for _, v := range y {
			if !math.IsNaN(v) && !(v > 0) {
				return false
			}
		}
	}
	return true
}

// settleRange leaves a little room above and below, and opens up the range of
// a constant.
func settleRange(a *plot.Axis, logarithmic bool) {
	if logarithmic {
		if a.Max < 2*a.Min {
			middle := math.Sqrt(a.Min * a.Max)
			a.Min, a.Max = middle/2, middle*2
		}
		return
	}
	room := 0.05 * (a.Max - a.Min)
	if size := math.Max(math.Abs(a.Max), math.Abs(a.Min)); !(room > 1e-6*size) {
		room = 0.1 * size
	}
	if room == 0 {
		room = 1
	}
	a.Min, a.Max = a.Min-room, a.Max+room
}

// plot draws the roots: crosses for poles, rings for zeros, the imaginary
// axis marked, the same scale both ways.
func (m *RootMap) plot(width, height vg.Length) (*plot.Plot, error) {
	p := newPlot()
	p.X.Tick.Marker, p.Y.Tick.Marker = unitTicks{"rad/s"}, unitTicks{"rad/s"}
	reach := 0.0
	for _, list := range [][]complex128{m.Poles, m.Zeros} {
		for _, z := range list {
			reach = math.Max(reach, math.Max(math.Abs(real(z)), math.Abs(imag(z))))
		}
	}
	if reach == 0 {
		reach = 1
	}
	reach *= 1.15
	aspect := float64(width / height)
	p.X.Min, p.X.Max, p.Y.Min, p.Y.Max = -reach*math.Max(1, aspect), reach*math.Max(1, aspect), -reach/math.Min(1, aspect), reach/math.Min(1, aspect)
	axes := plotter.XYs{{X: 0, Y: p.Y.Min}, {X: 0, Y: p.Y.Max}}
	across := plotter.XYs{{X: p.X.Min, Y: 0}, {X: p.X.Max, Y: 0}}
	for _, l := range []plotter.XYs{axes, across} {
		line, err := plotter.NewLine(l)
		if err != nil {
			return nil, err
		}
		line.LineStyle = draw.LineStyle{Color: hair, Width: 1}
		p.Add(line)
	}
	for _, set := range []struct {
		roots []complex128
		count []int
		shape draw.GlyphDrawer
		color color.Color
	}{{m.Poles, m.PoleCount, draw.CrossGlyph{}, strokes[0]}, {m.Zeros, m.ZeroCount, draw.RingGlyph{}, strokes[1]}} {
		if len(set.roots) == 0 {
			continue
		}
		var at plotter.XYs
		labels := plotter.XYLabels{}
		for i, z := range set.roots {
			at = append(at, plotter.XY{X: real(z), Y: imag(z)})
			if set.count[i] > 1 {
				labels.XYs = append(labels.XYs, plotter.XY{X: real(z), Y: imag(z)})
				labels.Labels = append(labels.Labels, fmt.Sprintf("  %d-fold", set.count[i]))
			}
		}
		scatter, err := plotter.NewScatter(at)
		if err != nil {
			return nil, err
		}
		scatter.GlyphStyle = draw.GlyphStyle{Color: set.color, Radius: 4, Shape: set.shape}
		p.Add(scatter)
		if len(labels.Labels) > 0 {
			notes, err := plotter.NewLabels(labels)
			if err != nil {
				return nil, err
			}
			p.Add(notes)
		}
	}
	return p, nil
}
