package analyze

import (
	"math"
	"strconv"
	"strings"

	"gonum.org/v1/plot"
)

// unitTicks marks an axis at round steps, labelled with unit and SI prefix.
type unitTicks struct{ unit string }

// wantedTicks is about how many labels an axis bears.
const wantedTicks = 5

// Ticks implements plot.Ticker.
func (u unitTicks) Ticks(low, high float64) []plot.Tick {
	span := high - low
	if !(span > 0) || math.IsInf(span, 0) {
		return nil
	}
	step := roundStep(span/wantedTicks, u.unit == "°")
	var ticks []plot.Tick
	for i := math.Ceil(low/step - 1e-9); i*step <= high+1e-9*span; i++ {
		ticks = append(ticks, plot.Tick{Value: i * step, Label: tickLabel(i*step, step, u.unit)})
	}
	return ticks
}

// roundStep is the least of 1, 2, 5 (angles: 15, 30, 45, 90) times a power of
// ten that is not below x.
func roundStep(x float64, angle bool) float64 {
	if angle && x > 5 {
		for _, a := range []float64{15, 30, 45, 90, 180, 360} {
			if x <= a {
				return a
			}
		}
		return math.Ceil(x/360) * 360
	}
	base := math.Pow(10, math.Floor(math.Log10(x)))
	for _, m := range []float64{1, 2, 5} {
		if x <= m*base*(1+1e-9) {
			return m * base
		}
	}
	return 10 * base
}

// tickLabel writes a value with as many digits as its step needs.
func tickLabel(v, step float64, unit string) string {
	if math.Abs(v) < step/1e6 {
		return joinUnit("0", "", unit)
	}
	group := 0
	if takesPrefix(unit) {
		group = int(math.Floor(math.Log10(math.Abs(v))/3 + 1e-9))
		group = max(-10, min(10, group))
	}
	scale := math.Pow(1000, float64(group))
	decimals := max(0, -int(math.Floor(math.Log10(step/scale)+1e-9)))
	text := strconv.FormatFloat(v/scale, 'f', min(decimals, 9), 64)
	if strings.Contains(text, ".") {
		text = strings.TrimRight(strings.TrimRight(text, "0"), ".")
	}
	if cut, negative := strings.CutPrefix(text, "-"); negative {
		text = minus + cut
	}
	prefix := strings.TrimSpace(string([]rune(prefixSymbols)[group+10]))
	return joinUnit(text, prefix, unit)
}

// decadeTicks marks a logarithmic axis: decades labelled, the digits between
// them as small ticks; where there is hardly a decade, 2 and 5 have labels too.
type decadeTicks struct{ unit string }

// Ticks implements plot.Ticker.
func (u decadeTicks) Ticks(low, high float64) []plot.Tick {
	if !(low > 0) || !(high > low) {
		return nil
	}
	first, last := math.Floor(math.Log10(low)+1e-9), math.Ceil(math.Log10(high)-1e-9)
	decades := last - first
	every := math.Max(1, math.Ceil(decades/8))
	var ticks []plot.Tick
	for e := first; e <= last; e++ {
		for m := 1.0; m < 10; m++ {
			v := m * math.Pow(10, e)
			if v < low*(1-1e-9) || v > high*(1+1e-9) {
				continue
			}
			t := plot.Tick{Value: v}
			switch {
			case m == 1 && math.Mod(e-first, every) == 0, decades <= 2 && (m == 2 || m == 5):
				t.Label = tickLabel(v, v, u.unit)
			case decades > 12:
				continue
			}
			ticks = append(ticks, t)
		}
	}
	return ticks
}
