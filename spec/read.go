package spec

import (
	"cmp"
	"fmt"
	"io"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"

	"gopkg.in/yaml.v3"
)

const (
	maxBytes = 1 << 20 // of a plan; people write plans, and this is a thousand pages
	maxDepth = 20      // nested lists and keys; the language itself needs fewer than ten
	maxItems = 2000    // entries of one list, or keys of one mapping
)

// Read reads a plan and checks it against the catalogue. file is the name used in messages.
//
// A plan with mistakes gives no Plan but Errors: all that were found, in file order. Where the text is not YAML at all,
// or holds characters that it must not, these mistakes come alone. Any other error is one of reading from r.
func Read(r io.Reader, file string, cat Catalogue) (*Plan, error) {
	content, err := io.ReadAll(io.LimitReader(r, maxBytes+1))
	if err != nil {
		return nil, fmt.Errorf("reading %s: %w", file, err)
	}
	if len(content) > maxBytes {
		return nil, Errors{{File: file, Problem: fmt.Sprintf("the plan is larger than %d MiB", maxBytes>>20),
			Fix: "name the plan, not a data file"}}
	}
	p := &Plan{File: file, Text: string(content), positions: map[string]Position{}}
	rd := &reader{plan: p, catalogue: cat}
	text := strings.TrimPrefix(p.Text, "\uFEFF") // a byte order mark, which some editors write
	rd.characters(text)
	if len(rd.mistakes) == 0 {
		rd.lines = strings.Split(text, "\n")
		if root := rd.document(text); root != nil {
			rd.root = root
			if rd.shape(root, 0) {
				rd.readPlan(root)
			}
		}
	}
	if len(rd.mistakes) > 0 {
		return nil, rd.sorted()
	}
	rd.digest()
	return p, nil
}

// A reader holds what is known while a plan is read.
type reader struct {
	plan      *Plan
	catalogue Catalogue
	lines     []string // of the plan, without a byte order mark
	root      *yaml.Node
	mistakes  Errors
	broken    map[string]bool // sources whose columns hold mistakes: what else is said of them would mislead
}

// wrong notes a mistake at a node.
func (r *reader) wrong(n *yaml.Node, problem, fix string) {
	r.wrongAt(Position{n.Line, n.Column}, problem, fix)
}

func (r *reader) wrongAt(at Position, problem, fix string) {
	r.mistakes = append(r.mistakes, Error{File: r.plan.File, Line: at.Line, Column: at.Column, Problem: problem, Fix: fix})
}

// sorted returns the mistakes in file order, each once.
func (r *reader) sorted() Errors {
	slices.SortStableFunc(r.mistakes, func(a, b Error) int {
		return cmp.Or(cmp.Compare(a.Line, b.Line), cmp.Compare(a.Column, b.Column), cmp.Compare(a.Problem, b.Problem),
			cmp.Compare(a.Fix, b.Fix))
	})
	return slices.Compact(r.mistakes)
}

// mostCharacters is how many places with wrong characters are reported; a file in another coding is full of them.
const mostCharacters = 20

// characters refuses what an editor does not show or another program would read otherwise, once a line.
func (r *reader) characters(text string) {
	line, column, reported := 1, 1, 0
	indentation := true
	for i, size := 0, 0; i < len(text) && len(r.mistakes) < mostCharacters; i += size {
		var c rune
		c, size = utf8.DecodeRuneInString(text[i:])
		if problem := unwanted(c, size, text[i+size:]); problem != "" && reported != line {
			r.wrongAt(Position{line, column}, problem, "save the plan as plain UTF-8 text and take such characters out")
			reported = line
		}
		if c == '\t' && indentation && reported != line && strings.TrimLeft(text[i:], " \t\r\n") != "" &&
			!strings.HasPrefix(strings.TrimLeft(text[i:], " \t\r"), "\n") {
			r.wrongAt(Position{line, column}, "a tab stands in the indentation", "indent with blanks")
			reported = line
		}
		indentation = indentation && (c == ' ' || c == '\t')
		column++
		if c == '\n' {
			line, column, indentation = line+1, 1, true
		}
	}
}

// unwanted says what is wrong with a character of the plan, if anything.
func unwanted(c rune, size int, rest string) string {
	switch {
	case c == utf8.RuneError && size == 1:
		return "the text is not UTF-8 here"
	case c == '\r' && !strings.HasPrefix(rest, "\n"):
		return "a carriage return stands without a line feed"
	case c == '\r' || c == '\n' || c == '\t':
		return ""
	case hidden(c):
		return fmt.Sprintf("the character %U cannot be seen", c)
	}
	return ""
}

// hidden says whether a character is one that a reader of the plan cannot see: control characters, breaks of line that
// editors do not show as such, marks without width, and marks that turn the direction of writing.
func hidden(c rune) bool {
	switch {
	case unicode.IsControl(c), c == 0x2028, c == 0x2029, c == 0xFEFF, c == 0x200B, c == 0x2060, c == 0x00AD:
		return true
	case c >= 0x202A && c <= 0x202E, c >= 0x2066 && c <= 0x2069, c == 0x200E, c == 0x200F, c == 0x061C:
		return true
	case c >= 0xFFF9 && c <= 0xFFFB, c&0xFFFE == 0xFFFE, c >= 0xFDD0 && c <= 0xFDEF:
		return true
	}
	return false
}

// shape walks the whole tree and refuses what a plan never needs: references, tags, deep nesting, hidden characters. It
// says whether the tree can be read further.
func (r *reader) shape(n *yaml.Node, depth int) bool {
	if depth > maxDepth {
		r.wrong(n, "lists and keys are nested too deeply", "follow the plan language, which needs few levels")
		return false
	}
	good := true
	if n.Kind == yaml.AliasNode {
		r.wrong(n, fmt.Sprintf("*%s refers to another place", n.Value), "write the value out; put text that begins with * "+
			"between quotation marks")
		good = false
	}
	if n.Anchor != "" {
		r.wrong(n, fmt.Sprintf("&%s names a place to refer to", n.Anchor), "take it out; put text that begins with & "+
			"between quotation marks")
		good = false
	}
	if n.Style&yaml.TaggedStyle != 0 {
		r.wrong(n, fmt.Sprintf("the tag %s is not allowed", n.Tag), "take it out; put text that begins with ! "+
			"between quotation marks")
		good = false
	}
	if remark := []rune(n.LineComment); len(remark) > 1 && n.Style == 0 && (unicode.IsLetter(remark[1]) ||
		unicode.IsDigit(remark[1])) {
		r.wrong(n, fmt.Sprintf("%s begins a remark and does not belong to the text before it", quotable(n.LineComment)),
			"put the text between quotation marks, or write a blank after #")
	}
	if n.Kind == yaml.ScalarNode {
		for _, c := range n.Value {
			if c != '\n' && c != '\t' && hidden(c) {
				r.wrong(n, fmt.Sprintf("the text holds the character %U, which cannot be seen", c), "take it out")
				break
			}
		}
	}
	entries := len(n.Content)
	if n.Kind == yaml.MappingNode {
		entries /= 2
	}
	if entries > maxItems {
		r.wrong(n, fmt.Sprintf("%d entries are too many", entries), fmt.Sprintf("write at most %d in one place", maxItems))
		return false
	}
	for _, child := range n.Content {
		good = r.shape(child, depth+1) && good
	}
	return good
}
