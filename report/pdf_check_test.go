package report

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
	"testing"
)

// lines returns what a reader sees on a page, line by line from the top, texts of one line from the left.
func (p *page) lines() []string {
	var texts []mark
	for _, m := range p.marks {
		if m.kind == markText {
			texts = append(texts, m)
		}
	}
	slices.SortStableFunc(texts, func(a, b mark) int { return cmp.Compare(a.y, b.y) })
	var out []string
	for i := 0; i < len(texts); {
		j := i
		for j < len(texts) && texts[j].y-texts[i].y < 0.6 {
			j++
		}
		line := slices.Clone(texts[i:j])
		slices.SortStableFunc(line, func(a, b mark) int { return cmp.Compare(a.x, b.x) })
		var b strings.Builder
		for k, m := range line {
			if k > 0 {
				if m.x-line[k-1].x-line[k-1].w > 0.5 {
					b.WriteString(" | ")
				}
			}
			b.WriteString(m.text)
		}
		out = append(out, strings.TrimRight(b.String(), " "))
		i = j
	}
	return out
}

// text returns the whole document as a reader sees it.
func (d *document) text() string {
	var b strings.Builder
	for i := range d.pages {
		fmt.Fprintf(&b, "=== page %d\n", i+1)
		for _, l := range d.pages[i].lines() {
			b.WriteString(l + "\n")
		}
	}
	return b.String()
}

// checkPages fails if text leaves the sheet's margins, texts cover each other, a page is left empty, or a heading
// stands at the foot of a page.
func checkPages(t *testing.T, d *document) {
	t.Helper()
	faults := 0
	fault := func(format string, args ...any) {
		if faults++; faults <= 5 {
			t.Errorf(format, args...)
		}
	}
	for i := range d.pages {
		var texts []mark
		for _, m := range d.pages[i].marks {
			if m.kind != markText {
				continue
			}
			texts = append(texts, m)
			if m.x < leftEdge-6 || m.x+m.w > rightEdge+1 || m.y < 10 || m.y > sheetHeight-8 {
				fault("page %d: %q at %.1f, %.1f leaves the type area", i+1, m.text, m.x, m.y)
			}
		}
		if len(texts) < 4 {
			fault("page %d holds %d texts only", i+1, len(texts))
		}
		slices.SortStableFunc(texts, func(a, b mark) int { return cmp.Compare(a.y, b.y) })
		last := mark{}
		for _, m := range texts {
			if m.y < bottomEdge+1 {
				last = m
			}
		}
		if slices.ContainsFunc(headingStyles[:], func(s style) bool { return s == last.style }) {
			fault("page %d ends with the heading %q", i+1, last.text)
		}
		for j, a := range texts {
			for _, b := range texts[j+1:] {
				if b.y-a.y > 9 {
					break
				}
				// Capitals reach about 0.73 of the size above the baseline; accents and descenders may touch.
				high := float64(min(a.style.size, b.style.size) * point * 0.55)
				if b.y-a.y < high && a.x+0.05 < b.x+b.w && b.x+0.05 < a.x+a.w {
					fault("page %d: %q and %q cover each other at %.1f, %.1f", i+1, a.text, b.text, b.x, b.y)
				}
			}
		}
	}
}
