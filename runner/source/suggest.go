package source

import (
	"slices"
	"strings"

	"lotproof/spec/expression"
)

// mostNames is how many names of columns, levels or sheets a message lists.
const mostNames = 20

// names joins names for a message, in the order given.
func names(all []string) string {
	quoted := make([]string, 0, min(len(all), mostNames))
	for _, name := range all {
		if len(quoted) == mostNames {
			return strings.Join(quoted, ", ") + ", …"
		}
		quoted = append(quoted, quote(name))
	}
	return strings.Join(quoted, ", ")
}

// suggestion words the fix for a name that is not among candidates, which are called what: "headings there: …".
func suggestion(name string, candidates []string, what string) string {
	candidates = slices.DeleteFunc(slices.Clone(candidates), func(s string) bool { return s == "" })
	if len(candidates) == 0 {
		return ""
	}
	list := what + ": " + names(candidates)
	if near := expression.Nearest(name, candidates); near != "" {
		return "did you mean " + quote(near) + "? " + list
	}
	return list
}
