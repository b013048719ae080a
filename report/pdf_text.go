package report

import (
	"strings"
	"unicode"
)

// A run is text in one style, perhaps a link.
type run struct {
	text  string
	style style
	to    string // name of a target; empty: no link
}

// A segment is the part of a run that stands on one line, x from the start of the line.
type segment struct {
	run
	x, w float64
}

// A textLine is one line of set text.
type textLine struct {
	segments []segment
	w        float64
}

// plainRun returns text in one style as runs.
func plainRun(s style, text string) []run { return []run{{text: text, style: s}} }

// glyph is one character on its way into lines.
type glyph struct {
	r   rune
	run int
	w   float64
}

// wrap breaks runs into lines no wider than width. It breaks at blanks and line feeds, and inside a word only if the
// word is wider than a line: after a mark such as - / _ . , if one stands in its last third, else anywhere but before a
// combining character.
func wrap(runs []run, width float64) []textLine {
	var glyphs []glyph
	clean := make([]run, len(runs))
	for i, r := range runs {
		clean[i] = r
		clean[i].text = r.style.face.clean(r.text)
		m := &allMetrics()[r.style.face]
		scale := r.style.size * point / 1000
		for _, c := range clean[i].text {
			glyphs = append(glyphs, glyph{c, i, float64(m.of(c)) * scale})
		}
	}
	var lines []textLine
	add := func(g []glyph) {
		for len(g) > 0 && g[len(g)-1].r == ' ' {
			g = g[:len(g)-1]
		}
		lines = append(lines, setLine(clean, g))
	}
	const slack = 1e-9
	start, blank, w := 0, -1, 0.0 // blank: where the last break opportunity ends
	for i := 0; i < len(glyphs); {
		g := glyphs[i]
		if g.r == '\n' {
			add(glyphs[start:i])
			i++
			start, blank, w = i, -1, 0
			continue
		}
		if w+g.w <= width+slack || g.r == ' ' || i == start || unicode.Is(unicode.M, g.r) {
			w += g.w
			i++
			if g.r == ' ' {
				blank = i
			}
			continue
		}
		end := blank
		if end <= start {
			end = breakInside(glyphs[start:i]) + start
		}
		add(glyphs[start:end])
		for end < len(glyphs) && glyphs[end].r == ' ' {
			end++
		}
		start, blank, w, i = end, -1, 0, end
	}
	if start < len(glyphs) || len(lines) == 0 || glyphs[len(glyphs)-1].r == '\n' {
		add(glyphs[start:])
	}
	return lines
}

// breakInside returns how many glyphs of a word too wide for a line stand before the break; at least one. The glyph
// that follows the word does not combine with it.
func breakInside(word []glyph) int {
	for n := len(word); n > len(word)*2/3 && n > 1; n-- {
		if strings.ContainsRune("-/_.,;:·=+)", word[n-1].r) && (n == len(word) || !unicode.Is(unicode.M, word[n].r)) {
			return n
		}
	}
	return len(word)
}

// setLine joins glyphs of the same run to segments.
func setLine(runs []run, glyphs []glyph) textLine {
	var line textLine
	for i := 0; i < len(glyphs); {
		j, w := i, 0.0
		var b strings.Builder
		for j < len(glyphs) && glyphs[j].run == glyphs[i].run {
			b.WriteRune(glyphs[j].r)
			w += glyphs[j].w
			j++
		}
		s := segment{run: runs[glyphs[i].run], x: line.w, w: w}
		s.text = b.String()
		line.segments = append(line.segments, s)
		line.w += w
		i = j
	}
	return line
}

// draw sets the line with its baseline at y, starting at x.
func (l textLine) draw(p *page, x, y float64) {
	for _, s := range l.segments {
		p.text(x+s.x, y, s.style, s.text)
		if s.to != "" {
			h := float64(s.style.size * point)
			p.areas = append(p.areas, area{x + s.x, y - h, s.w, float64(1.3 * h), s.to})
		}
	}
}

// size returns the largest type size on the line, in points.
func (l textLine) size() float64 {
	size := 0.0
	for _, s := range l.segments {
		size = max(size, s.style.size)
	}
	return size
}
