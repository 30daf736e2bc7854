package analyze_test

import (
	"path/filepath"
	"strings"
	"testing"

	"portlight/analyze"
)

// mostLines is how long a card may be: about a dozen lines.
const mostLines = 13

// cardCases points at one thing of every kind in the demos: the place is the
// nth occurrence of a text in the file.
var cardCases = []struct {
	file, at string
	nth      int
	title    string
	says     []string // in answer and detail
}{
	// A node: what it joins, its impedance, its voltage with parts by cause.
	{"valve", "coil -[Rw]", 1, "node coil joins S1, Rw and Rs", []string{
		"z[coil] at 1 kHz: ", "∠", "in series with", "v[coil]: −70.5 V at 0+", "0 V finally", "trough −140.4 V at 155.0 µs",
		"zero-input part: ", "zero-state part: 0", "z[coil] = ",
	}},
	{"valve", "plus ", 1, "node plus joins Vs and S1", []string{"z[plus]", "0 Ω", "Vs holds this pair", "v[plus]: 12 V"}},
	{"valve", "hull\n", 1, "node hull", []string{"every v[NODE] is measured from here"}},
	{"bus", "load -[", 1, "node load", []string{"v[load]: "}},
	{"hydrophone", "cable ", 1, "node cable joins Ch, Cw, Rb and U1", []string{"z[cable] at ", "v[cable]: "}},
	// A part: value and neighbours, signals, power and energy, what it sees.
	{"valve", "Rs ", 2, "resistor Rs = 330 Ω ±1 %", []string{
		"between 326.7 Ω and 333.3 Ω", "v[Rs]: ", "i[Rs]: −250 mA at 0+", "energy absorbed 3.288 mJ", "z[Rs] at 1 kHz: ",
	}},
	{"valve", "Lw ", 1, "inductor Lw = 120 mH ±10 %", []string{"i[Lw]: 250 mA at 0+", "v[Lw]: ", "a preferred value", "z[Lw]"}},
	{"valve", "Cs ", 2, "capacitor Cs = 220 nF ±10 %", []string{"v[Cs]: 12 V at 0+", "i[Cs]: ", "energy absorbed"}},
	{"valve", "S1 ", 1, "switch S1 = opens at 0 s", []string{"v[S1]: ", "i[S1]: 0 A"}},
	{"valve", "[Lw]", 1, "inductor Lw", []string{"i[Lw]: 250 mA at 0+"}},
	{"hydrophone", "U1 ", 1, "op amp U1", []string{"i[U1.output]: "}},
	// A source: waveform and transform.
	{"valve", "Vs ", 1, "voltage source Vs = Vbat", []string{"v[Vs]: 12 V", "transform: "}},
	{"hydrophone", "Vh ", 1, "voltage source Vh = 1 mV * sin(2 * pi * 5 kHz * t)", []string{"v[Vh]: ", "peak 1 mV"}},
	{"supply", "Vbus ", 1, "voltage source Vbus = 24 V * u(t)", []string{"transform: "}},
	// A port: impedance and equivalents.
	{"valve", "valve at", 1, "port valve, + at coil, − at hull", []string{
		"z[valve] at 1 kHz: ", "open-circuit voltage: ", "impedance: ", "short-circuit current: ",
	}},
	{"supply", "converter at", 1, "port converter", []string{"z[converter] at ", "open-circuit voltage: ", "short-circuit current: "}},
	// A function: formula, corners, ends, bandwidth.
	{"hydrophone", "H = ", 1, "function H", []string{"with ω₁ = 2π·", "ζ", "at DC 0, at high frequency 0", "bandwidth "}},
	{"supply", "ripple = ", 1, "function ripple", []string{"at DC ", "bandwidth "}},
	// A constant, a question, a limit, an expression inside either.
	{"valve", "Vbat = 12", 1, "constant Vbat", []string{"12 V", "used 1 time on 1 line"}},
	{"hydrophone", "fs = ", 1, "constant fs", []string{"96 kHz"}},
	{"valve", "tell z[valve]", 1, "tell z[valve] at 1 kHz", []string{"1.584 kΩ ∠ 16.26°", "in series with"}},
	{"bus", "tell initial", 1, "tell initial", []string{"Cbus"}},
	{"valve", "require trough", 1, "require trough(v[coil]) >= -200 V", []string{"holds with 59.55 V to spare", "tolerances"}},
	{"valve", "i[Lw]", 1, "i[Lw]", []string{"250 mA at 0+"}},
	{"bus", "p[Rdis]", 1, "p[Rdis]", []string{"peak "}},
	{"supply", "z[converter]", 2, "z[converter]", []string{"z[converter] at "}},
}

func TestCards(t *testing.T) {
	analyses := map[string]*analyze.Analysis{}
	for _, c := range cardCases {
		a := analyses[c.file]
		if a == nil {
			a = readAnalysis(t, filepath.Join("..", "testdata", "buoy", c.file+".plight"))
			analyses[c.file] = a
		}
		main := a.Checked().Main
		offset := nthIndex(main.Text, c.at, c.nth)
		if offset < 0 {
			t.Errorf("%s has no %q number %d", c.file, c.at, c.nth)
			continue
		}
		for strings.ContainsRune("[ ", rune(main.Text[offset])) {
			offset++
		}
		card, span, ok, err := a.Card(soon(t), main, offset)
		if err != nil || !ok {
			t.Errorf("%s: no card at %q: %v", c.file, c.at, err)
			continue
		}
		if span.Start > offset || span.End < offset {
			t.Errorf("%s at %q: the card belongs to another place: %q", c.file, c.at, main.Text[span.Start:span.End])
		}
		checkCard(t, c.file+" at "+c.at, card, c.title, c.says)
	}
}

