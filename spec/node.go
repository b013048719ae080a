package spec

import (
	"fmt"
	"slices"
	"strings"

	"gopkg.in/yaml.v3"

	"lotproof/spec/expression"
)

// A field is one value of the plan with its place: a key's value, or an entry of a list.
type field struct {
	node *yaml.Node
	at   Position // where a mistake of the whole value is reported
	path string
	name string // what messages call it
}

// A mapping is the keys and values of one place.
type mapping struct {
	field
	r      *reader
	keys   []string // in the order of the plan
	fields map[string]field
	later  bool            // whether it holds a key of a later version, so that missing ones may be due to that
	meant  map[string]bool // keys that an unknown key is like, so that they are not missing as well
}

// isNull says whether a value is left out, or written as null or ~.
func isNull(n *yaml.Node) bool { return n.Kind == yaml.ScalarNode && n.Tag == "!!null" && n.Style == 0 }

// open returns the keys and values of f, or nil if it is not a mapping. known are the keys of the language there, later
// those of a later version; with known empty, the keys are names that the plan chooses.
func (r *reader) open(f field, known, later []string) *mapping {
	if f.node.Kind != yaml.MappingNode {
		problem := fmt.Sprintf("%s must hold keys with values", f.name)
		if isNull(f.node) {
			problem = fmt.Sprintf("%s is empty", f.name)
		}
		fix := "write key: value below it, indented"
		if len(known) > 0 {
			fix += "; keys here: " + expression.List(known)
		}
		r.wrongAt(f.at, problem, fix)
		return nil
	}
	m := &mapping{field: f, r: r, fields: map[string]field{}, meant: map[string]bool{}}
	lines := map[string]int{}
	for i := 0; i+1 < len(f.node.Content); i += 2 {
		key, value := f.node.Content[i], f.node.Content[i+1]
		if key.Kind != yaml.ScalarNode || key.Value == "" || isNull(key) {
			r.wrong(key, "a key must be a word", "write key: value")
			continue
		}
		if first, twice := lines[key.Value]; twice {
			r.wrong(key, fmt.Sprintf("key %q is given twice; the first is on line %d", key.Value, first), "keep one")
			continue
		}
		lines[key.Value] = key.Line
		if len(known) > 0 && !slices.Contains(known, key.Value) {
			m.unknown(key, known, later)
			continue
		}
		v := field{node: value, at: Position{key.Line, key.Column}, path: key.Value, name: key.Value}
		if f.path != "" {
			v.path = f.path + "." + key.Value
		}
		if value.Kind == yaml.ScalarNode && !isNull(value) {
			v.at = Position{value.Line, value.Column}
		}
		r.plan.positions[v.path] = v.at
		m.keys = append(m.keys, key.Value)
		m.fields[key.Value] = v
	}
	return m
}

func (m *mapping) unknown(key *yaml.Node, known, later []string) {
	if slices.Contains(later, key.Value) {
		m.later = true
		m.r.wrong(key, fmt.Sprintf("key %q is not available in this version", key.Value), "take it out")
		return
	}
	fix := "keys here: " + expression.List(known)
	if near := expression.Nearest(key.Value, known); near != "" {
		m.meant[near] = true
		fix = fmt.Sprintf("did you mean %q? ", near) + fix
	}
	m.r.wrong(key, fmt.Sprintf("unknown key %q", quotable(key.Value)), fix)
}

// has returns the value of a key that may be left out.
func (m *mapping) has(key string) (field, bool) {
	f, given := m.fields[key]
	return f, given
}

// need returns the value of a key that must be there.
func (m *mapping) need(key, fix string) (field, bool) {
	f, given := m.fields[key]
	if !given && !m.later && !m.meant[key] {
		problem := fmt.Sprintf("key %q is missing", key)
		if m.name != "" {
			problem += " in " + m.name
		}
		m.r.wrongAt(m.at, problem, fix)
	}
	return f, given
}

// items returns the entries of a list, or nothing if there are none. A value that stands alone is a list of one if
// alone is true.
func (r *reader) items(f field, alone bool) []field {
	switch {
	case isNull(f.node):
		r.wrongAt(f.at, f.name+" is empty", "write a value, or take the key out")
	case f.node.Kind == yaml.SequenceNode && len(f.node.Content) == 0:
		r.wrongAt(f.at, f.name+" is an empty list", "write at least one entry, or take the key out")
	case f.node.Kind == yaml.SequenceNode:
		items := make([]field, len(f.node.Content))
		for i, n := range f.node.Content {
			items[i] = field{node: n, at: Position{n.Line, n.Column}, path: fmt.Sprintf("%s[%d]", f.path, i), name: f.name}
			r.plan.positions[items[i].path] = items[i].at
		}
		return items
	case f.node.Kind == yaml.ScalarNode && alone:
		f.path += "[0]"
		r.plan.positions[f.path] = f.at
		return []field{f}
	case alone:
		r.wrongAt(f.at, f.name+" must be one value or a list", "write it as in [first, second]")
	default:
		r.wrongAt(f.at, f.name+" must be a list", "begin each entry with -, or write it as in [first, second]")
	}
	return nil
}

// quotable shortens a text for a message.
func quotable(text string) string {
	const most = 60
	characters := []rune(text)
	if len(characters) > most {
		return string(characters[:most]) + "…"
	}
	return text
}

// choices lists words for a message: "a, b or c".
func choices(words []string) string {
	if len(words) < 2 {
		return strings.Join(words, "")
	}
	return strings.Join(words[:len(words)-1], ", ") + " or " + words[len(words)-1]
}
