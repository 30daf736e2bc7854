package dialect

// answerExplanations are the codes of refused answers that are no findings.
var answerExplanations = []Explanation{}
