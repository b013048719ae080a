package spec

import (
	"bytes"
	"os"
	"strings"
	"testing"

	"gopkg.in/yaml.v3"
)

// Digests by Python 3.11 (json, hashlib) with PyYAML's BaseLoader, as described at digest.
func TestDigest(t *testing.T) {
	const want = "1b36de419b877cb7a5b770801d7a5ae6980b34c42af6b16494eba27a7dec37ff"
	if got := readFile(t, "testdata/pouch.yaml").SHA256; got != want {
		t.Errorf("digest %s, want %s", got, want)
	}
	small, err := os.ReadFile("testdata/small.yaml")
	must(t, err)
	p, err := read(strings.Replace(string(small), "seed: 1", "seed: derived", 1))
	must(t, err)
	if want := "b9c44bb0caa355f28f3b1357ffb720b41ec750aa15e6cc257a656edcfac0b99f"; p.SHA256 != want {
		t.Errorf("digest %s, want %s", p.SHA256, want)
	}
	if want := (Seed{Value: 7790849396065143232, Derived: true}); p.Seed != want {
		t.Errorf("seed %v, want %v", p.Seed, want)
	}
}

func TestCanonical(t *testing.T) {
	root, _, err := decode("b: [1.20, 'x\"y', \"a\\tb\\nc\\\\\"]\na: {é: ~, a b: {}}\nseed: 7\n")
	must(t, err)
	if got, want := canonical(root, ""),
		`{"a":{"a b":{},"é":"~"},"b":["1.20","x\"y","a\tb\nc\\"],"seed":"7"}`; got != want {
		t.Errorf("got %s, want %s", got, want)
	}
	if got, want := canonical(root, "seed"), `{"a":{"a b":{},"é":"~"},"b":["1.20","x\"y","a\tb\nc\\"]}`; got != want {
		t.Errorf("got %s, want %s", got, want)
	}
}

// testPlans are plans without a mistake.
var testPlans = []string{"testdata/pouch.yaml", "testdata/small.yaml"}

// each calls f for every scalar of a tree that is a value, and for every mapping.
func each(n *yaml.Node, f func(*yaml.Node)) {
	f(n)
	for i, child := range n.Content {
		if n.Kind != yaml.MappingNode || i%2 == 1 {
			each(child, f)
		}
	}
}

// Layout is the user's: indentation, remarks, quotation marks, flow or block style and the order of keys do not enter.
func TestLayoutDoesNotEnter(t *testing.T) {
	for _, name := range testPlans {
		p := readFile(t, name)
		layouts := map[string]func(*yaml.Node){
			"block style": func(n *yaml.Node) { n.Style &^= yaml.FlowStyle },
			"keys in the opposite order": func(n *yaml.Node) {
				if n.Kind != yaml.MappingNode {
					return
				}
				for i, j := 0, len(n.Content)-2; i < j; i, j = i+2, j-2 {
					n.Content[i], n.Content[i+1], n.Content[j], n.Content[j+1] = n.Content[j], n.Content[j+1], n.Content[i],
						n.Content[i+1]
				}
			},
			"text in double quotation marks": func(n *yaml.Node) {
				if n.Kind == yaml.ScalarNode && n.Tag == "!!str" {
					n.Style = yaml.DoubleQuotedStyle
				}
			},
			"text in single quotation marks": func(n *yaml.Node) {
				if n.Kind == yaml.ScalarNode && n.Tag == "!!str" && !strings.Contains(n.Value, "\n") {
					n.Style = yaml.SingleQuotedStyle
				}
			},
			"remarks": func(n *yaml.Node) {
				if n.Kind == yaml.ScalarNode && n.Style == 0 {
					n.LineComment = "# a remark"
				}
			},
		}
		for layout, change := range layouts {
			for _, indent := range []int{2, 7} {
				root, _, err := decode(p.Text)
				must(t, err)
				each(root, change)
				var b bytes.Buffer
				encoder := yaml.NewEncoder(&b)
				encoder.SetIndent(indent)
				must(t, encoder.Encode(root))
				q, err := read(b.String())
				if err != nil {
					t.Errorf("%s, %s, indented by %d: %v", name, layout, indent, err)
					continue
				}
				if b.String() == p.Text {
					t.Errorf("%s, %s: nothing has changed", name, layout)
				}
				if q.SHA256 != p.SHA256 {
					t.Errorf("%s, %s, indented by %d: another digest", name, layout, indent)
				}
			}
		}
		for what, text := range map[string]string{
			"line ends":       strings.ReplaceAll(p.Text, "\n", "\r\n"),
			"byte order mark": "\uFEFF" + p.Text,
			"remarks":         "# first\n\n" + strings.ReplaceAll(p.Text, "statistics:\n", "# more\nstatistics: # here\n"),
			"document marks":  "---\n" + p.Text + "...\n",
		} {
			q, err := read(text)
			must(t, err)
			if q.SHA256 != p.SHA256 {
				t.Errorf("%s, %s: another digest", name, what)
			}
		}
	}
}

// Any changed value changes the digest, and so does any value or entry left out, and any key renamed.
func TestEveryValueEnters(t *testing.T) {
	for _, name := range testPlans {
		text, err := os.ReadFile(name)
		must(t, err)
		root, _, err := decode(string(text))
		must(t, err)
		seen := map[string]int{canonical(root, ""): 0}
		n := 0
		look := func() {
			n++
			content := canonical(root, "")
			if first, twice := seen[content]; twice {
				t.Errorf("%s: change %d gives the content of change %d", name, n, first)
			}
			seen[content] = n
		}
		each(root, func(node *yaml.Node) {
			if node.Kind == yaml.ScalarNode {
				was := node.Value
				for _, now := range []string{was + "0", was + " ", strings.ToUpper(was) + "é", ""} {
					node.Value = now
					look()
				}
				node.Value = was
				return
			}
			entries := node.Content
			step := 1
			if node.Kind == yaml.MappingNode {
				step = 2
				for i := 0; i < len(entries); i += 2 {
					was := entries[i].Value
					entries[i].Value += "x"
					look()
					entries[i].Value = was
				}
			}
			for i := 0; i < len(entries); i += step {
				node.Content = append(append([]*yaml.Node{}, entries[:i]...), entries[i+step:]...)
				look()
			}
			node.Content = entries
		})
		if n < 50 {
			t.Errorf("%s: only %d changes", name, n)
		}
	}
}
