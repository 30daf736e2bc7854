package dialect

import "sync"

// Explanation is what is known of a finding's code, or of a word of the
// notation: the one place where findings are defined.
type Explanation struct {
	Code     Code
	Severity Severity // the usual one; a finding can be milder
	Title    string
	Meaning  string
	Mend     string
	// Example is a file that yields the finding; "" for refused questions.
	Example string
	// Files are what the example uses, by path.
	Files map[string]string
	// Analysis says that the analysis finds it, not the check of the text.
	Analysis bool
	// Question is what to ask of the example where the code is the refusal of
	// an answer.
	Question string
}

// Explanations lists every code that a finding or a refused answer can bear,
// in a fixed order.
func Explanations() []Explanation {
	all := make([]Explanation, len(explanationList))
	copy(all, explanationList)
	return all
}

// Explain finds the explanation of a code.
func Explain(code Code) (Explanation, bool) {
	e, ok := explanations()[code]
	if !ok {
		return Explanation{}, false
	}
	return *e, true
}

var explanations = sync.OnceValue(func() map[Code]*Explanation {
	table := make(map[Code]*Explanation, len(explanationList))
	for i := range explanationList {
		table[explanationList[i].Code] = &explanationList[i]
	}
	return table
})

// explanationOf is the explanation of a code this package reports.
func explanationOf(code Code) *Explanation {
	if e := explanations()[code]; e != nil {
		return e
	}
	return &Explanation{Code: code}
}
