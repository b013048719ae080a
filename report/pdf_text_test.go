package report

import (
	"bytes"
	"math"
	"strings"
	"testing"
	"unicode"

	"github.com/go-pdf/fpdf"
)

// Widths are checked against those that the PDF library reads from the same font files.
func TestWidthsAgreeWithLibrary(t *testing.T) {
	f := fpdf.New("P", "mm", "A4", "")
	for i, name := range familyName {
		f.AddUTF8FontFromBytes(name, "", bytes.Clone(fontFile(face(i))))
	}
	f.AddPage()
	for i, name := range familyName {
		f.SetFont(name, "", 9)
		for _, text := range []string{"The quick brown fox", "x̄ = Σxᵢ/n ≤ ½√(1−α)", "Прочность, αντοχή, Zażółć",
			"0123456789.,−", "⟨U+6F22⟩"} {
			got, want := face(i).width(text, 9), f.GetStringWidth(text)
			// The library rounds each width to whole thousandths of the size in its own way: one unit a character.
			if tol := 9 * point / 1000 * float64(len([]rune(text))); math.Abs(got-want) > tol {
				t.Errorf("%s, %q: width %.4f, library says %.4f", name, text, got, want)
			}
		}
	}
}

func TestClean(t *testing.T) {
	tests := []struct{ name, in, want string }{
		{"plain", "N per 15 mm", "N per 15 mm"},
		{"Greek and Cyrillic", "Ψ αντοχή прочность", "Ψ αντοχή прочность"},
		{"signs", "x̄ ± θ̂ ≤ √½", "x̄ ± θ̂ ≤ √½"},
		{"Chinese", "強度 test", "⟨U+5F37 U+5EA6⟩ test"},
		{"beyond the basic plane", "a😀b", "a⟨U+1F600⟩b"},
		{"right to left", "חוזק", "⟨U+05D7 U+05D5 U+05D6 U+05E7⟩"},
		{"hidden order mark", "1.2\u202e0.9", "1.2⟨U+202E⟩0.9"},
		{"invisible", "a\u200bb\u00adc\x00", "a⟨U+200B⟩b⟨U+00AD⟩c⟨U+0000⟩"},
		{"tab and lines", "a\tb\r\nc", "a    b\nc"},
		{"broken encoding", "a\xffb", "a\ufffdb"},
		{"empty", "", ""},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			if got := sans.clean(tt.in); got != tt.want {
				t.Errorf("clean(%q) = %q, want %q", tt.in, got, tt.want)
			}
			for _, r := range sans.clean(tt.in) {
				if r != '\n' && r != '\ufffd' && !sans.drawable(r) {
					t.Errorf("clean leaves U+%04X", r)
				}
			}
		})
	}
}

// Law: the lines of a paragraph hold all its characters in order, but blanks at breaks, and none is wider than asked.
func TestWrapKeepsText(t *testing.T) {
	texts := []string{
		"", " ", "\n\n", "one", "Peel strength of sterile-barrier pouches after ageing at 55 °C",
		strings.Repeat("4f2a", 16), strings.Repeat("W", 300), "a " + strings.Repeat("x/y-z_", 60) + " b",
		"x̄̄̄x̄x̄x̄x̄x̄x̄x̄x̄x̄x̄x̄x̄x̄x̄x̄x̄x̄x̄", "強度強度強度 прочность", "a\nb\n\nc\n", "   leading   and   inner   ",
	}
	strip := func(s string) string {
		return strings.Map(func(r rune) rune {
			if r == ' ' || r == '\n' {
				return -1
			}
			return r
		}, s)
	}
	for _, text := range texts {
		for _, width := range []float64{1, 7, 30, 170} {
			runs := []run{{text: text, style: style{face: sans, size: 9}}, {text: text, style: style{face: bold, size: 8}}}
			var all strings.Builder
			for _, l := range wrap(runs, width) {
				n := 0
				for _, s := range l.segments {
					all.WriteString(s.text)
					n += len([]rune(s.text))
				}
				if l.w > width+1e-6 && n > 1 && !marksFollow(l) {
					t.Errorf("width %g: line %q is %.3f wide", width, l.segments[0].text, l.w)
				}
				if len(l.segments) > 0 && l.segments[0].text != "" && unicode.Is(unicode.M, []rune(l.segments[0].text)[0]) {
					t.Errorf("width %g: a line begins with a combining character: %q", width, l.segments[0].text)
				}
			}
			if got, want := strip(all.String()), strip(sans.clean(text)+bold.clean(text)); got != want {
				t.Errorf("width %g: lines hold %q, want %q", width, got, want)
			}
		}
	}
}

// marksFollow says whether a line is one character with what combines with it.
func marksFollow(l textLine) bool {
	for i, r := range []rune(l.segments[0].text) {
		if i > 0 && !unicode.Is(unicode.M, r) {
			return false
		}
	}
	return len(l.segments) == 1
}

func TestWrapBreaksAtLineFeeds(t *testing.T) {
	lines := wrap(plainRun(style{face: mono, size: 8}, "a\n\n  b\n"), 100)
	var got []string
	for _, l := range lines {
		text := ""
		for _, s := range l.segments {
			text += s.text
		}
		got = append(got, text)
	}
	if want := "a||  b|"; strings.Join(got, "|") != want {
		t.Errorf("lines %q, want %q", strings.Join(got, "|"), want)
	}
}
