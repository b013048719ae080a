package spec

import (
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// FuzzRead: whatever the text, Read ends and gives a plan or mistakes; every mistake says something and has a place
// inside the file; no two are the same, and they stand in file order; a plan reads again with the same digest, also
// without trailing blank lines.
func FuzzRead(f *testing.F) {
	names, err := filepath.Glob("../examples/*/*.yaml")
	must(f, err)
	own, err := filepath.Glob("testdata/*.yaml")
	must(f, err)
	if len(own) == 0 {
		f.Fatal("no plans to start from") // Glob is silent about a moved folder
	}
	for _, name := range append(names, own...) {
		b, err := os.ReadFile(name)
		must(f, err)
		f.Add(string(b))
	}
	for _, c := range changes(f) {
		f.Add(c.plan(f))
	}
	f.Fuzz(func(t *testing.T, text string) {
		p, err := read(text)
		if err != nil {
			insideFile(t, text, err)
			return
		}
		again, err := read(strings.TrimRight(p.Text, "\n ") + "\n")
		must(t, err)
		if p.Text != text || again.SHA256 != p.SHA256 || again.Seed != p.Seed {
			t.Error("another digest at the second reading")
		}
	})
}

func insideFile(t *testing.T, text string, err error) {
	t.Helper()
	var mistakes Errors
	if !errors.As(err, &mistakes) || len(mistakes) == 0 {
		t.Fatalf("error %v", err)
	}
	lines := strings.Split(strings.TrimPrefix(text, "\uFEFF"), "\n")
	for i, e := range mistakes {
		if e.Problem == "" || e.Fix == "" && !strings.Contains(e.Problem, "not available in an expression") &&
			!strings.Contains(e.Problem, "too large") {
			t.Errorf("%v: says too little", e)
		}
		if e.Line < 1 || e.Line > len(lines) || e.Column < 0 || e.Column > len([]rune(lines[e.Line-1]))+1 {
			t.Errorf("%v: outside of the file", e)
		}
		if i > 0 && (e == mistakes[i-1] || e.Line < mistakes[i-1].Line) {
			t.Errorf("%v: out of order", e)
		}
	}
}
