package report

// A symbol is a small drawn sign that stands before a word; it differs in shape, so that colour adds nothing that is
// not there without it.
type symbol uint8

const (
	noSymbol      symbol = iota
	symbolMet            // disc with a tick
	symbolNotMet         // square with a cross
	symbolUnshown        // triangle, open
	symbolNone           // ring with a bar
	symbolNote           // ring with an i
	symbolCaution        // triangle with a stroke
	symbolStop           // octagon with a bar
)

// verdictSymbol returns the sign of a verdict.
func verdictSymbol(verdict string) symbol {
	switch verdict {
	case "met":
		return symbolMet
	case "not met":
		return symbolNotMet
	case "not shown":
		return symbolUnshown
	}
	return symbolNone
}

// severitySymbol returns the sign of an advisory.
func severitySymbol(severity string) symbol {
	switch severity {
	case "stop":
		return symbolStop
	case "caution":
		return symbolCaution
	}
	return symbolNote
}

// signColour returns the colour that goes with the sign.
func (s symbol) colour() colour {
	switch s {
	case symbolMet:
		return accent
	case symbolNotMet, symbolStop:
		return alarm
	case symbolUnshown, symbolCaution:
		return warning
	}
	return soft
}

// draw draws the sign with its middle at (x, y) and half its width r.
func (s symbol) draw(p *page, x, y, r float64) {
	c := s.colour()
	white := pen{paper, r * 0.28, nil}
	line := pen{c, r * 0.26, nil}
	at := func(dx, dy float64) spot { return spot{x + float64(dx*r), y + float64(dy*r)} }
	switch s {
	case symbolMet:
		p.fill(c, circle(x, y, r)...)
		p.line(white, at(-0.48, 0.02), at(-0.12, 0.40), at(0.50, -0.38))
	case symbolNotMet:
		p.fill(c, at(-0.92, -0.92), at(0.92, -0.92), at(0.92, 0.92), at(-0.92, 0.92))
		p.line(white, at(-0.45, -0.45), at(0.45, 0.45))
		p.line(white, at(-0.45, 0.45), at(0.45, -0.45))
	case symbolUnshown:
		p.outline(line, at(0, -0.9), at(1, 0.8), at(-1, 0.8))
		p.line(line, at(-0.3, 0.35), at(0.3, 0.35))
	case symbolNone:
		p.outline(line, circle(x, y, r*0.88)...)
		p.line(line, at(-0.4, 0), at(0.4, 0))
	case symbolNote:
		p.outline(line, circle(x, y, r*0.88)...)
		p.line(line, at(0, -0.12), at(0, 0.48))
		p.line(line, at(0, -0.5), at(0, -0.3))
	case symbolCaution:
		p.fill(c, at(0, -0.95), at(1.05, 0.85), at(-1.05, 0.85))
		p.line(white, at(0, -0.4), at(0, 0.3))
		p.line(white, at(0, 0.46), at(0, 0.66))
	case symbolStop:
		p.fill(c, at(-0.42, -1), at(0.42, -1), at(1, -0.42), at(1, 0.42), at(0.42, 1), at(-0.42, 1),
			at(-1, 0.42), at(-1, -0.42))
		p.line(pen{paper, r * 0.36, nil}, at(-0.5, 0), at(0.5, 0))
	}
}
