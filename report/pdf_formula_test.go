package report

import (
	"strings"
	"testing"
)

// shape writes pieces with their structure visible.
func shape(in []piece) string {
	var b strings.Builder
	for _, p := range in {
		switch p.kind {
		case pieceText:
			b.WriteString(p.text)
		case pieceGroup:
			b.WriteString("(" + shape(p.inner) + ")")
		case pieceRoot:
			b.WriteString("root[" + shape(p.inner) + "]")
		case pieceRaised:
			b.WriteString("up[" + shape(p.inner) + "]")
		case pieceLowered:
			b.WriteString("down[" + shape(p.inner) + "]")
		case pieceFraction:
			b.WriteString("[" + shape(p.inner) + " over " + shape(p.below) + "]")
		}
	}
	return b.String()
}

// What a slash and a radical take is the usual precedence of printed mathematics (common practice, no single source).
func TestReadFormula(t *testing.T) {
	tests := []struct{ in, want string }{
		{"x̄ = Σxᵢ / n", "x̄ = [Σxᵢ over n]"},
		{"s = √( Σ(xᵢ − x̄)² / (n−1) )", "s = root[[Σ(xᵢ − x̄)² over n−1]]"},
		{"b = Σ(xᵢ − x̄)(yᵢ − ȳ) / Σ(xᵢ − x̄)²", "b = [Σ(xᵢ − x̄)(yᵢ − ȳ) over Σ(xᵢ − x̄)²]"},
		{"a / b / c", "[[a over b] over c]"},
		{"1 − a/b + c", "1 − [a over b] + c"},
		{"2 a/b", "2 [a over b]"},
		{"2 a / b", "[2 a over b]"},
		{"a/b·c", "[a over b]·c"},
		{"Φ( z₀ + (z₀ + z)/(1 − a(z₀ + z)) )", "Φ( z₀ + [z₀ + z over 1 − a(z₀ + z)] )"},
		{"(Σdᵢ²)^(3/2)", "(Σdᵢ²)up[3/2]"},
		{"x^2 / n_i", "[xup[2] over ndown[i]]"},
		{"χ²_(1−α/2)(n−1)", "χ²down[1−α/2](n−1)"},
		{"t*₍B+1−k₎", "t*down[(B+1−k)]"},
		{"x₍ⱼ₊₁₎", "xdown[(j+1)]"},
		{"x₍₍ₙ₊₁₎/₂₎ for odd n", "xdown[((n+1)/2)] for odd n"},
		{"x̄ = (1/n)·Σxᵢ", "x̄ = [1 over n]·Σxᵢ"},
		{"exp(1/n)", "exp([1 over n])"},
		{"(1/n)²", "([1 over n])²"},
		{"√n·√(n−1)", "root[n]·root[n−1]"},
		{"√ (n−1)", "root[n−1]"},
		{"(a + b) / 2", "[a + b over 2]"},
		{"(a)(b) / 2", "[(a)(b) over 2]"},
		{"#{t* < t}/B", "#{t* < t}/B"},
		{"/ n", "/ n"},
		{"n /", "n /"},
		{"a /b", "a /b"},
		{"a^ b", "a^ b"},
		{"√", "√"},
		{"", ""},
	}
	for _, tt := range tests {
		got, ok := readFormula(tt.in)
		if !ok || shape(got) != tt.want {
			t.Errorf("%q reads as %q, %v; want %q", tt.in, shape(got), ok, tt.want)
		}
	}
	for _, in := range []string{"(a", "a)", "((a)", "x₍k", "x₎", "x₍k)", ")("} {
		if _, ok := readFormula(in); ok {
			t.Errorf("%q: brackets that do not match were accepted", in)
		}
	}
}

// A formula that does not fit its band is set as plain text and loses nothing.
func TestFormulaTooWide(t *testing.T) {
	text := strings.Repeat("(x + y)/(z + 1) + ", 20) + "w"
	f := newFlow()
	f.add(formula(text, style{face: sans, size: 9}, leftEdge, 100)...)
	var got strings.Builder
	for _, m := range f.pages[0].marks {
		got.WriteString(m.text)
	}
	strip := func(s string) string { return strings.ReplaceAll(s, " ", "") }
	if strip(got.String()) != strip(text) {
		t.Errorf("set as %q", got.String())
	}
}
