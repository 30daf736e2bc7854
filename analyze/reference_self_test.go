package analyze_test

import (
	"bytes"
	"context"
	"encoding/json"
	"math/big"
	"testing"
)

// TestReferenceCasesCanFail bends every expectation a little and demands
// that the comparison notices: a harness that passes anything proves nothing.
func TestReferenceCasesCanFail(t *testing.T) {
	bent := 0
	for _, c := range loadCases(t) {
		if c.Network == nil || len(c.Network.Elements) > 100 {
			continue
		}
		a := newAsker(context.Background(), c)
		for i := range c.Ask {
			for _, q := range bentQuestions(t, c.Ask[i]) {
				bent++
				if o := a.question(&q); o.err == nil && o.unasked == "" {
					t.Errorf("%s, question %d (%s): a bent expectation passes: %s %v %v %s",
						c.Name, i+1, q.What, q.Expect, q.Transform, q.Impulses, q.ValueAt0Plus)
				}
			}
		}
	}
	if bent < 800 {
		t.Errorf("only %d expectations were bent", bent)
	}
}

// bentQuestions are copies of a question, each with one of its expectations
// bent.
func bentQuestions(t *testing.T, q caseQuestion) (list []caseQuestion) {
	var expect any
	if json.Unmarshal(q.Expect, &expect) != nil || q.What == "accept" || bytes.Contains(q.Expect, []byte("UNKNOWN_NODE")) {
		return nil // about an unknown node the name itself is what is asked
	}
	if v, changed := bend("", expect); changed {
		data, err := json.Marshal(v)
		if err != nil {
			t.Fatal(err)
		}
		other := q
		other.Expect = data
		list = append(list, other)
	}
	for part, f := range q.Transform {
		other := q
		other.Transform = map[string]caseRatio{part: {Num: append([]string{"1"}, f.Num...), Den: f.Den}}
		list = append(list, other)
	}
	for part, weights := range q.Impulses {
		other := q
		other.Impulses = map[string][]string{part: append([]string{"1"}, weights...)}
		list = append(list, other)
	}
	if r, ok := new(big.Rat).SetString(q.ValueAt0Plus); ok && q.ValueAt0Plus != "" {
		other := q
		other.ValueAt0Plus = r.Add(r, big.NewRat(1, 1)).RatString()
		list = append(list, other)
	}
	return list
}

// bend changes every number of an expectation by one part in ten thousand,
// every truth into its opposite and every name into one that nothing has.
// The places asked about stay, and denominators, which only scale.
func bend(key string, v any) (bent any, changed bool) {
	switch x := v.(type) {
	case map[string]any:
		out := map[string]any{}
		for k, e := range x {
			var c bool
			out[k], c = bend(k, e)
			changed = changed || c
		}
		return out, changed
	case []any:
		out := make([]any, len(x))
		for i, e := range x {
			var c bool
			out[i], c = bend(key, e)
			changed = changed || c
		}
		return out, changed
	case bool:
		return !x, true
	case string:
		switch key {
		case "hz", "omega", "t", "reason", "sense", "den":
			return x, false
		case "names":
			return "nowhere", true
		}
		r, ok := new(big.Rat).SetString(x)
		if !ok || r.Sign() == 0 {
			return x, false
		}
		return r.Mul(r, big.NewRat(10001, 10000)).RatString(), true
	}
	return v, false
}
