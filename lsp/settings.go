package lsp

import (
	"encoding/json"
	"fmt"
	"slices"
	"strings"

	"go.lsp.dev/protocol"

	"portlight/dialect"
)

// settings is what a user can choose, under the section "portlight".
type settings struct {
	answers, verdicts, constants, directions bool // inlay text
	lens                                     bool
	pictures                                 string // auto, always, never
	positions                                string // auto, utf-8, utf-16, utf-32
}

// setting is one key: its documentation, and how it is taken in.
type setting struct {
	key, fallback, means string
	set                  func(*settings, json.RawMessage) error
}

// settingTable lists every key there is; METHODS.md shows it.
var settingTable = []setting{
	{"inlay.answers", "true", "show the answer of each tell line behind it", switchable(func(s *settings) *bool { return &s.answers })},
	{"inlay.verdicts", "true", "show the verdict on each require line behind it", switchable(func(s *settings) *bool { return &s.verdicts })},
	{"inlay.constants", "true", "show the value of a let that is not a plain number", switchable(func(s *settings) *bool { return &s.constants })},
	{"inlay.directions", "true", "show which way the current or voltage of a part counts where it is asked for", switchable(func(s *settings) *bool { return &s.directions })},
	{"lens", "true", "show a line of facts above ports, functions and limits", switchable(func(s *settings) *bool { return &s.lens })},
	{"hover.pictures", "auto", "images in hovers: auto sends them to editors known to show them, always, never", choice(func(s *settings) *string { return &s.pictures }, "auto", "always", "never")},
	{"positions", "auto", "what a column counts: auto agrees on it with the editor; utf-8, utf-16 or utf-32 is for one that counts so without offering it, and is read from the initialization options alone", choice(func(s *settings) *string { return &s.positions }, "auto", "utf-8", "utf-16", "utf-32")},
	{"command", "portlight", "the program that an editor's extension starts; the server itself does not read it", func(*settings, json.RawMessage) error { return nil }},
}

func defaultSettings() settings {
	return settings{answers: true, verdicts: true, constants: true, directions: true, lens: true, pictures: "auto", positions: "auto"}
}

func switchable(field func(*settings) *bool) func(*settings, json.RawMessage) error {
	return func(s *settings, raw json.RawMessage) error {
		if json.Unmarshal(raw, field(s)) != nil {
			return fmt.Errorf("must be true or false, not %s", raw)
		}
		return nil
	}
}

func choice(field func(*settings) *string, words ...string) func(*settings, json.RawMessage) error {
	return func(s *settings, raw json.RawMessage) error {
		var word string
		if json.Unmarshal(raw, &word) != nil || !slices.Contains(words, word) {
			return fmt.Errorf("must be one of %s, not %s", strings.Join(words, ", "), raw)
		}
		*field(s) = word
		return nil
	}
}

// readSettings reads settings over the defaults, nested ({"inlay":{"answers":
// false}}) or dotted ({"inlay.answers":false}), with or without the section's
// name around them. Every wrong key or value is in problems, in words.
func readSettings(raw []byte) (s settings, problems []string) {
	s = defaultSettings()
	trimmed := strings.TrimSpace(string(raw))
	if trimmed == "" || trimmed == "null" || trimmed == "[]" {
		return s, nil // nothing said; an empty list is how Lua writes an empty table
	}
	flat := map[string]json.RawMessage{}
	if err := flatten("", raw, flat); err != nil {
		return s, []string{"The settings of portlight must be an object, not " + trimmed + "."}
	}
	keys := make([]string, 0, len(flat))
	for key := range flat {
		keys = append(keys, key)
	}
	slices.Sort(keys)
	wrapped := slices.ContainsFunc(keys, func(k string) bool { return strings.HasPrefix(k, "portlight.") })
	for _, key := range keys {
		short, ours := strings.CutPrefix(key, "portlight.")
		if wrapped && !ours {
			continue // another server's, sent along
		}
		i := slices.IndexFunc(settingTable, func(t setting) bool { return t.key == short })
		if i < 0 {
			problems = append(problems, unknownSetting(short))
			continue
		}
		if err := settingTable[i].set(&s, flat[key]); err != nil {
			problems = append(problems, fmt.Sprintf("portlight.%s %v.", short, err))
		}
	}
	return s, problems
}

// flatten turns nested objects into dotted keys.
func flatten(prefix string, raw json.RawMessage, into map[string]json.RawMessage) error {
	var object map[string]json.RawMessage
	if err := json.Unmarshal(raw, &object); err != nil || object == nil {
		if prefix == "" {
			return fmt.Errorf("not an object")
		}
		into[strings.TrimSuffix(prefix, ".")] = raw
		return nil
	}
	for key, value := range object {
		if err := flatten(prefix+key+".", value, into); err != nil {
			return err
		}
	}
	return nil
}

// unknownSetting words a wrong key, with the nearest right one.
func unknownSetting(key string) string {
	text := fmt.Sprintf("portlight.%s is not a setting.", key)
	keys := make([]string, 0, len(settingTable))
	for _, t := range settingTable {
		keys = append(keys, t.key)
	}
	if best, ok := dialect.Nearest(key, keys); ok {
		text += fmt.Sprintf(" Did you mean portlight.%s?", best)
	}
	return text
}

// takeSettings makes settings the present ones and tells of wrong keys.
func (s *session) takeSettings(raw []byte) {
	next, problems := readSettings(raw)
	s.change(func(snap *snapshot) []string {
		snap.settings = next
		return nil
	})
	for _, problem := range problems {
		s.show(protocol.MessageTypeWarning, problem)
	}
	s.refreshViews()
}

// didChangeConfiguration handles workspace/didChangeConfiguration. A client
// that can be asked is asked: what it sends along is often empty.
func (s *session) didChangeConfiguration(p *protocol.DidChangeConfigurationParams) error {
	if s.client.configuration {
		s.askSettings()
		return nil
	}
	s.takeSettings(p.Settings)
	return nil
}

// askSettings fetches the settings from the client.
func (s *session) askSettings() {
	var result []protocol.LSPAny
	params := &protocol.ConfigurationParams{Items: []protocol.ConfigurationItem{{Section: ptr("portlight")}}}
	s.call(protocol.MethodWorkspaceConfiguration, params, &result, func(err error) {
		// A client without settings for us answers null; what the
		// initialization options said stays.
		if err == nil && len(result) == 1 && strings.TrimSpace(string(result[0])) != "null" {
			s.takeSettings(result[0])
		}
	})
}
