package report

import (
	"math"

	"lotproof/spec"
)

// A distribution is the figure of one statistic: the resample values as a histogram, with the estimate, the limits that
// carry the verdict, and the criteria.
type distribution struct {
	edges    []float64 // ascending, one more than counts; two equal edges: all values are the same
	counts   []int
	estimate marker
	lower    marker
	upper    marker
	bound    spec.Bound
	criteria []marker
	axis     string // title of the horizontal axis
	vertical string // title of the vertical axis
}

// A marker is a labelled value.
type marker struct {
	value *float64 // nil: not there
	label string
	least bool // of a criterion: values below it are out
}

const (
	figureGutter = 15.0 // left of the panel
	panelHeight  = 25.0
	zoneHeight   = 6.0 // below the panel, for the interval
	axisHeight   = 8.6
)

var (
	tickStyle = style{face: sans, size: 7, colour: soft}
	flagStyle = style{face: sans, size: 7.4, colour: ink}
)

// shown returns the range of the horizontal axis: that of the resample values and of all markers near enough. A
// criterion so far away that it would squeeze the histogram below a fifth of the width stands at the edge instead.
func (d *distribution) shown() (low, high float64) {
	low, high = d.edges[0], d.edges[len(d.edges)-1]
	for _, m := range []marker{d.estimate, d.lower, d.upper} {
		if m.value != nil {
			low, high = min(low, *m.value), max(high, *m.value)
		}
	}
	if low == high {
		pad := math.Abs(low) / 20
		if pad == 0 {
			pad = 1
		}
		low, high = low-pad, high+pad
		if math.IsInf(low, 0) || math.IsInf(high, 0) {
			low, high = low/2, high/2
		}
	}
	core := float64(high/2) - float64(low/2)
	for _, m := range d.criteria {
		if m.value == nil {
			continue
		}
		l, h := min(low, *m.value), max(high, *m.value)
		if float64(h/2)-float64(l/2) <= float64(5*core) {
			low, high = l, h
		}
	}
	pad := float64((float64(high/2) - float64(low/2)) * 0.06)
	l, h := low-pad, high+pad
	if math.IsInf(l, 0) || math.IsInf(h, 0) {
		return low, high
	}
	return l, h
}

// layout returns the flags and how many lanes they take.
func (d *distribution) layout(s scale) ([]pennant, int) {
	var flags []pennant
	add := func(m marker, st style, staff pen) {
		if m.value == nil {
			return
		}
		f := pennant{x: s.at(*m.value), label: shorten(st, m.label, 70), style: st, staff: staff}
		if *m.value < s.low {
			f.x, f.offside, f.label = s.from, true, "← "+f.label
		} else if *m.value > s.high {
			f.x, f.offside, f.label = s.to, true, f.label+" →"
		}
		f.width = st.face.width(f.label, st.size)
		flags = append(flags, f)
	}
	strong := flagStyle
	strong.face = bold
	limit := flagStyle
	limit.colour = accent
	add(d.estimate, flagStyle, pen{ink, 0.35, nil})
	add(d.lower, limit, pen{accent, 0.35, []float64{1.4, 0.9}})
	add(d.upper, limit, pen{accent, 0.35, []float64{1.4, 0.9}})
	for _, m := range d.criteria {
		add(m, strong, criterionPen)
	}
	return flags, arrange(flags, s.from, rightEdge)
}

// scale returns the horizontal scale of the panel.
func (d *distribution) scale() scale {
	low, high := d.shown()
	return scale{low, high, leftEdge + figureGutter, rightEdge - 1}
}

// height returns how much room the figure takes.
func (d *distribution) height() float64 {
	_, lanes := d.layout(d.scale())
	return float64(float64(lanes)*laneStep) + 1 + panelHeight + zoneHeight + axisHeight
}

// draw draws the figure with its upper edge at y.
func (d *distribution) draw(p *page, y float64) {
	x := d.scale()
	flags, lanes := d.layout(x)
	top := y + float64(float64(lanes)*laneStep) + 1
	floor := top + panelHeight
	base := floor + zoneHeight

	most := 0
	for _, n := range d.counts {
		most = max(most, n)
	}
	up := scale{0, float64(max(most, 1)) * 1.05, floor, top}

	p.box(band, x.from, floor, x.to-x.from, zoneHeight)
	d.grid(p, x, up)
	d.bars(p, x, up)
	d.zone(p, x, floor)
	p.line(pen{ink, 0.25, nil}, spot{x.from, base}, spot{x.to, base})
	p.line(pen{hair, 0.2, nil}, spot{x.from, floor}, spot{x.to, floor})
	d.axisBelow(p, x, base)

	level := func(f pennant) float64 { return top - 1 - float64(float64(f.lane)*laneStep) }
	for _, f := range flags {
		p.line(f.staff, spot{f.x, base}, spot{f.x, level(f) - 2.6})
	}
	for _, f := range flags {
		from, to := f.span()
		p.box(paper, from, level(f)-3, to-from, 3.4)
		p.text(from, level(f)-0.4, f.style, f.label)
	}
}