func nthIndex(text, part string, nth int) int {
	at := -1
	for range nth {
		i := strings.Index(text[at+1:], part)
		if i < 0 {
			return -1
		}
		at += 1 + i
	}
	return at
}

// checkCard checks the order (what it is, the answer, the detail), the length,
// and that nothing is refused or left empty.
func checkCard(t *testing.T, place string, card analyze.Card, title string, says []string) {
	t.Helper()
	if !strings.HasPrefix(card.Title, title) {
		t.Errorf("%s: the card begins %q, want %q", place, card.Title, title)
	}
	if len(card.Answer) == 0 {
		t.Errorf("%s: no answer, only %q", place, card.Detail)
	}
	lines := append(append([]string{card.Title}, card.Answer...), card.Detail...)
	if len(lines) > mostLines {
		t.Errorf("%s: %d lines:\n%s", place, len(lines), strings.Join(lines, "\n"))
	}
	whole := strings.Join(lines, "\n")
	for _, want := range says {
		if !strings.Contains(whole, want) {
			t.Errorf("%s: the card does not say %q:\n%s", place, want, whole)
		}
	}
	for _, line := range lines {
		if strings.TrimSpace(line) == "" || strings.Contains(line, "no answer") || strings.HasSuffix(line, ": ") {
			t.Errorf("%s: the card has an empty line or a refusal:\n%s", place, whole)
		}
	}
}

// TestCardsEverywhere: there is no place in a demo at which a card fails, is
// too long, or has a title without an answer.
func TestCardsEverywhere(t *testing.T) {
	names, err := filepath.Glob("../testdata/buoy/*.plight")
	if err != nil || len(names) < 4 {
		t.Fatalf("%d demos, %v", len(names), err)
	}
	for _, name := range names {
		a := readAnalysis(t, name)
		main := a.Checked().Main
		step, least := 3, 20
		if testing.Short() {
			step, least = 29, 5
		}
		told := 0
		for offset := 0; offset < len(main.Text); offset += step {
			card, _, ok, err := a.Card(soon(t), main, offset)
			if err != nil {
				t.Fatalf("%s at %d: %v", name, offset, err)
			}
			if !ok {
				continue
			}
			told++
			checkCard(t, filepath.Base(name), card, "", nil)
		}
		if told < least {
			t.Errorf("%s: only %d places have a card", name, told)
		}
	}
}

// TestCardsInsideSubnetworks: things inside a body are told as of their first use.
func TestCardsInsideSubnetworks(t *testing.T) {
	text := `ground hull
subnetwork RealCap (plus, minus) with C = 10 µF, ESR = 9 mΩ {
  plus -[resistor R = ESR]- mid -[capacitor Cap = C]- minus
}
voltage source Vbus = 24 V * u(t)
bus -[Vbus]- hull
bus -[resistor Rc = 1 Ω]- rail
part C1 = RealCap with C = 47 µF, plus at rail, minus at hull
part C2 = RealCap, plus at rail, minus at hull
rail -[resistor Rl = 18 Ω]- hull
`
	a := analysisOfText(text)
	for _, c := range []struct {
		at, title string
		says      []string
	}{
		{"RealCap (", "subnetwork RealCap", []string{"terminals plus and minus", "parameters C and ESR", "used 2 times"}},
		{"C1 = RealCap", "part C1 = RealCap", []string{"made of C1.R and C1.Cap"}},
		{"Cap = C", "capacitor C1.Cap", []string{"stands 2 times in the network"}},
		{"mid -", "node C1.mid", []string{"v[C1.mid]: "}},
		{"ESR = 9", "parameter ESR", []string{"9 mΩ"}},
		{"C = 10", "parameter C", []string{"47 µF, 10 µF, by use"}},
	} {
		offset := strings.Index(text, c.at)
		card, _, ok, err := a.Card(soon(t), a.Checked().Main, offset)
		if err != nil || !ok {
			t.Errorf("no card at %q: %v", c.at, err)
			continue
		}
		checkCard(t, c.at, card, c.title, c.says)
	}
}

// A network with errors still has cards: what a thing is, and why nothing more.
func TestCardsOfBrokenFiles(t *testing.T) {
	a := analysisOfText("ground hull\nin -[resistor R1 = 47 F]- out -[capacitor C1 = 1 µF]- hull\n")
	main := a.Checked().Main
	card, _, ok, err := a.Card(soon(t), main, strings.Index(main.Text, "C1"))
	if err != nil || !ok {
		t.Fatalf("no card: %v", err)
	}
	if !strings.HasPrefix(card.Title, "capacitor C1") || !strings.Contains(strings.Join(card.Answer, "\n"), "until the errors of this file are mended") {
		t.Errorf("the card says %q, %q", card.Title, card.Answer)
	}
}
