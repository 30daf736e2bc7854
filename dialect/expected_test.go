package dialect

import (
	"fmt"
	"slices"
	"strings"
	"testing"
)

func TestExpected(t *testing.T) {
	for _, c := range []struct {
		text  string // ⟦⟧ marks the place
		wants []Want
		words string // words of the first of them
		typed string
	}{
		{"⟦⟧", []Want{WantStatement, WantKind, WantNode}, "ground let port function tell require start prefer allow use subnetwork part", ""},
		{"res⟦⟧", []Want{WantStatement, WantKind}, "", "res"},
		{"voltage ⟦⟧", []Want{WantKeyword}, "source", ""},
		{"resistor ⟦⟧", []Want{WantNewName}, "", ""},
		{"resistor R1 = ⟦⟧", []Want{WantValue}, "Ω", ""},
		{"resistor R1 = 4.7⟦⟧", []Want{WantUnit}, "Ω", ""},
		{"resistor R1 = 4.7 k⟦⟧", []Want{WantUnit}, "Ω", "k"},
		{"resistor R1 = 4.7k⟦⟧", []Want{WantUnit}, "Ω", "k"},
		{"resistor R1 = 4.7 kΩ ⟦⟧", []Want{WantTolerance}, "", ""},
		{"resistor R1 = 4.7 kΩ, ⟦⟧", []Want{WantOption}, "rated", ""},
		{"resistor R1 = 4.7 kΩ,\n  ra⟦⟧", []Want{WantOption}, "rated", "ra"},
		{"capacitor C = 4 F, rated 5 V, i⟦⟧\nlet x = 1", []Want{WantOption}, "initially", "i"},
		{"capacitor C = 4 F, rated ⟦⟧", []Want{WantExpression}, "V", ""},
		{"op amp U = ⟦⟧", []Want{WantKeyword, WantValue}, "ideal", ""},
		{"op amp U = ideal, + at a, ⟦⟧", []Want{WantOption}, "gain - output", ""},
		{"op amp U = ideal, + at ⟦⟧", []Want{WantNode}, "", ""},
		{"switch S = ⟦⟧", []Want{WantValue}, "opens closes", ""},
		{"switch S = opens ⟦⟧", []Want{WantKeyword}, "at", ""},
		{"coupling k = 0.9, between L1 ⟦⟧", []Want{WantInductor}, "", ""},
		{"a ⟦⟧", []Want{WantMark}, "-[", ""},
		{"a -[⟦⟧", []Want{WantBox}, "", ""},
		{"a -[R⟦⟧]- b", []Want{WantBox}, "", "R"},
		{"a -[R1 || ⟦⟧]- b", []Want{WantBox}, "", ""},
		{"a -[R1]- ⟦⟧", []Want{WantNode}, "", ""},
		{"a -[R1]- 3V⟦⟧", []Want{WantNode}, "", "3V"},
		{"a -[resistor R1 = 5⟦⟧]- b", []Want{WantUnit}, "Ω", ""},
		{"a -[resistor ⟦⟧", []Want{WantNewName}, "", ""},
		{"tell ⟦⟧", []Want{WantQuestion, WantExpression}, "", ""},
		{"tell v[⟦⟧]", []Want{WantSubscript}, "", ""},
		{"tell v[a,⟦⟧]", []Want{WantSubscript}, "", ""},
		{"tell v[F1.m⟦⟧]", []Want{WantSubscript}, "", "m"},
		{"tell v[a] ⟦⟧", []Want{WantQualifier}, "", ""},
		{"tell v[a] at ⟦⟧", []Want{WantExpression}, "", ""},
		{"tell v[a] from 1 s ⟦⟧", []Want{WantKeyword, WantQualifier}, "to", ""},
		{"tell H with ⟦⟧", []Want{WantSwitch}, "", ""},
		{"tell H with S1 ⟦⟧", []Want{WantKeyword}, "open closed", ""},
		{"tell H without ⟦⟧", []Want{WantPart}, "", ""},
		{"tell poles ⟦⟧", []Want{WantKeyword}, "of", ""},
		{"tell matrix ⟦⟧", []Want{WantMatrixSet}, "z y h g abcd s", ""},
		{"tell matrix z[⟦⟧", []Want{WantPort}, "", ""},
		{"tell f0 in ⟦⟧", []Want{WantFrequencyUnit}, "Hz rad/s", ""},
		{"require gain(H) ⟦⟧", []Want{WantRelation, WantQualifier}, "<= >= < >", ""},
		{"start ⟦⟧", []Want{WantKeyword}, "rest steady", ""},
		{"prefer ⟦⟧", []Want{WantKind}, "resistor inductor capacitor", ""},
		{"prefer resistor ⟦⟧", []Want{WantSeries}, "E3 E6 E12 E24 E48 E96 E192", ""},
		{"allow ⟦⟧", []Want{WantCode}, "", ""},
		{"allow singular ⟦⟧", []Want{WantKeyword}, "because", ""},
		{"use \"st⟦⟧", []Want{WantPath}, "", "st"},
		{"port p ⟦⟧", []Want{WantKeyword}, "at", ""},
		{"port p at a ⟦⟧", []Want{WantNode}, "", ""},
		{"part P = ⟦⟧", []Want{WantSubnetwork}, "", ""},
		{"part P = F with ⟦⟧", []Want{WantParameter}, "", ""},
		{"part P = F with C = 1 F, ⟦⟧", []Want{WantParameter, WantTerminal}, "", ""},
		{"part P = F, a at 1, ⟦⟧", []Want{WantTerminal}, "", ""},
		{"subnetwork F (a) {\n  ⟦⟧\n}", []Want{WantStatement}, "let require part", ""},
		{"let x = sin(⟦⟧)", []Want{WantExpression}, "", ""},
		{"let x = 1 # ab⟦⟧", nil, "", ""},
	} {
		offset := strings.Index(c.text, "⟦")
		f := Parse("", strings.ReplaceAll(c.text, "⟦⟧", ""))
		got := Expected(f, offset)
		var have []string
		for _, h := range got.Fits {
			have = append(have, fmt.Sprint(int(h.Want), h.Words))
		}
		for i, w := range c.wants {
			h := got.Wants(w)
			if h == nil {
				t.Errorf("%s: no want %d, but %v", c.text, w, have)
			} else if words := strings.Join(h.Words, " "); i == 0 && c.words != "" && words != c.words {
				t.Errorf("%s: words %q, want %q", c.text, words, c.words)
			}
		}
		if c.wants == nil && len(got.Fits) > 0 {
			t.Errorf("%s: something fits: %v", c.text, have)
		}
		if got.Typed != c.typed {
			t.Errorf("%s: typed %q, want %q", c.text, got.Typed, c.typed)
		}
	}
}

