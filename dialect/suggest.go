package dialect

import (
	"strings"
	"unicode/utf8"
)

// Nearest finds the candidate that a misspelt name probably meant: equal but
// for case, or the one with the fewest changed, missing, added or swapped
// characters, at most a third of the name; of one or two characters the first
// must agree. Of equally near ones the first wins.
func Nearest(name string, candidates []string) (string, bool) {
	best, least := "", 1+max(1, utf8.RuneCountInString(name)/3)
	for _, c := range candidates {
		if c == name || c == "" {
			continue
		}
		if strings.EqualFold(c, name) {
			return c, true
		}
		if len(name) <= 2 && c[0] != name[0] {
			continue
		}
		if d := editDistance(name, c, least); d < least {
			best, least = c, d
		}
	}
	return best, best != ""
}

// editDistance counts the changed, missing, added and swapped neighbouring
// characters between two words (the restricted Damerau–Levenshtein distance),
// or returns limit as soon as it is sure to reach that.
func editDistance(a, b string, limit int) int {
	if d := len(a) - len(b); d >= 4*limit || -d >= 4*limit {
		return limit
	}
	x, y := []rune(a), []rune(b)
	if len(x) > 64 || len(y) > 64 || len(x)-len(y) >= limit || len(y)-len(x) >= limit {
		return limit
	}
	var rows [3][66]int
	before, last, row := &rows[0], &rows[1], &rows[2]
	for j := range len(y) + 1 {
		last[j] = j
	}
	for i := 1; i <= len(x); i++ {
		row[0] = i
		least := i
		for j := 1; j <= len(y); j++ {
			cost := 1
			if x[i-1] == y[j-1] {
				cost = 0
			}
			d := min(last[j]+1, row[j-1]+1, last[j-1]+cost)
			if i > 1 && j > 1 && x[i-1] == y[j-2] && x[i-2] == y[j-1] {
				d = min(d, before[j-2]+1)
			}
			row[j] = d
			least = min(least, d)
		}
		if least >= limit {
			return limit
		}
		before, last, row = last, row, before
	}
	return last[len(y)]
}
