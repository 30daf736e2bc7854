package analyze_test

import (
	"encoding/json"
	"os"
	"path/filepath"
	"sort"
	"testing"
)

// A referenceCase is one file of the shared collection of networks with
// expected answers: what was asked of general-purpose mathematics, not of
// this project. Values are coherent SI, polynomials ascend in s.
type referenceCase struct {
	Name, Group string
	Network     *caseNetwork
	Ask         []caseQuestion
}

// caseNetwork is a network as the collection writes it.
type caseNetwork struct {
	Nodes        []string
	Ground       string
	Elements     []caseElement
	InitialState string `json:"initial_state"`
}

// caseElement is one element; which fields count depends on Kind.
type caseElement struct {
	Kind, Name, From, To, Value, Initial string
	Waveform                             map[string]string
	Control                              *struct{ From, To, Element string }
	Inductors                            []string
	K                                    string
	Primary, Secondary                   *struct{ From, To string }
	Ratio                                string
	Plus, Minus, Out                     string
	DCGain                               string `json:"dc_gain"`
	Pole                                 string
	Before, After                        string
}

// caseOutput is a voltage between two nodes or the current of an element.
type caseOutput struct {
	Voltage []string
	Current string
}

// caseQuestion is one question with its expected answer; the expectation's
// form depends on What.
type caseQuestion struct {
	What           string
	Form           string
	Input          string
	Output         *caseOutput
	Port           []string
	Port1, Port2   []string
	Parameters     string
	Reference      []string
	NetworkWithout []string `json:"network_without"`
	Of             *caseQuestion
	Order          int
	Metric         string
	Definition     string
	Request        *caseOutput
	Statements     []unitStatement
	Expect         json.RawMessage
	Transform      map[string]caseRatio
	Impulses       map[string][]string `json:"impulses_at_0"`
	ValueAt0Plus   string              `json:"value_at_0_plus"`
	Tolerance      json.RawMessage
}

// caseRatio is a rational function of s, coefficients ascending, as "p/q".
type caseRatio struct{ Num, Den []string }

// caseRoot is an expected root with its multiplicity.
type caseRoot struct {
	Re, Im       string
	Multiplicity int
}

// unitStatement is a text that must be accepted or refused where a quantity
// of some kind is expected.
type unitStatement struct {
	Context, Text, Expect, Reason, Note string
	SIValue                             *string `json:"si_value"`
}

// sharedCases is where the collection lies beside the repository.
const sharedCases = "../../shared/cases"

// loadCases reads the collection, in the order of its file names.
func loadCases(t *testing.T) []referenceCase {
	t.Helper()
	files, _ := filepath.Glob(filepath.Join(sharedCases, "*.json"))
	if len(files) == 0 {
		t.Skip("the shared reference cases are not beside this clone; testdata/reference is always run")
	}
	sort.Strings(files)
	cases := make([]referenceCase, 0, len(files))
	for _, f := range files {
		data, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		var c referenceCase
		if err := json.Unmarshal(data, &c); err != nil {
			t.Fatalf("%s: %v", f, err)
		}
		cases = append(cases, c)
	}
	return cases
}
