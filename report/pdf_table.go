package report

import (
	"slices"
	"strings"
)

// An alignment says how the cells of a column stand.
type alignment uint8

const (
	left alignment = iota
	right
	decimal // numbers with their decimal points below each other
)

// A column is one column of a table.
type column struct {
	title string
	align alignment
	least float64 // least width; 0: that of the longest word, within reason
	most  float64 // greatest width; 0: no limit
}

// A cell is text, a symbol before it, or both.
type cell struct {
	runs   []run
	symbol symbol
}

// A table is set with thin rules, its head repeated on each page.
type table struct {
	columns []column
	rows    [][]cell
	size    float64 // of the type
	before  float64
	strong  []bool // rows on the pale band, by index; nil: none
	tight   bool   // as wide as its contents, not as the measure
	indent  float64
}

const (
	cellGap    = 3.8 // between columns
	cellAbove  = 1.0
	cellBelow  = 1.1
	symbolRoom = 4.6
	// mostLines is how many lines of a row are kept on one page; longer rows are divided.
	mostLines = 24
)

// cellText makes a cell of text in one style.
func cellText(s style, text string) cell { return cell{runs: plainRun(s, text)} }

func (c cell) text() string {
	var b strings.Builder
	for _, r := range c.runs {
		b.WriteString(r.style.face.clean(r.text))
	}
	return b.String()
}

func (c cell) room() float64 {
	if c.symbol == noSymbol {
		return 0
	}
	return symbolRoom
}

// natural returns the width of the cell on one line, and that of its widest word.
func (c cell) natural() (whole, word float64) {
	for _, r := range c.runs {
		s := r.style
		for _, line := range strings.Split(s.face.clean(r.text), "\n") {
			whole = max(whole, s.face.width(line, s.size))
			for _, w := range strings.Fields(line) {
				word = max(word, s.face.width(w, s.size))
			}
		}
	}
	if len(c.runs) > 1 {
		whole = 0
		for _, r := range c.runs {
			whole += r.style.face.width(r.style.face.clean(r.text), r.style.size)
		}
	}
	const slack = 0.01 // so that rounding does not break a line that fits exactly
	return whole + c.room() + slack, word + c.room() + slack
}

// split returns the width of a number before its decimal point and from there on.
func (c cell) split() (before, after float64) {
	text := c.text()
	if len(c.runs) == 0 {
		return 0, 0
	}
	s := c.runs[0].style
	whole, _, _ := strings.Cut(text, ".")
	if !isFigure(text) {
		return 0, 0
	}
	b := s.face.width(whole, s.size)
	return b, s.face.width(text, s.size) - b
}

// isFigure says whether text is a number that can be aligned.
func isFigure(text string) bool {
	return text != "" && strings.ContainsAny(text, "0123456789") &&
		!strings.ContainsFunc(text, func(r rune) bool {
			return !strings.ContainsRune("0123456789.,−-+± \u00a0\u202f%×⁻⁰¹²³⁴⁵⁶⁷⁸⁹", r)
		})
}

// widths shares the measure out: each column gets its contents on one line if that fits, else its contents on one line
// below a head of several; else the widest columns give.
func (t *table) widths(head []cell) []float64 {
	n := len(t.columns)
	whole, word := t.wanted(head, false)
	available := measure - t.indent - float64(cellGap*float64(n-1))
	if total(whole) > available {
		whole, word = t.wanted(head, true)
	}
	if total(whole) <= available {
		return t.spread(whole, available)
	}
	return t.squeeze(whole, word, available)
}

func total(widths []float64) float64 {
	sum := 0.0
	for _, w := range widths {
		sum += w
	}
	return sum
}

// wanted returns for each column the width of its contents on one line and the least width. The head counts with its
// widest word only if it may be broken.
func (t *table) wanted(head []cell, breakHead bool) (whole, word []float64) {
	n := len(t.columns)
	whole, word = make([]float64, n), make([]float64, n)
	for j, c := range t.columns {
		before, after := 0.0, 0.0
		for i := -1; i < len(t.rows); i++ {
			of := head
			if i >= 0 {
				of = t.rows[i]
			}
			w, longest := of[j].natural()
			switch {
			case i < 0 && breakHead:
				w = longest
			case i >= 0 && c.align != left:
				longest = w // numbers are not broken
			}
			if c.align == decimal && i >= 0 {
				b, a := of[j].split()
				before, after = max(before, b), max(after, a)
			}
			whole[j], word[j] = max(whole[j], w), max(word[j], longest)
		}
		const slack = 0.01
		whole[j], word[j] = max(whole[j], before+after+slack), max(word[j], before+after+slack)
		word[j] = max(min(word[j], 40), c.least)
		if c.most > 0 {
			whole[j] = min(whole[j], c.most)
		}
		whole[j] = max(whole[j], word[j])
	}
	return whole, word
}

// spread gives the room that is left to the last column of text, or to the first if numbers stand last.
func (t *table) spread(whole []float64, available float64) []float64 {
	if t.tight {
		return whole
	}
	at := len(whole) - 1
	if t.columns[at].align != left {
		at = max(0, slices.IndexFunc(t.columns, func(c column) bool { return c.align == left }))
	}
	whole[at] += available - total(whole)
	return whole
}

