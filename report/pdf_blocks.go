package report

// The styles of the appendix.
var (
	body         = style{face: sans, size: 8.6, colour: ink}
	bodyBold     = style{face: bold, size: 8.6, colour: ink}
	small        = style{face: sans, size: 7.6, colour: ink}
	smallBold    = style{face: bold, size: 7.6, colour: ink}
	quiet        = style{face: sans, size: 7.6, colour: soft}
	sentence     = style{face: sans, size: 8, colour: ink}
	sentenceBold = style{face: bold, size: 8, colour: ink}
	code         = style{face: mono, size: 7.2, colour: ink}
	listing      = style{face: mono, size: 6.8, colour: ink}
	linkStyle    = style{face: sans, size: 8.6, colour: accent}
	titleStyle   = style{face: bold, size: 17, colour: ink}
)

var headingStyles = [...]style{{face: bold, size: 13.5, colour: ink}, {face: bold, size: 10, colour: ink},
	{face: bold, size: 8.6, colour: accent}}

// A heading has a level from 0, a number or none, and is a target that the outline leads to.
func heading(level int, number, title, name string) []atom {
	s := headingStyles[level]
	before := [...]float64{9, 6.5, 4}[level]
	x := leftEdge
	if number != "" {
		x += max([...]float64{9, 11, 0}[level], s.face.width(number, s.size)+3)
	}
	atoms := paragraph(plainRun(s, title), x, rightEdge-x, before)
	if number != "" {
		first, n := atoms[0].draw, s
		n.colour = accent
		atoms[0].draw = func(p *page, y float64) {
			p.text(leftEdge, y+baseline(s.size), n, number)
			first(p, y)
		}
	}
	for i := range atoms {
		atoms[i].keep = true
	}
	atoms[0].name = name
	return append(atoms, atom{height: [...]float64{2.2, 1.4, 0.6}[level], keep: true})
}

// prose is a paragraph of the body text.
func prose(text string) []atom { return paragraph(plainRun(body, text), leftEdge, measure, 2) }

// rich is a paragraph of runs.
func rich(runs ...run) []atom { return paragraph(runs, leftEdge, measure, 2) }

// pairName is the width of the names in pairs.
const pairName = 40.0

// pairs sets names with what belongs to them, one below the other.
func pairs(rows [][2]cell, before float64) []atom {
	t := table{columns: []column{{least: pairName, most: pairName}, {}}, size: body.size, before: before}
	for _, r := range rows {
		t.rows = append(t.rows, []cell{r[0], r[1]})
	}
	return t.atoms()
}

// pair is one row of pairs; an empty value shows as what otherwise says.
func pair(name, value, otherwise string) [2]cell {
	if value == "" {
		return [2]cell{cellText(small.in(soft), name), cellText(body.in(soft), otherwise)}
	}
	return [2]cell{cellText(small.in(soft), name), cellText(body, value)}
}

// in returns the style in another colour.
func (s style) in(c colour) style { s.colour = c; return s }

// caption is the text below a figure or above a table.
func caption(label, text string, before float64) []atom {
	return paragraph([]run{{text: label + "  ", style: smallBold}, {text: text, style: quiet}}, leftEdge, measure, before)
}

// space is white space that holds what stands before it and after it together.
func space(height float64) atom { return atom{height: height, keep: true} }
