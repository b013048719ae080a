package record

import (
	"bytes"
	"encoding/json"
	"fmt"
	"slices"
)

// A Difference is one figure or text that two results do not share.
type Difference struct {
	Where string // in words, such as: statistic "aged median", interval 1 (bca, 0.95), lower
	Was   string // as JSON; empty if there was nothing
	Is    string
}

func (d Difference) String() string {
	switch {
	case d.Was == "":
		return fmt.Sprintf("%s: is %s, was not there", d.Where, d.Is)
	case d.Is == "":
		return fmt.Sprintf("%s: was %s, is not there", d.Where, d.Was)
	}
	return fmt.Sprintf("%s: was %s, is %s", d.Where, d.Was, d.Is)
}

// Differences lists every difference between two results to the last digit, in the order of the first.
func Differences(was, is *Results) ([]Difference, error) {
	a, err := tree(was)
	if err != nil {
		return nil, err
	}
	b, err := tree(is)
	if err != nil {
		return nil, err
	}
	var out []Difference
	compare("", a, b, &out)
	return out, nil
}

// A node is a JSON value that keeps the order of keys.
type node struct {
	text   string // of a scalar, as written
	keys   []string
	values []*node // of an object or a list
	list   bool
}

func tree(r *Results) (*node, error) {
	b, err := compact(r)
	if err != nil {
		return nil, err
	}
	d := json.NewDecoder(bytes.NewReader(b))
	d.UseNumber()
	return parse(d)
}

func parse(d *json.Decoder) (*node, error) {
	t, err := d.Token()
	if err != nil {
		return nil, err
	}
	open, ok := t.(json.Delim)
	if !ok {
		text, err := compact(t)
		return &node{text: string(text)}, err
	}
	n := &node{list: open == '['}
	for d.More() {
		if !n.list {
			key, err := d.Token()
			if err != nil {
				return nil, err
			}
			n.keys = append(n.keys, key.(string))
		}
		value, err := parse(d)
		if err != nil {
			return nil, err
		}
		n.values = append(n.values, value)
	}
	_, err = d.Token()
	return n, err
}

func (n *node) get(key string) *node {
	if i := slices.Index(n.keys, key); i >= 0 {
		return n.values[i]
	}
	return nil
}

// name tells an entry of a list by what it is called, where it is called something.
func (n *node) name() string {
	for _, key := range []string{"id", "name", "code", "criterion"} {
		if v := n.get(key); v != nil {
			return v.text
		}
	}
	if method, level := n.get("method"), n.get("confidence"); method != nil && level != nil {
		return method.text + " at " + level.text
	}
	return ""
}

// words name the lists of the record in the singular.
var words = map[string]string{"statistics": "statistic", "sources": "source", "intervals": "interval", "advisories": "advisory",
	"accept": "criterion", "failures": "failure", "parameters": "parameter", "quantiles": "quantile", "counts": "count",
	"edges": "edge", "strata": "stratum", "exclusions": "exclusion", "lines": "line", "evidence": "evidence"}

func compare(at string, a, b *node, out *[]Difference) {
	join := func(key string) string {
		if at == "" {
			return key
		}
		return at + ", " + key
	}
	if a.values == nil && b.values == nil && a.keys == nil && b.keys == nil && a.list == b.list {
		if a.text != b.text {
			*out = append(*out, Difference{at, a.text, b.text})
		}
		return
	}
	if a.list != b.list || (a.text != "") != (b.text != "") {
		*out = append(*out, Difference{at, a.json(), b.json()})
		return
	}
	if a.list {
		single, base := at, ""
		if i := lastComma(at); i >= 0 {
			base, single = at[:i], at[i+2:]
		}
		if w, ok := words[single]; ok {
			single = w
		}
		for i := range max(len(a.values), len(b.values)) {
			var x, y *node
			if i < len(a.values) {
				x = a.values[i]
			}
			if i < len(b.values) {
				y = b.values[i]
			}
			known := x
			if known == nil {
				known = y
			}
			label := fmt.Sprintf("%s %d", single, i+1)
			if name := known.name(); name != "" {
				label = fmt.Sprintf("%s %s", single, name)
			}
			if base != "" {
				label = base + ", " + label
			}
			pair(label, x, y, out)
		}
		return
	}
	for i, key := range a.keys {
		pair(join(key), a.values[i], b.get(key), out)
	}
	for i, key := range b.keys {
		if a.get(key) == nil {
			pair(join(key), nil, b.values[i], out)
		}
	}
}

func pair(at string, x, y *node, out *[]Difference) {
	switch {
	case x == nil:
		*out = append(*out, Difference{at, "", y.json()})
	case y == nil:
		*out = append(*out, Difference{at, x.json(), ""})
	default:
		compare(at, x, y, out)
	}
}

func lastComma(s string) int {
	for i := len(s) - 2; i >= 0; i-- {
		if s[i] == ',' && s[i+1] == ' ' {
			return i
		}
	}
	return -1
}

// json writes the value again; a long one is shortened, since it is only shown.
func (n *node) json() string {
	text := n.text
	if n.values != nil || n.list || n.keys != nil {
		text = fmt.Sprintf("an entry of %d parts", len(n.values))
	}
	if r := []rune(text); len(r) > 120 {
		text = string(r[:117]) + "…"
	}
	return text
}
