package analyze

import (
	"context"
	"math/big"
	"sort"
	"strings"

	"portlight/analyze/response"
	"portlight/dialect"
	"portlight/dialect/number"
)

// termLimit is how many terms of one stretch of a signal are written out.
const termLimit = 6

// signalWords tells a signal in closed form, split by its causes.
func signalWords(ctx context.Context, a *SignalAnswer) []string {
	s := a.Signal
	if s.IsZero() {
		return []string{"zero at all times"}
	}
	var lines []string
	zi, zs := s.ZeroInput(), s.ZeroState()
	switch {
	case zs.IsZero():
		lines = append(lines, partWords(ctx, zi, "zero-input part", a.Dimension)...)
		lines = append(lines, "zero-state part: 0")
	case zi.IsZero():
		lines = append(lines, partWords(ctx, zs, "zero-state part", a.Dimension)...)
		lines = append(lines, "zero-input part: 0")
	default:
		lines = append(lines, partWords(ctx, s, "total", a.Dimension)...)
		lines = append(lines, partWords(ctx, zi, "zero-input part", a.Dimension)...)
		lines = append(lines, partWords(ctx, zs, "zero-state part", a.Dimension)...)
	}
	return lines
}

// curveWords tells a power and the like, which have no parts by cause.
func curveWords(ctx context.Context, a *CurveAnswer) []string {
	pieces, err := a.Curve.Pieces(ctx, shownDigits+4)
	return pieceWords(pieces, err, "total", a.Dimension)
}

// partWords tells one part, a line to each stretch that begins or ends.
func partWords(ctx context.Context, s *response.Signal, title string, d dialect.Dimension) []string {
	pieces, err := s.Pieces(ctx, shownDigits+4)
	return pieceWords(pieces, err, title, d)
}

func pieceWords(pieces []response.Piece, err error, title string, d dialect.Dimension) []string {
	if err != nil {
		return []string{title + ": " + err.Error()}
	}
	if len(pieces) == 0 {
		return []string{title + ": 0"}
	}
	var lines []string
	for _, p := range pieces {
		from := p.From.Rat()
		clock := "t"
		if from.Sign() != 0 {
			clock = "t′"
		}
		text := stretchWords(p, clock, d)
		if when := stretch(p, overlaps(p, pieces)); when != "" {
			text = when + " " + text
		}
		if clock == "t′" {
			text += ", t′ = t " + minus + " " + ratFigure(from, "s")
		}
		lines = append(lines, text)
	}
	lines[0] = title + ": " + lines[0]
	return lines
}

// overlaps tells whether something that began before a piece still lasts.
func overlaps(p response.Piece, pieces []response.Piece) bool {
	for _, q := range pieces {
		if q.From.Rat().Cmp(p.From.Rat()) < 0 && (q.Until == nil || q.Until.Rat().Cmp(p.From.Rat()) > 0) {
			return true
		}
	}
	return false
}

// stretch says when a piece lasts; pieces that overlap add up.
func stretch(p response.Piece, adds bool) string {
	from := ratFigure(p.From.Rat(), "s")
	switch {
	case p.Until != nil:
		return "from " + from + " to " + exactFigure(*p.Until, "s") + ":"
	case adds:
		return "added from " + from + " on:"
	case p.From.Rat().Sign() != 0:
		return "from " + from + " on:"
	}
	return ""
}

// stretchWords writes the terms of a piece, the slowest first, and its impulses.
func stretchWords(p response.Piece, clock string, d dialect.Dimension) string {
	terms := make([]response.Term, 0, len(p.Terms))
	for _, t := range p.Terms {
		if s, ok := t.Pole.Im.Sign(); ok && s < 0 {
			continue // told with its conjugate
		}
		terms = append(terms, t)
	}
	sort.SliceStable(terms, func(i, j int) bool {
		order, decided := terms[i].Pole.Re.Cmp(terms[j].Pole.Re)
		return decided && order > 0
	})
	rest := 0
	if len(terms) > termLimit+1 {
		rest = len(terms) - termLimit
		terms = terms[:termLimit]
	}
	var b strings.Builder
	for k, w := range p.Impulses {
		if isZero(w) {
			continue
		}
		if b.Len() > 0 {
			b.WriteString(" + ")
		}
		b.WriteString(figure(w, impulseUnit(d, k)) + "·δ" + strings.Repeat("′", k) + "(" + clock + ")")
	}
	for _, t := range terms {
		text := termWords(t, clock, d)
		if b.Len() > 0 {
			if cut, negative := strings.CutPrefix(text, minus); negative {
				b.WriteString(" " + minus + " " + cut)
				continue
			}
			b.WriteString(" + ")
		}
		b.WriteString(text)
	}
	if b.Len() == 0 {
		b.WriteString("0")
	}
	if rest > 0 {
		b.WriteString(" + " + big.NewInt(int64(rest)).String() + " terms that die away faster")
	}
	return b.String()
}

// termWords writes c·t^m·e^(σt)·cos(ωt + φ).
func termWords(t response.Term, clock string, d dialect.Dimension) string {
	unit := d.Unit()
	if seconds, ok := dialect.DimensionTime.Power(-t.Power); ok && t.Power > 0 {
		if dd, ok := d.Times(seconds); ok {
			unit = dd.Unit()
		}
	}
	real := isZero(t.Pole.Im)
	var text string
	if real {
		text = figure(t.Coefficient.Re, unit)
	} else {
		text = figure(t.Coefficient.Abs().MulInt(2), unit)
	}
	if t.Power == 1 {
		text += "·" + clock
	} else if t.Power > 1 {
		text += "·" + clock + superscript(t.Power)
	}
	if !isZero(t.Pole.Re) {
		text += "·e^(" + exponent(t.Pole.Re, clock) + ")"
	}
	if real {
		return text
	}
	return text + "·cos(2π·" + figure(hertz(t.Pole.Im), "Hz") + "·" + clock + phaseWords(t.Coefficient) + ")"
}

// exponent writes σt as −t/τ or t/τ.
func exponent(sigma number.Ball, clock string) string {
	sign := ""
	if s, ok := sigma.Sign(); ok && s < 0 {
		sign = minus
	}
	return sign + clock + "/" + figure(sigma.Abs().Inv(), "s")
}

// phaseWords is the phase of a coefficient as " + 34°", nothing when it is zero.
func phaseWords(c number.ComplexBall) string {
	if isZero(c.Im) {
		if s, ok := c.Re.Sign(); ok && s > 0 {
			return ""
		}
		return " + 180°"
	}
	phase := c.Arg().MulInt(180).Quo(number.PiBall(max(c.Prec(), figurePrecision)))
	if s, ok := phase.Sign(); ok && s < 0 {
		return " " + minus + " " + figure(phase.Neg(), "°")
	}
	return " + " + figure(phase, "°")
}
