package spec

import (
	"errors"
	"io"
	"strconv"
	"strings"

	"gopkg.in/yaml.v3"
)

// document reads the text into a tree of nodes, the only thing that the YAML library is asked for: its conversions of
// values change numbers in silence. It returns nil after noting why there is none.
func (r *reader) document(text string) *yaml.Node {
	first, second, err := decode(text)
	switch {
	case err != nil:
		r.syntax(err)
		return nil
	case second != nil:
		r.wrong(second, "a second document follows", "write one plan in one file, and no line ---")
		return nil
	case first == nil:
		r.wrongAt(Position{1, 1}, "the plan is empty", "write a study plan")
		return nil
	}
	return first
}

// decode returns the content of the first document, or nil if there is none, and the second document.
func decode(text string) (first, second *yaml.Node, err error) {
	decoder := yaml.NewDecoder(strings.NewReader(text))
	var documents [2]*yaml.Node
	for i := range documents {
		var n yaml.Node
		if err := decoder.Decode(&n); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			return nil, nil, err
		}
		documents[i] = &n
	}
	first, second = documents[0], documents[1]
	if first != nil {
		if len(first.Content) == 0 || isNull(first.Content[0]) && first.Content[0].Value == "" {
			return nil, second, nil
		}
		first = first.Content[0]
	}
	return first, second, nil
}

// syntax notes a mistake in the layout of the plan. What the library says of it is put into plain words. It says a line
// too, but often that of the beginning of the mapping or list in which the mistake is, or the line before.
func (r *reader) syntax(err error) {
	problem, line := strings.TrimPrefix(err.Error(), "yaml: "), 1
	if place, rest, given := strings.Cut(problem, ": "); given && strings.HasPrefix(place, "line ") {
		line, _ = strconv.Atoi(place[len("line "):])
		problem = rest
	}
	for _, known := range []struct{ contains, problem, fix string }{
		{"block sequence entries are not allowed", "an entry of a list begins where none can be",
			"begin each entry with - on a line of its own; put text that begins with - between quotation marks"},
		{"mapping keys are not allowed", "the sign ? stands where no key can be",
			"put text that begins with ? between quotation marks"},
		{"comment or line break", "text follows | or > on the same line",
			"write it below, indented; put text that begins with such a sign between quotation marks"},
		{"document indicator", "a line --- or ... stands within a text or a list", "take it out"},
		{"unexpected ':'", "a colon stands within a text", "put text that holds a colon between quotation marks"},
		{"cannot start any token", "a character stands where no text can begin",
			"indent with blanks, not with tabs, and put text that begins with a sign between quotation marks"},
		{"mapping values are not allowed", "a colon stands where no key can be",
			"put text that holds a colon between quotation marks, and look at the indentation"},
		{"could not find expected ':'", "a colon is missing after a key", "write key: value"},
		{"did not find expected key", "this is no key with a value", "write key: value, indented like the keys above; " +
			"put text with quotation marks or a colon in it between quotation marks"},
		{"did not find expected '-'", "this is no entry of the list above", "begin it with -, or indent it as what it is"},
		{"unexpected end of stream", "a quotation mark is not closed", "close it"},
		{"did not find expected ',' or ']'", "a list is not closed",
			"separate its entries with commas and close it with ]; " +
				"put text with brackets or commas between quotation marks"},
		{"did not find expected ',' or '}'", "a mapping is not closed",
			"separate its keys with commas and close it with }; " +
				"put text with brackets or commas between quotation marks"},
		{"node content", "a value or a key is missing", "look at the brackets and commas of this line"},
		{"<document start>", "text follows after the end of the plan", "indent it like the keys above, or take it out"},
		{"escape c", `a backslash between " and " is not understood`, `write \\ for a backslash, or put the text ` +
			"between ' and '"},
		{"hexdecimal number", `a backslash between " and " is not understood`, `write \\ for a backslash, or put the text ` +
			"between ' and '"},
		{"unknown anchor", "the sign * begins a reference", "put text that begins with * between quotation marks"},
		{"alphabetic or numeric", "the sign & or * names a reference",
			"put text that begins with it between quotation marks"},
		{"exceeded max depth", "lists and keys are nested too deeply", "follow the plan language, which needs few levels"},
		{"URI escaped", "the sign ! begins a tag", "put text that begins with ! between quotation marks"},
		{"expected '>'", "the sign ! begins a tag", "put text that begins with ! between quotation marks"},
		{"tag", "the sign ! begins a tag", "put text that begins with ! between quotation marks"},
		{"incompatible YAML", "a line that begins with % asks for another version of YAML", "take it out"},
		{"directive", "a line that begins with % is not understood", "take it out"},
		{"", "the layout is not understood here", "look at the indentation, the colons and the quotation marks of this " +
			"line and the one above"},
	} {
		if strings.Contains(problem, known.contains) {
			if len(r.plan.Text) <= maxSearched {
				line = r.firstWrongLine()
			}
			last := len(r.lines)
			if last > 1 && r.lines[last-1] == "" {
				last--
			}
			r.wrongAt(Position{Line: max(1, min(line, last))}, known.problem, known.fix)
			return
		}
	}
}

// Bounds of firstWrongLine, in bytes: of a plan in which it searches, and of all that it reads again.
const (
	maxSearched = 256 << 10
	maxTrials   = 8 << 20
)

// firstWrongLine finds the line with which the plan ceases to be readable: the one after the longest readable
// beginning. If the mistake is within a list or text over several lines, that is the line where the list or text
// begins.
func (r *reader) firstWrongLine() int {
	trials := 0
	readable := func(lines int) bool {
		text := strings.Join(r.lines[:lines], "\n") + "\n"
		trials += len(text)
		_, _, err := decode(text)
		return err == nil
	}
	good, bad := 0, len(r.lines) // the first lines that are known to be readable, and known not to be
	for {
		for good+1 < bad {
			if middle := (good + bad) / 2; readable(middle) {
				good = middle
			} else {
				bad = middle
			}
		}
		// Perhaps only because a list goes on below.
		further := good
		for next := good + 2; next <= len(r.lines) && next < good+30 && trials < maxTrials; next++ {
			if readable(next) {
				further = next
				break
			}
		}
		if further == good {
			break
		}
		good, bad = further, len(r.lines)
	}
	return good + 1
}
