package expression

import (
	"errors"
	"strings"
	"testing"
	"unicode/utf8"
)

// FuzzCompile: whatever the text, Compile ends; a mistake lies within the text; what is accepted, is accepted again and
// has a finite value or says why not.
func FuzzCompile(f *testing.F) {
	for _, text := range []string{"strength - 1.20", `arm == "aged" and not (note in ["void", 'x'])`,
		"15 * strength / width",
		"log10(max(strength, 1e-3)) > -2", "((1))", "3 > 2 > 1", "a // b", "[1, 2]", "1..2", `"\u00e9"`, "sqrt(-1)",
		"Größe\n> 1"} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		for _, want := range []Type{Number, Condition} {
			p, err := Compile(text, columns, want, standard)
			if err != nil {
				inside(t, text, err)
				continue
			}
			if utf8.RuneCountInString(text) > maxLength {
				t.Fatal("a long text is accepted")
			}
			if _, err := Compile(text, columns, want, Functions{}); err != nil {
				t.Fatalf("accepted with functions, not without: %v", err)
			}
			switch want {
			case Number:
				if v, err := p.Number(row(p)); err == nil && v-v != 0 {
					t.Errorf("value %v", v)
				}
			case Condition:
				if _, err := p.Condition(row(p)); err != nil && err.Error() == "" {
					t.Error("an error without words")
				}
			}
		}
	})
}

func inside(t *testing.T, text string, err error) {
	t.Helper()
	var e *Error
	if !errors.As(err, &e) || e.Problem == "" {
		t.Fatalf("error %#v", err)
	}
	lines := strings.Split(text, "\n")
	if e.Line < 1 || e.Line > len(lines) || e.Column < 1 || e.Column > len([]rune(lines[e.Line-1]))+1 {
		t.Errorf("%q: %v is outside", text, err)
	}
}
