package spec

import (
	"fmt"
	"strings"
)

// An Error is one mistake in a plan or in a data file, at the place the reader should edit.
type Error struct {
	File         string
	Line, Column int    // both from 1; Column counts characters; 0: not known
	Problem      string // what is wrong, with the offending text; lower case, no full stop
	Fix          string // what to do instead; may be empty
}

func (e Error) Error() string {
	var b strings.Builder
	b.WriteString(e.File)
	if e.Line > 0 {
		fmt.Fprintf(&b, ":%d", e.Line)
		if e.Column > 0 {
			fmt.Fprintf(&b, ":%d", e.Column)
		}
	}
	fmt.Fprintf(&b, ": %s", e.Problem)
	if e.Fix != "" {
		fmt.Fprintf(&b, "; %s", e.Fix)
	}
	return b.String()
}

// Errors are all the mistakes found, one a line.
type Errors []Error

func (e Errors) Error() string {
	lines := make([]string, len(e))
	for i, one := range e {
		lines[i] = one.Error()
	}
	return strings.Join(lines, "\n")
}
