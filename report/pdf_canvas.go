package report

// The appendix is first laid out as pages of marks, then written. So the number of pages is known before the first
// footer, figures cannot leave a colour or a line width behind, and tests read what stands on a page. All lengths are
// in millimetres from the upper left corner of the page, type sizes in points.

// A colour is red, green and blue.
type colour struct{ r, g, b uint8 }

var (
	ink     = colour{0x1f, 0x2a, 0x30}
	soft    = colour{0x5d, 0x6b, 0x73} // captions, headings of tables
	hair    = colour{0xc9, 0xd2, 0xd4} // thin rules
	accent  = colour{0x0f, 0x6b, 0x6b}
	tint    = colour{0xa9, 0xcb, 0xc9} // bars of histograms
	band    = colour{0xee, 0xf3, 0xf2}
	paper   = colour{0xff, 0xff, 0xff}
	alarm   = colour{0x8f, 0x2f, 0x28}
	warning = colour{0x8a, 0x5a, 0x00}
)

// A style is how text looks.
type style struct {
	face   face
	size   float64
	colour colour
	rise   float64 // of the baseline, for exponents and indices; in parts of the size
}

// A spot is a place on a page.
type spot struct{ x, y float64 }

type markKind uint8

const (
	markText   markKind = iota // text at (x, y), y being the baseline
	markPath                   // lines through spots, closed if filled
	markClip                   // marks up to the matching markUnclip show within the rectangle x, y, w, h only
	markUnclip                 //
)

// A mark is one thing drawn on a page.
type mark struct {
	kind       markKind
	x, y, w, h float64
	text       string // clean
	style      style
	spots      []spot
	fill       bool
	closed     bool
	colour     colour
	width      float64   // line width
	dash       []float64 // nil: solid
}

// An area leads the reader from a rectangle to a named target.
type area struct {
	x, y, w, h float64
	to         string
}

// A page is one sheet.
type page struct {
	marks []mark
	areas []area
}

// A pen draws lines.
type pen struct {
	colour colour
	width  float64
	dash   []float64
}

// text draws one line of text with its baseline at y and returns its width. What the face cannot show is named.
func (p *page) text(x, y float64, s style, text string) float64 {
	text = s.face.clean(text)
	if text == "" {
		return 0
	}
	y -= float64(s.rise * s.size * point)
	w := s.face.width(text, s.size)
	p.marks = append(p.marks, mark{kind: markText, x: x, y: y, w: w, text: text, style: s})
	return w
}

// textRight draws text that ends at x.
func (p *page) textRight(x, y float64, s style, text string) {
	p.text(x-s.face.width(s.face.clean(text), s.size), y, s, text)
}

// textCentre draws text with its middle at x.
func (p *page) textCentre(x, y float64, s style, text string) {
	p.text(x-float64(s.face.width(s.face.clean(text), s.size)/2), y, s, text)
}

// line draws a line through the spots.
func (p *page) line(with pen, spots ...spot) {
	p.marks = append(p.marks, mark{kind: markPath, spots: spots, colour: with.colour, width: with.width, dash: with.dash})
}

// outline draws a closed line through the spots.
func (p *page) outline(with pen, spots ...spot) {
	p.line(with, spots...)
	p.marks[len(p.marks)-1].closed = true
}

// fill fills the area within the spots.
func (p *page) fill(c colour, spots ...spot) {
	p.marks = append(p.marks, mark{kind: markPath, spots: spots, colour: c, fill: true, closed: true})
}

// box fills a rectangle.
func (p *page) box(c colour, x, y, w, h float64) {
	p.fill(c, spot{x, y}, spot{x + w, y}, spot{x + w, y + h}, spot{x, y + h})
}

// clip lets what draw draws show within a rectangle only.
func (p *page) clip(x, y, w, h float64, draw func()) {
	p.marks = append(p.marks, mark{kind: markClip, x: x, y: y, w: w, h: h})
	draw()
	p.marks = append(p.marks, mark{kind: markUnclip})
}

// circle returns spots on a circle, close enough for the small marks of this report. They are constants, because sines
// are not the same on every machine.
func circle(x, y, r float64) []spot {
	const c, s = 0.9238795325112867, 0.3826834323650898 // cos and sin of 22.5°
	const d = 0.7071067811865476
	unit := [...]spot{{1, 0}, {c, s}, {d, d}, {s, c}, {0, 1}, {-s, c}, {-d, d}, {-c, s},
		{-1, 0}, {-c, -s}, {-d, -d}, {-s, -c}, {0, -1}, {s, -c}, {d, -d}, {c, -s}}
	out := make([]spot, len(unit))
	for i, u := range unit {
		out[i] = spot{x + float64(r*u.x), y + float64(r*u.y)}
	}
	return out
}