// grid draws the vertical axis: whole counts only.
func (d *distribution) grid(p *page, x, up scale) {
	marks, _ := ticks(0, up.high, 4)
	for _, t := range marks {
		if t.value != math.Trunc(t.value) {
			continue
		}
		y := up.at(t.value)
		if t.value > 0 {
			p.line(pen{hair, 0.15, nil}, spot{x.from, y}, spot{x.to, y})
		}
		p.textRight(x.from-1.5, y+0.9, tickStyle, shorten(tickStyle, grouped(int64(t.value)), figureGutter-2))
	}
	p.text(leftEdge, up.to-1.6, tickStyle, d.vertical)
}

// bars draws the histogram as the outline that its bins have together, so that no seams show between them.
func (d *distribution) bars(p *page, x, up scale) {
	var top []spot
	flush := func() {
		if len(top) > 0 {
			first, last := top[0].x, top[len(top)-1].x
			p.fill(tint, append(append([]spot{{first, up.from}}, top...), spot{last, up.from})...)
		}
		top = nil
	}
	p.clip(x.from, up.to, x.to-x.from, up.from-up.to, func() {
		for i, n := range d.counts {
			if n == 0 {
				flush()
				continue
			}
			from, to, y := x.at(d.edges[i]), x.at(d.edges[i+1]), up.at(float64(n))
			if to-from < 0.8 { // one value, or bins too narrow to be seen
				flush()
				middle := float64((from + to) / 2)
				from, to = middle-0.4, middle+0.4
			}
			top = append(top, spot{from, y}, spot{to, y})
		}
		flush()
	})
}

// zone draws the interval as a bar, its open side as an arrow, and hatches what the criteria exclude.
func (d *distribution) zone(p *page, x scale, floor float64) {
	middle := floor + zoneHeight/2
	p.clip(x.from, floor, x.to-x.from, zoneHeight, func() {
		hatch := pen{soft, 0.15, nil}
		for _, m := range d.criteria {
			if m.value == nil {
				continue
			}
			from, to := max(x.from, min(x.to, x.at(*m.value))), x.to
			if m.least {
				from, to = x.from, from
			}
			if to-from < 0.01 {
				continue
			}
			p.clip(from, floor, to-from, zoneHeight, func() {
				for at := from - zoneHeight; at < to; at += 1.6 {
					p.line(hatch, spot{at, floor + zoneHeight}, spot{at + zoneHeight, floor})
				}
			})
		}
	})
	bar := pen{accent, 0.9, nil}
	from, to := x.from, x.to
	draw := false
	if d.lower.value != nil {
		from, draw = x.at(*d.lower.value), true
	}
	if d.upper.value != nil {
		to, draw = x.at(*d.upper.value), true
	}
	if draw {
		p.line(bar, spot{from, middle}, spot{to, middle})
		end := pen{accent, 0.6, nil}
		if d.lower.value != nil {
			p.line(end, spot{from, middle - 1.3}, spot{from, middle + 1.3})
		} else if d.bound == spec.Upper {
			p.fill(accent, spot{from, middle}, spot{from + 2, middle - 1.2}, spot{from + 2, middle + 1.2})
		}
		if d.upper.value != nil {
			p.line(end, spot{to, middle - 1.3}, spot{to, middle + 1.3})
		} else if d.bound == spec.Lower {
			p.fill(accent, spot{to, middle}, spot{to - 2, middle - 1.2}, spot{to - 2, middle + 1.2})
		}
	}
	if d.estimate.value != nil {
		at := x.at(*d.estimate.value)
		p.fill(ink, spot{at - 1.1, middle}, spot{at, middle - 1.5}, spot{at + 1.1, middle}, spot{at, middle + 1.5})
	}
}

func (d *distribution) axisBelow(p *page, x scale, base float64) {
	marks, exponent := fittingTicks(x, tickStyle, 9)
	for _, t := range marks {
		at := x.at(t.value)
		p.line(pen{ink, 0.25, nil}, spot{at, base}, spot{at, base + 1})
		p.textCentre(at, base+3.9, tickStyle, t.label)
	}
	title := d.axis
	if exponent != 0 {
		title = "× 10" + superscript(exponent) + "  " + title
	}
	st := tickStyle
	st.colour = ink
	p.textCentre((x.from+x.to)/2, base+7.4, st, shorten(st, title, x.to-x.from))
}

// shorten cuts text with an ellipsis so that it is no wider than width.
func shorten(s style, text string, width float64) string {
	text = s.face.clean(text)
	if s.face.width(text, s.size) <= width {
		return text
	}
	runes := []rune(text)
	for len(runes) > 0 {
		runes = runes[:len(runes)-1]
		if cut := string(runes) + "…"; s.face.width(cut, s.size) <= width {
			return cut
		}
	}
	return ""
}

// grouped writes a whole number with a narrow blank between thousands.
func grouped(n int64) string {
	text := shifted(n, 0)
	digits := []rune(text)
	var out []rune
	for i, r := range digits {
		left := len(digits) - i
		if i > 0 && left%3 == 0 && r != '−' && digits[i-1] != '−' {
			out = append(out, '\u202f')
		}
		out = append(out, r)
	}
	return string(out)
}
