package expression

import (
	"slices"
	"strings"
	"unicode"
)

// reserved are the words that an expression reads as something other than a column, or that the library behind this
// package does.
var reserved = []string{"and", "or", "not", "in", "true", "false", "nil", "let", "if", "else", "matches", "contains",
	"startsWith", "endsWith"}

// Identifier returns how an expression writes the name of a column: with _ for each blank.
func Identifier(name string) string { return strings.ReplaceAll(name, " ", "_") }

// Reserved says what an expression would take the name for instead of a column: "a word", "a function", or "" if
// nothing.
func Reserved(name string) string {
	switch {
	case slices.Contains(reserved, Identifier(name)):
		return "a word"
	case slices.Contains(functionNames, Identifier(name)):
		return "a function"
	}
	return ""
}

// Writable says whether an expression can write the name at all: letters, digits, _ and $, not beginning with a digit.
func Writable(name string) bool {
	for i, r := range Identifier(name) {
		if r != '_' && r != '$' && !unicode.IsLetter(r) && (i == 0 || !unicode.IsDigit(r)) {
			return false
		}
	}
	return name != ""
}

// Nearest returns the candidate that is most like name, or "" if none is near enough to be meant: at most one change in
// three characters, letter case, blanks, _ and - aside. Of equally near ones it returns the first.
func Nearest(name string, candidates []string) string {
	plain := func(s string) []rune {
		return []rune(strings.ToLower(strings.NewReplacer(" ", "", "_", "", "-", "").Replace(s)))
	}
	a := plain(name)
	if len(a) > 100 || len(candidates) > 300 { // a bound on the work; people choose from fewer
		return ""
	}
	best, least := "", len(a)/3+1
	for _, candidate := range candidates {
		b := plain(candidate)
		if len(b) == 0 || len(a)-len(b) >= least || len(b)-len(a) >= least {
			continue
		}
		if d := changes(a, b); d < least {
			best, least = candidate, d
		}
	}
	return best
}

// changes counts the insertions, deletions, replacements and swaps of neighbours that turn a into b (optimal string
// alignment).
func changes(a, b []rune) int {
	var before []int
	previous := make([]int, len(b)+1)
	for j := range previous {
		previous[j] = j
	}
	for i := 1; i <= len(a); i++ {
		row := make([]int, len(b)+1)
		row[0] = i
		for j := 1; j <= len(b); j++ {
			cost := 1
			if a[i-1] == b[j-1] {
				cost = 0
			}
			row[j] = min(previous[j]+1, row[j-1]+1, previous[j-1]+cost)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				row[j] = min(row[j], before[j-2]+1)
			}
		}
		before, previous = previous, row
	}
	return previous[len(b)]
}

// mostNames is how many names a message lists.
const mostNames = 20

// List joins names for a message, in the order given; of many, the first ones.
func List(names []string) string {
	if len(names) > mostNames {
		return strings.Join(names[:mostNames], ", ") + ", …"
	}
	return strings.Join(names, ", ")
}
