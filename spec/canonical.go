package spec

import (
	"crypto/sha256"
	"encoding/binary"
	"encoding/hex"
	"slices"
	"strings"

	"gopkg.in/yaml.v3"
)

// digest sets the digest of the plan and, where it is derived, the seed.
//
// Plan.SHA256 is the SHA-256 of the canonical content, which is the plan as JSON in UTF-8: a mapping is an object with
// its keys in ascending order of their UTF-8 bytes; a list is an array in the order of the plan; every value is a
// string that holds its text, so that the number 1.20 is "1.20"; there is no white space between the parts. In a
// string, " and \ are written \" and \\, a line feed \n and a tab \t; every other character stands for itself (a plan
// holds no other control characters). Comments, indentation, quotation marks and the order of keys thus do not enter.
//
// With Python 3 and PyYAML, as an independent way to the same digest:
//
//	content = yaml.load(open("plan.yaml", encoding="utf-8-sig"), yaml.BaseLoader)
//	text = json.dumps(content, sort_keys=True, separators=(",", ":"), ensure_ascii=False)
//	print(hashlib.sha256(text.encode()).hexdigest())
//
// A derived seed is made of the first 8 bytes, most significant first, of the SHA-256 of the canonical content without
// the key "seed" of the outermost mapping.
func (r *reader) digest() {
	sum := sha256.Sum256([]byte(canonical(r.root, "")))
	r.plan.SHA256 = hex.EncodeToString(sum[:])
	if r.plan.Seed.Derived {
		sum := sha256.Sum256([]byte(canonical(r.root, "seed")))
		r.plan.Seed.Value = binary.BigEndian.Uint64(sum[:8])
	}
}

// canonical returns the canonical content of a tree, without one key of its outermost mapping.
func canonical(root *yaml.Node, without string) string {
	var b strings.Builder
	writeCanonical(&b, root, without)
	return b.String()
}

func writeCanonical(b *strings.Builder, n *yaml.Node, without string) {
	switch n.Kind {
	case yaml.MappingNode:
		keys := make([]string, 0, len(n.Content)/2)
		values := map[string]*yaml.Node{}
		for i := 0; i < len(n.Content); i += 2 {
			if key := n.Content[i].Value; key != without || without == "" {
				keys = append(keys, key)
				values[key] = n.Content[i+1]
			}
		}
		slices.Sort(keys)
		b.WriteByte('{')
		for i, key := range keys {
			if i > 0 {
				b.WriteByte(',')
			}
			writeText(b, key)
			b.WriteByte(':')
			writeCanonical(b, values[key], "")
		}
		b.WriteByte('}')
	case yaml.SequenceNode:
		b.WriteByte('[')
		for i, item := range n.Content {
			if i > 0 {
				b.WriteByte(',')
			}
			writeCanonical(b, item, "")
		}
		b.WriteByte(']')
	default:
		writeText(b, n.Value)
	}
}

var escapes = strings.NewReplacer(`"`, `\"`, `\`, `\\`, "\n", `\n`, "\t", `\t`)

func writeText(b *strings.Builder, text string) {
	b.WriteByte('"')
	b.WriteString(escapes.Replace(text))
	b.WriteByte('"')
}