// TestExpectedKnows covers what comes with a context.
func TestExpectedKnows(t *testing.T) {
	text := "subnetwork F (a) {\n  resistor R1 = 4.7 kΩ, ra\n}\n"
	f := Parse("", text)
	c := Expected(f, strings.Index(text, "ra\n")+1)
	if c.Subnetwork == nil || c.Subnetwork.Name.Text != "F" {
		t.Error("the subnetwork is not known")
	}
	if s, ok := c.Statement.(*PartStatement); !ok || s.Kind != Resistor || s.Name.Text != "R1" {
		t.Errorf("the statement is %v", c.Statement)
	}
	if got := text[c.Replace.Start:c.Replace.End]; got != "ra" || c.Typed != "r" {
		t.Errorf("replaces %q, typed %q", got, c.Typed)
	}
	if h := c.Wants(WantOption); h == nil || h.Kind != Resistor {
		t.Error("the option's kind is not known")
	}
	if c := Expected(Parse("", "part P = Cell, "), 15); c.Wants(WantTerminal) == nil || c.Wants(WantTerminal).Name != "Cell" {
		t.Error("the terminal's subnetwork is not known")
	}
	if c := Expected(Parse("", "tell i[F1."), 10); c.Wants(WantSubscript) == nil || c.Wants(WantSubscript).Name != "F1" {
		t.Error("the outer name of an inner one is not known")
	}
	if !slices.ContainsFunc(Expected(Parse("", "v"), 1).Fits, func(h *Hole) bool { return h.Want == WantNode }) {
		t.Error("a path may start with a node")
	}
}
