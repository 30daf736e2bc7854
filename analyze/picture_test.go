package analyze

import (
	"bytes"
	"encoding/xml"
	"errors"
	"image/png"
	"io"
	"math"
	"strings"
	"testing"

	"portlight/dialect"
)

// resonant is a function whose picture has a peak: natural frequency
// 10⁴ rad/s, damping 0.2.
func resonant(t *testing.T) *FunctionAnswer {
	return functionOf(t, dialect.DimensionNumber, []string{"100000000"}, []string{"100000000", "4000", "1"})
}

func TestPictureIsWellFormed(t *testing.T) {
	for _, size := range [][2]int{{HoverWidth, HoverHeight}, {FileWidth, FileHeight}} {
		data, err := PictureSVG(resonant(t), size[0], size[1])
		if err != nil {
			t.Fatal(err)
		}
		decoder := xml.NewDecoder(bytes.NewReader(data))
		elements := 0
		for {
			token, err := decoder.Token()
			if errors.Is(err, io.EOF) {
				break
			}
			if err != nil {
				t.Fatal(err)
			}
			if _, ok := token.(xml.StartElement); ok {
				elements++
			}
		}
		if elements < 20 {
			t.Errorf("only %d elements", elements)
		}
		// What an editor's hover can take in, with base64 on top.
		if size[0] == HoverWidth && len(data)*4/3 > 90000 {
			t.Errorf("a hover's picture has %d bytes", len(data))
		}
		for _, label := range []string{"1 kHz", "dB", "phase", "magnitude"} {
			if !strings.Contains(string(data), label) {
				t.Errorf("no label %q", label)
			}
		}
	}
}

func TestPicturePNG(t *testing.T) {
	p, err := PictureOf(t.Context(), resonant(t))
	if err != nil {
		t.Fatal(err)
	}
	data, err := p.PNG(400, 300)
	if err != nil {
		t.Fatal(err)
	}
	image, err := png.Decode(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	if b := image.Bounds(); b.Dx() != 400 || b.Dy() != 300 {
		t.Errorf("the size is %v", b)
	}
}

// TestCurvesAreRight compares samples of a picture with the textbook values
// at the natural frequency: |H| = 1/(2ζ), phase −90°.
func TestCurvesAreRight(t *testing.T) {
	v := valueAtHertz(resonant(t).Ratio, 1e4/(2*math.Pi))
	if math.Abs(real(v)) > 1e-12 || math.Abs(imag(v)+2.5) > 1e-12 {
		t.Errorf("H is %v at its natural frequency, want −2.5j", v)
	}
	p, err := PictureOf(t.Context(), resonant(t))
	if err != nil {
		t.Fatal(err)
	}
	phase := p.Panels[1].Y[0]
	if first, last := phase[0], phase[len(phase)-1]; math.Abs(first) > 2 || math.Abs(last+180) > 2 {
		t.Errorf("the phase goes from %g° to %g°, want 0° to −180°", first, last)
	}
}

func TestRootPicture(t *testing.T) {
	f := resonant(t)
	answer := &RootsAnswer{Question: Question{Text: "poles"}, Roots: f.Poles}
	if _, err := PictureSVG(answer, 500, 400); err != nil {
		t.Fatal(err)
	}
	p, err := PictureOf(t.Context(), answer)
	if err != nil {
		t.Fatal(err)
	}
	if len(p.Roots.Poles) != 2 || math.Abs(real(p.Roots.Poles[0])+2000) > 1e-9 {
		t.Errorf("the poles drawn are %v", p.Roots.Poles)
	}
}

func TestNoPicture(t *testing.T) {
	_, err := PictureSVG(&FactAnswer{Question: Question{Text: "stable(H)"}}, 100, 100)
	if !errors.Is(err, ErrNoPicture) {
		t.Errorf("the error is %v", err)
	}
}

func TestTickLabels(t *testing.T) {
	for _, c := range []struct {
		v, step float64
		unit    string
		want    string
	}{
		{1000, 500, "Hz", "1 kHz"}, {-20, 20, "dB", "−20 dB"}, {0, 1, "V", "0 V"},
		{0.0015, 0.0005, "s", "1.5 ms"}, {-45, 45, "°", "−45°"}, {0.25, 0.05, "", "0.25"},
	} {
		if got := tickLabel(c.v, c.step, c.unit); got != c.want {
			t.Errorf("tickLabel(%g, %g, %q) = %q, want %q", c.v, c.step, c.unit, got, c.want)
		}
	}
}
