package lsp

import (
	"encoding/base64"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"

	"portlight/analyze"
)

// Size of a small plot in a hover: what fits under a title line.
const (
	brailleColumns, brailleRows = 60, 8 // characters, of 2 × 4 dots
)

// frame maps the values of a curve to 0…1 on both axes.
type frame struct {
	left, right, low, high float64 // of the axes, right in every digit shown
	log                    bool
}

// frameOf fits axes around a curve; ok is false where nothing can be drawn.
func frameOf(c *analyze.PlotCurve) (f frame, ok bool) {
	f = frame{left: math.Inf(1), right: math.Inf(-1), low: math.Inf(1), high: math.Inf(-1), log: c.LogX}
	for i, x := range c.X {
		if f.log && x <= 0 {
			continue
		}
		f.left, f.right = min(f.left, x), max(f.right, x)
		for _, trace := range c.Y {
			if i < len(trace) && !math.IsNaN(trace[i]) && !math.IsInf(trace[i], 0) {
				f.low, f.high = min(f.low, trace[i]), max(f.high, trace[i])
			}
		}
	}
	if !(f.left < f.right) || f.low > f.high {
		return f, false
	}
	f.low, f.high = roundOutward(f.low, f.high)
	return f, true
}

// roundOutward widens a range to multiples of 1, 2 or 5 times a power of ten.
func roundOutward(low, high float64) (float64, float64) {
	if low == high {
		pad := math.Abs(low)
		if pad == 0 {
			pad = 1
		}
		low, high = low-pad/2, high+pad/2
	}
	step := math.Pow(10, math.Floor(math.Log10(high-low)))
	for _, part := range []float64{0.1, 0.2, 0.5} {
		if (high-low)/(step*part) <= 12 {
			step *= part
			break
		}
	}
	return math.Floor(low/step+1e-9) * step, math.Ceil(high/step-1e-9) * step
}

func (f frame) x(v float64) float64 {
	if f.log {
		return math.Log(v/f.left) / math.Log(f.right/f.left)
	}
	return (v - f.left) / (f.right - f.left)
}

func (f frame) y(v float64) float64 { return (v - f.low) / (f.high - f.low) }

// segments calls draw for every line of a trace, in 0…1.
func (f frame) segments(c *analyze.PlotCurve, trace []float64, draw func(x0, y0, x1, y1 float64)) {
	for i := 1; i < len(c.X) && i < len(trace); i++ {
		x0, x1, y0, y1 := c.X[i-1], c.X[i], trace[i-1], trace[i]
		if f.log && (x0 <= 0 || x1 <= 0) || math.IsNaN(y0+y1) || math.IsInf(y0, 0) || math.IsInf(y1, 0) {
			continue
		}
		draw(f.x(x0), f.y(y0), f.x(x1), f.y(y1))
	}
}

// brailleText draws a curve with the dots of Unicode's braille patterns.
func brailleText(c *analyze.PlotCurve) []string {
	f, ok := frameOf(c)
	if !ok {
		return nil
	}
	var dots [brailleRows * 4][brailleColumns * 2]bool
	for _, trace := range c.Y {
		f.segments(c, trace, func(x0, y0, x1, y1 float64) {
			const w, h = brailleColumns*2 - 1, brailleRows*4 - 1
			steps := int(max(math.Abs(x1-x0)*w, math.Abs(y1-y0)*h)) + 1
			for k := range steps + 1 {
				part := float64(k) / float64(steps)
				column := int(math.Round((x0 + part*(x1-x0)) * w))
				row := h - int(math.Round((y0+part*(y1-y0))*h))
				if column >= 0 && column <= w && row >= 0 && row <= h {
					dots[row][column] = true
				}
			}
		})
	}
	return label(c, f, dots)
}

// brailleBit is the bit of a dot in a braille pattern, by row and column
// (ISO/IEC 10646, block 2800).
var brailleBit = [4][2]rune{{0x01, 0x08}, {0x02, 0x10}, {0x04, 0x20}, {0x40, 0x80}}

func label(c *analyze.PlotCurve, f frame, dots [brailleRows * 4][brailleColumns * 2]bool) []string {
	high, low := axisFigure(f.high, c.YLabel), axisFigure(f.low, c.YLabel)
	width := max(utf8.RuneCountInString(high), utf8.RuneCountInString(low))
	lines := make([]string, 0, brailleRows+2)
	if c.Title != "" {
		lines = append(lines, c.Title)
	}
	for row := range brailleRows {
		mark := ""
		switch row {
		case 0:
			mark = high
		case brailleRows - 1:
			mark = low
		}
		var b strings.Builder
		b.WriteString(strings.Repeat(" ", width-utf8.RuneCountInString(mark)) + mark + " ┤")
		for column := range brailleColumns {
			pattern := rune(0x2800)
			for i := range 4 {
				for j := range 2 {
					if dots[row*4+i][column*2+j] {
						pattern |= brailleBit[i][j]
					}
				}
			}
			b.WriteRune(pattern)
		}
		lines = append(lines, b.String())
	}
	left, right := axisFigure(f.left, c.XLabel), axisFigure(f.right, c.XLabel)
	gap := brailleColumns - utf8.RuneCountInString(left) - utf8.RuneCountInString(right)
	return append(lines, strings.Repeat(" ", width+2)+left+strings.Repeat(" ", max(gap, 1))+right)
}

// axisFigure writes a number at the end of an axis, with an SI prefix where it
// has a unit that takes one.
func axisFigure(v float64, unit string) string {
	prefix := ""
	if unit != "" && unit != "dB" && unit != "°" && v != 0 {
		power := int(math.Floor(math.Log10(math.Abs(v))/3 + 1e-9))
		power = max(-len(smallPrefixes), min(power, len(largePrefixes)))
		v /= math.Pow(1000, float64(power))
		switch {
		case power < 0:
			prefix = smallPrefixes[-power-1]
		case power > 0:
			prefix = largePrefixes[power-1]
		}
	}
	text := strings.Replace(strconv.FormatFloat(v+0, 'g', 4, 64), "-", "−", 1)
	if text == "−0" {
		text = "0"
	}
	return strings.TrimSpace(text + " " + prefix + unit)
}

var (
	smallPrefixes = []string{"m", "µ", "n", "p", "f"}
	largePrefixes = []string{"k", "M", "G", "T"}
)

// pictureLink draws a curve as an image within Markdown, "" where it cannot
// be drawn.
func pictureLink(c *analyze.PlotCurve) string {
	image, err := analyze.CurveSVG(*c, analyze.HoverWidth, analyze.HoverHeight)
	if err != nil {
		return ""
	}
	return "![" + escape(c.Title) + "](data:image/svg+xml;base64," + base64.StdEncoding.EncodeToString(image) + ")"
}
