package dialect

// recorder notes what would fit at the end of the text read so far.
type recorder struct {
	holes []*Hole
}

// keywords notes words that would fit.
func (r *recorder) keywords(list []string) {
	r.holes = append(r.holes, &Hole{Want: WantKeyword, Words: list})
}

// want notes what would fit here, if the text ends here and someone asks.
func (p *parser) want(want Want, words []string) {
	if p.record == nil || !p.is(tEnd) {
		return
	}
	h := &Hole{Span: Span{p.last(), p.last()}, Want: want, Kind: p.kind, Words: words}
	if (want == WantUnit || want == WantExpression || want == WantValue) && len(words) == 0 && p.unit != "" {
		h.Words = []string{p.unit}
	}
	p.record.holes = append(p.record.holes, h)
}

// wantParameter notes that a parameter of a subnetwork would fit.
func (p *parser) wantParameter(subnetwork string) {
	if p.record == nil {
		return
	}
	p.want(WantParameter, nil)
	p.record.holes[len(p.record.holes)-1].Name = subnetwork
}
