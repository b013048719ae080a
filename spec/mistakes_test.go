package spec

import (
	"bufio"
	"errors"
	"os"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// A change is one case of testdata/mistakes.txt.
type change struct {
	name          string
	line          int
	after         string
	out, in, want []string
}

var hiddenText = regexp.MustCompile(`\\u\{([0-9A-F]+)\}`)

func changes(t testing.TB) []change {
	t.Helper()
	f, err := os.Open("testdata/mistakes.txt")
	must(t, err)
	defer f.Close()
	var all []change
	scanner := bufio.NewScanner(f)
	for n := 1; scanner.Scan(); n++ {
		line := hiddenText.ReplaceAllStringFunc(scanner.Text(), func(s string) string {
			c, err := strconv.ParseUint(hiddenText.FindStringSubmatch(s)[1], 16, 32)
			must(t, err)
			return string(rune(c))
		})
		if strings.HasPrefix(line, "# ") {
			all = append(all, change{name: line[2:], line: n})
			continue
		}
		if line == "" || len(all) == 0 {
			continue
		}
		c := &all[len(all)-1]
		switch line[0] {
		case '=':
			c.after = line[1:]
		case '-':
			c.out = append(c.out, line[1:])
		case '+':
			c.in = append(c.in, line[1:])
		case '>':
			c.want = append(c.want, line[1:])
		default:
			t.Fatalf("mistakes.txt:%d: %q", n, line)
		}
	}
	must(t, scanner.Err())
	return all
}

// plan returns the plan of a case.
func (c change) plan(t testing.TB) string {
	t.Helper()
	small, err := os.ReadFile("testdata/small.yaml")
	must(t, err)
	lines := strings.Split(strings.TrimSuffix(string(small), "\n"), "\n")
	var at int
	if len(c.out) > 0 {
		at = slices.Index(lines, c.out[0])
	} else {
		at = slices.Index(lines, c.after) + 1
	}
	if at < 0 || at == 0 && len(c.out) == 0 || at+len(c.out) > len(lines) || !slices.Equal(lines[at:at+len(c.out)],
		c.out) {
		t.Fatalf("mistakes.txt:%d: the lines to be changed are not in small.yaml", c.line)
	}
	return strings.Join(slices.Concat(lines[:at], c.in, lines[at+len(c.out):]), "\n") + "\n"
}

// Every message whole, with its place. The rules are those of the plan language; the words are our own.
func TestMistakes(t *testing.T) {
	cases := changes(t)
	if len(cases) < 200 {
		t.Fatalf("only %d cases", len(cases))
	}
	for _, c := range cases {
		got := ""
		if _, err := read(c.plan(t)); err != nil {
			got = strings.ReplaceAll(err.Error(), "plan.yaml:", "")
		}
		if want := strings.Join(c.want, "\n"); got != want {
			t.Errorf("mistakes.txt:%d: %s\n got %s\nwant %s", c.line, c.name, got, want)
		}
	}
}

// What cannot stand in a text file of cases.
func TestNoText(t *testing.T) {
	deep := strings.Repeat("[", 20000)
	many := "seed: [" + strings.Repeat("1,", maxItems) + "1]"
	for _, tt := range []struct{ name, text, want string }{
		{"Latin-1", "lotproof: 1\ntitle: Gr\xf6\xdfe\n",
			"plan.yaml:2:10: the text is not UTF-8 here; save the plan as plain " +
				"UTF-8 text and take such characters out"},
		{"UTF-16", "\xff\xfel\x00", "plan.yaml:1:1: the text is not UTF-8 here; save the plan as plain UTF-8 text and take " +
			"such characters out"},
		{"too large", strings.Repeat("#", maxBytes+1),
			"plan.yaml: the plan is larger than 1 MiB; name the plan, not a data " +
				"file"},
		{"very deep", "seed: " + deep, "plan.yaml:1: lists and keys are nested too deeply; follow the plan language, which " +
			"needs few levels"},
		{"very long list", many, "plan.yaml:1:7: 2001 entries are too many; write at most 2000 in one place"},
	} {
		_, err := read(tt.text)
		if err == nil || err.Error() != tt.want {
			t.Errorf("%s:\n got %v\nwant %s", tt.name, err, tt.want)
		}
	}
}

// A reader that fails is not a mistake of the plan.
func TestUnreadable(t *testing.T) {
	_, err := Read(failing{}, "plan.yaml", testCatalogue())
	var mistakes Errors
	if errors.As(err, &mistakes) || !errors.Is(err, errFailing) {
		t.Errorf("got %v", err)
	}
}

var errFailing = errors.New("the disk is gone")

type failing struct{}

func (failing) Read([]byte) (int, error) { return 0, errFailing }