// squeeze lowers a common ceiling until the columns fit; none goes below its longest word.
func (t *table) squeeze(whole, word []float64, available float64) []float64 {
	low, high := 0.0, slices.Max(whole)
	fit := func(ceiling float64) (out []float64, sum float64) {
		for j := range whole {
			w := max(min(whole[j], ceiling), word[j])
			out = append(out, w)
			sum += w
		}
		return out, sum
	}
	for range 60 {
		middle := (low + high) / 2
		if _, sum := fit(middle); sum > available {
			high = middle
		} else {
			low = middle
		}
	}
	out, sum := fit(low)
	if sum > available { // even the words are too wide: all give in proportion
		for j := range out {
			out[j] *= available / sum
		}
		return out
	}
	for j, c := range t.columns { // what bisection left over
		if c.align == left && out[j] < whole[j] {
			out[j] += available - sum
			break
		}
	}
	return out
}

// atoms lays the table out.
func (t *table) atoms() []atom {
	headStyle := style{face: bold, size: t.size - 0.6, colour: soft}
	head := make([]cell, len(t.columns))
	titled := false
	for j, c := range t.columns {
		head[j] = cellText(headStyle, c.title)
		titled = titled || c.title != ""
	}
	widths := t.widths(head)
	full := total(widths) + float64(cellGap*float64(len(widths)-1))
	x0 := leftEdge + t.indent
	rule := func(c colour, w float64) func(*page, float64) {
		return func(p *page, y float64) { p.line(pen{c, w, nil}, spot{x0, y}, spot{x0 + full, y}) }
	}
	points := t.points(widths)
	var out []atom
	var headAtoms []atom
	if titled {
		headAtoms = t.row(head, widths, nil, false)
		for i := range headAtoms {
			headAtoms[i].keep = true
		}
		headAtoms = together(append(headAtoms, atom{height: 0.4, draw: rule(ink, 0.3)}))
		headAtoms[len(headAtoms)-1].keep = true
	} else {
		headAtoms = []atom{{height: 0.2, draw: rule(hair, 0.2), keep: true}}
	}
	out = append(out, headAtoms...)
	for i, r := range t.rows {
		row := t.row(r, widths, points, t.strong != nil && t.strong[i])
		row = append(row, atom{height: 0.1, draw: rule(hair, 0.15)})
		row[len(row)-2].keep = true
		for k := range row[:len(row)-1] {
			row[k].head = headAtoms
		}
		if i == 0 || i == len(t.rows)-2 { // no row stands alone at the foot or at the head of a page
			row[len(row)-1].keep = i < len(t.rows)-1
		}
		out = append(out, row...)
	}
	out[0].before = t.before
	return out
}

// points returns, for each decimal column, the distance of the decimal point from the left of the column.
func (t *table) points(widths []float64) []float64 {
	out := make([]float64, len(widths))
	for j, c := range t.columns {
		after := 0.0
		for _, r := range t.rows {
			_, a := r[j].split()
			after = max(after, a)
		}
		if c.align == decimal {
			out[j] = widths[j] - after
		}
	}
	return out
}

// row sets one row, divided into several atoms if it is very tall.
func (t *table) row(cells []cell, widths, points []float64, strong bool) []atom {
	lines := make([][]textLine, len(cells))
	tallest := 0
	for j, c := range cells {
		if len(c.runs) > 0 {
			lines[j] = wrap(c.runs, widths[j]-c.room())
		}
		tallest = max(tallest, len(lines[j]))
	}
	tallest = max(tallest, 1)
	step := leading(t.size)
	var out []atom
	for first := 0; first < tallest; first += mostLines {
		last := min(first+mostLines, tallest)
		above, below := 0.0, 0.0
		if first == 0 {
			above = cellAbove
		}
		if last == tallest {
			below = cellBelow
		}
		height := above + below + float64(float64(last-first)*step)
		out = append(out, atom{height: height, draw: func(p *page, y float64) {
			x := leftEdge + t.indent
			if strong {
				p.box(band, x, y, total(widths)+float64(cellGap*float64(len(widths)-1)), height)
			}
			for j, c := range cells {
				if c.symbol != noSymbol && first == 0 {
					c.symbol.draw(p, x+1.5, y+above+float64(step/2), 1.35)
				}
				down := 0
				if points == nil { // heads stand on their last line
					down = tallest - len(lines[j])
				}
				for i := first; i < min(last, len(lines[j])+down); i++ {
					if i < down {
						continue
					}
					l := lines[j][i-down]
					at := x + c.room()
					switch t.columns[j].align {
					case right:
						at = x + widths[j] - l.w
					case decimal:
						at = x + widths[j] - l.w
						if points != nil && len(lines[j]) == 1 && isFigure(c.text()) {
							before, _ := c.split()
							at = x + points[j] - before
						}
					}
					l.draw(p, at, y+above+float64(float64(i-first)*step)+baseline(t.size))
				}
				x += widths[j] + cellGap
			}
		}})
	}
	return out
}
