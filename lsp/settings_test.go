package lsp

import (
	"encoding/json"
	"fmt"
	"os"
	"strings"
	"testing"

	"go.lsp.dev/protocol"
)

func TestSettings(t *testing.T) {
	off := defaultSettings()
	off.answers = false
	never := defaultSettings()
	never.pictures = "never"
	bytes := defaultSettings()
	bytes.positions = "utf-8"
	for _, c := range []struct {
		raw     string
		want    settings
		problem string
	}{
		{"", defaultSettings(), ""}, {"null", defaultSettings(), ""}, {"{}", defaultSettings(), ""}, {"[]", defaultSettings(), ""},
		{`{"inlay":{"answers":false}}`, off, ""},
		{`{"inlay.answers":false}`, off, ""},
		{`{"portlight":{"inlay":{"answers":false}},"other":{"x":1}}`, off, ""},
		{`{"hover":{"pictures":"never"}}`, never, ""},
		{`{"positions":"utf-8"}`, bytes, ""},
		{`{"inlay":{"answerz":false}}`, defaultSettings(), "portlight.inlay.answerz is not a setting. Did you mean portlight.inlay.answers?"},
		{`{"qqqqqqqqqq":1}`, defaultSettings(), "portlight.qqqqqqqqqq is not a setting."},
		{`{"inlay":{"answers":"no"}}`, defaultSettings(), `portlight.inlay.answers must be true or false, not "no".`},
		{`{"hover":{"pictures":"big"}}`, defaultSettings(), `portlight.hover.pictures must be one of auto, always, never, not "big".`},
		{`{"command":"/opt/portlight"}`, defaultSettings(), ""},
		{`3`, defaultSettings(), "must be an object"},
	} {
		got, problems := readSettings([]byte(c.raw))
		if got != c.want {
			t.Errorf("%s: read %+v, want %+v", c.raw, got, c.want)
		}
		if all := strings.Join(problems, " "); c.problem == "" && all != "" || !strings.Contains(all, c.problem) {
			t.Errorf("%s: said %q, want %q", c.raw, all, c.problem)
		}
	}
}

// TestWrongSettingsReachTheUser sends settings in all three ways.
func TestWrongSettingsReachTheUser(t *testing.T) {
	e := rawEditor(t)
	e.call(protocol.MethodInitialize, map[string]any{
		"processId": nil, "rootUri": nil, "capabilities": struct{}{}, "initializationOptions": map[string]any{"lenz": true},
	}, &e.result)
	e.wait("the message", func() bool { return len(e.messages) == 1 && strings.Contains(e.messages[0], "portlight.lenz") })
	e.notify(protocol.MethodWorkspaceDidChangeConfiguration, map[string]any{"settings": map[string]any{"portlight": map[string]any{"x": 1}}})
	e.wait("the message", func() bool { return len(e.messages) == 2 && strings.Contains(e.messages[1], "portlight.x ") })
	e.quit()

	e = rawEditor(t)
	e.answer[protocol.MethodWorkspaceConfiguration] = func(params rawMessage) any { return rawMessage(`[{"y":1}]`) }
	e.call(protocol.MethodInitialize, map[string]any{
		"processId": nil, "rootUri": nil, "capabilities": map[string]any{"workspace": map[string]any{"configuration": true}},
	}, &e.result)
	e.notify(protocol.MethodInitialized, struct{}{})
	e.wait("the message", func() bool { return len(e.messages) == 1 && strings.Contains(e.messages[0], "portlight.y ") })
	e.quit()
}

// TestPositionsByOption counts columns as an initialization option says, for
// an editor that offers nothing.
func TestPositionsByOption(t *testing.T) {
	for option, want := range map[string]protocol.PositionEncodingKind{
		"utf-8": "utf-8", "utf-16": "utf-16", "utf-32": "utf-32", "auto": "utf-16",
	} {
		e := rawEditor(t)
		e.call(protocol.MethodInitialize, map[string]any{
			"processId": nil, "rootUri": nil, "capabilities": struct{}{}, "initializationOptions": map[string]any{"positions": option},
		}, &e.result)
		if got := e.result.Capabilities.PositionEncoding; got != want {
			t.Errorf("%s: positions are counted in %s, want %s", option, got, want)
		}
		e.quit()
	}
}

// TestExtensionSettings holds the settings that the VS Code extension
// declares against those that the server reads.
func TestExtensionSettings(t *testing.T) {
	raw, err := os.ReadFile("../editors/vscode/package.json")
	if err != nil {
		t.Fatal(err)
	}
	var manifest struct {
		Contributes struct {
			Configuration struct {
				Properties map[string]struct {
					Default any `json:"default"`
				} `json:"properties"`
			} `json:"configuration"`
		} `json:"contributes"`
	}
	if err := json.Unmarshal(raw, &manifest); err != nil {
		t.Fatal(err)
	}
	declared := manifest.Contributes.Configuration.Properties
	for _, s := range settingTable {
		property, ok := declared["portlight."+s.key]
		if s.key == "positions" { // VS Code says how it counts
			if ok {
				t.Error("the extension declares portlight.positions")
			}
			continue
		}
		if !ok || fmt.Sprint(property.Default) != s.fallback {
			t.Errorf("portlight.%s: the extension's default is %v, the server's %s", s.key, property.Default, s.fallback)
		}
		delete(declared, "portlight."+s.key)
	}
	for key := range declared {
		t.Errorf("the extension declares %s, which the server does not read", key)
	}
}

// TestActionLiteralsWithoutKinds takes an empty set of kinds for what it
// means: code actions are known, no kind in particular.
func TestActionLiteralsWithoutKinds(t *testing.T) {
	for capabilities, want := range map[string]bool{
		`{}`:                                 false,
		`{"textDocument":{"codeAction":{}}}`: false,
		`{"textDocument":{"codeAction":{"codeActionLiteralSupport":{"codeActionKind":{"valueSet":[]}}}}}`: true,
	} {
		p := &protocol.InitializeParams{}
		if err := protocol.Unmarshal([]byte(`{"processId":null,"rootUri":null,"capabilities":`+capabilities+`}`), p); err != nil {
			t.Fatal(err)
		}
		if got := newClient(p).actionLiterals; got != want {
			t.Errorf("%s: literals %v, want %v", capabilities, got, want)
		}
	}
}
