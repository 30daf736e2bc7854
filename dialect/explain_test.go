package dialect

import (
	"errors"
	"regexp"
	"testing"
)

// mapReader hands in files by path.
func mapReader(files map[string]string) Reader {
	return func(path string) (*File, error) {
		if text, ok := files[path]; ok {
			return Parse(path, text), nil
		}
		return nil, errors.New("there is no such file")
	}
}

// TestExamplesOfFindings checks that each example yields its finding and no
// other, as far as the check of the text goes.
func TestExamplesOfFindings(t *testing.T) {
	seen := map[Code]bool{}
	for _, e := range Explanations() {
		if seen[e.Code] {
			t.Errorf("%s is defined twice", e.Code)
		}
		seen[e.Code] = true
		if e.Title == "" || e.Meaning == "" || e.Mend == "" || !regexp.MustCompile(`^[a-z]+(-[a-z]+)*$`).MatchString(string(e.Code)) {
			t.Errorf("%s is not explained in full", e.Code)
		}
		if e.Example == "" {
			if !e.Analysis && e.Question == "" {
				t.Errorf("%s has no example", e.Code)
			}
			continue
		}
		c := Check(Parse("example.plight", e.Example), mapReader(e.Files))
		found := false
		for _, f := range c.Findings {
			if e.Code == "faults" {
				continue // the refusal that follows an error of any code
			}
			if f.Code != e.Code || e.Analysis {
				t.Errorf("the example of %s also yields %s", e.Code, f)
			}
			found = found || f.Code == e.Code
		}
		if !found && !e.Analysis {
			t.Errorf("the example of %s does not yield it", e.Code)
		}
	}
}
