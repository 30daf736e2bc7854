package dialect

import (
	"fmt"
	"strings"
	"testing"
)

func TestPathTo(t *testing.T) {
	for _, c := range []struct{ text, want string }{ // ⟦⟧ marks the place
		{"in -[R1⟦⟧]- mid", "PathStatement Chain Group NameBox Word:R1"},
		{"in -[R1]- ⟦⟧mid", "PathStatement Word:mid"},
		{"i⟦⟧n -[R1]- mid", "PathStatement Word:in"},
		{"a -[resistor R1 = 5 k⟦⟧Ω]- b", "PathStatement Chain Group PartStatement NumberExpr UnitExpr UnitFactor"},
		{"let x = v[a⟦⟧,b]", "LetStatement SubscriptExpr NameExpr Word:a"},
		{"let x = R1⟦⟧*C1", "LetStatement BinaryExpr NameExpr Word:R1"},
		{"let x = R1*⟦⟧C1", "LetStatement BinaryExpr NameExpr Word:C1"},
		{"let x = H⟦⟧(1 kHz)", "LetStatement CallExpr NameExpr Word:H"},
		{"tell gain(H) at 1 kHz⟦⟧", "TellStatement Qualifier NumberExpr UnitExpr UnitFactor"},
		{"op amp U = ideal, + at ⟦⟧a, - at b, output at c", "PartStatement PartOption Word:a"},
		{"subnetwork F (a) {\n  let x = ⟦⟧y\n}", "SubnetworkStatement LetStatement NameExpr Word:y"},
		{"subnetwork F (a) {\n⟦⟧\n}", "SubnetworkStatement"},
		{"let x = 1\n⟦⟧\nlet y = 2", ""},
		{"use \"a⟦⟧b\"", "UseFileStatement StringLiteral"},
	} {
		offset := strings.Index(c.text, "⟦")
		f := Parse("", strings.ReplaceAll(c.text, "⟦⟧", ""))
		var names []string
		for _, n := range PathTo(f, offset) {
			name := strings.TrimPrefix(strings.TrimPrefix(fmt.Sprintf("%T", n), "*"), "dialect.")
			if w, ok := n.(Word); ok {
				name += ":" + w.Text
			}
			names = append(names, name)
		}
		if got := strings.Join(names, " "); got != c.want {
			t.Errorf("%s: %s, want %s", c.text, got, c.want)
		}
	}
}

// TestWalkMeetsAllWords walks the canonical files: every token that is a word
// is met once and in order.
func TestWalkMeetsAllWords(t *testing.T) {
	f := Parse("", wholeFile)
	last, count := -1, 0
	Walk(f, func(x Tree) bool {
		if w, ok := x.(Word); ok {
			if w.Span.Start <= last {
				t.Errorf("%q at %d comes after %d", w.Text, w.Span.Start, last)
			}
			last = w.Span.Start
			count++
		}
		return true
	})
	words := 0
	for line := range f.Lines.Count() {
		span := f.Lines.Span(line)
		tokens, _ := scanLine(f.Text, span.Start, span.End, nil)
		for _, tok := range tokens {
			if tok.kind == tWord || tok.kind == tNumber || tok.kind == tLessEq || tok.kind == tGreaterEq {
				words++
			}
		}
	}
	// "voltage source" is one word; the units V Ω mH Ω W nF V s kHz ms V V ms
	// with 13 symbols are no words of the tree.
	if want := words - 1 - 13; count != want {
		t.Errorf("%d words met, want %d", count, want)
	}
}
