package dialect

import "slices"

// explanationList is the one table of codes: of the text, of the network, of
// refused answers.
var explanationList = slices.Concat(textExplanations, valueExplanations, networkExplanations, answerExplanations)
