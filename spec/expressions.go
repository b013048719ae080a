package spec

import (
	"errors"
	"strings"

	"gopkg.in/yaml.v3"

	"lotproof/spec/expression"
)

// What the other files need of the YAML library.
type node = yaml.Node

const (
	scalarNode  = yaml.ScalarNode
	mappingNode = yaml.MappingNode
)

// keyAt returns the place of a key.
func (r *reader) keyAt(m *mapping, key string) Position {
	for i := 0; i < len(m.node.Content); i += 2 {
		if k := m.node.Content[i]; k.Value == key {
			return Position{k.Line, k.Column}
		}
	}
	return m.at
}

// fileColumns returns the columns of the file for expressions.
func (r *reader) fileColumns(s *Source) []expression.Column {
	var columns []expression.Column
	for _, c := range s.Columns {
		kind := expression.Text
		if c.Type == TypeNumber {
			kind = expression.Number
		}
		columns = append(columns, expression.Column{Name: c.Name, Type: kind, Levels: c.Levels})
	}
	return columns
}

// condition returns a condition over the columns of a source, derived ones included.
func (r *reader) condition(f field, s *Source) string {
	columns := r.fileColumns(s)
	for _, d := range s.Derive {
		columns = append(columns, expression.Column{Name: d.Name, Type: expression.Number})
	}
	return r.expression(f, columns, expression.Condition, r.broken[s.Name])
}

// expression returns the text of an expression and checks it. Where the columns themselves hold mistakes, only the text
// is read: what could be said of it may be due to them.
func (r *reader) expression(f field, columns []expression.Column, want expression.Type, columnsWrong bool) string {
	text, ok := r.text(f)
	if !ok || columnsWrong {
		return text
	}
	_, err := expression.Compile(text, columns, want, expression.Functions{})
	var mistake *expression.Error
	if errors.As(err, &mistake) {
		r.wrongAt(r.within(f, text, mistake.Line, mistake.Column), mistake.Problem, mistake.Fix)
	}
	return text
}

// within returns the place in the plan of a place in the text of a value: exactly, where the plan shows the text as it
// is, else the place of the value.
func (r *reader) within(f field, text string, line, column int) Position {
	n := f.node
	if n.Style&yaml.LiteralStyle != 0 {
		want := strings.Split(text, "\n")[line-1]
		if at := n.Line - 1 + line; at < len(r.lines) {
			raw := strings.TrimSuffix(r.lines[at], "\r")
			if indent, is := strings.CutSuffix(raw, want); is && strings.Trim(indent, " ") == "" {
				return Position{at + 1, len(indent) + column}
			}
		}
		return f.at
	}
	if line > 1 || n.Line < 1 || n.Line > len(r.lines) {
		return f.at
	}
	raw := []rune(r.lines[n.Line-1])
	at := n.Column - 1
	if n.Style&(yaml.SingleQuotedStyle|yaml.DoubleQuotedStyle) != 0 {
		at++
	} else if n.Style&yaml.FoldedStyle != 0 {
		return f.at
	}
	for i, c := range []rune(text) {
		if at >= len(raw) {
			return f.at
		}
		if i == column-1 {
			break
		}
		single, double := n.Style&yaml.SingleQuotedStyle != 0, n.Style&yaml.DoubleQuotedStyle != 0
		if single && c == '\'' || double && raw[at] == '\\' && (c == '"' || c == '\\') {
			at++ // written as two characters
		}
		if at >= len(raw) || raw[at] != c {
			return f.at
		}
		at++
	}
	return Position{n.Line, at + 1}
}
