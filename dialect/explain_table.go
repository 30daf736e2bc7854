package dialect

var explanationList = []Explanation{}
