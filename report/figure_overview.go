package report

import (
	"math"
	"strconv"
)

// An overview shows every criterion of a study on one scale: how far estimate and bound lie from the criterion, in
// standard errors of the statistic, the acceptable side always on the right. Statistics of different units can so be
// compared, and a verdict that hangs by a thread is seen.
type overview struct {
	rows       []overviewRow
	outside    string // what lies on the left of the criterion
	within     string // what lies on the right
	axis       string
	unit       scale
	labelWidth float64
}

// An overviewRow is one criterion. Distances are positive on the acceptable side; nil: not to be had.
type overviewRow struct {
	label    []run
	estimate *float64
	bound    *float64
	missing  string // what is written instead if there is no estimate to show
	verdict  []run
	sign     symbol
}

// farthest is the largest distance on the scale; what lies beyond stands at the edge with an arrow.
const farthest = 8

// distance returns how far v lies on the acceptable side of a criterion, in standard errors; nil if it cannot be had.
func distance(v, standardError *float64, limit float64, least bool) *float64 {
	if v == nil || standardError == nil || *standardError <= 0 {
		return nil
	}
	d := (*v - limit) / *standardError
	if !least {
		d = -d
	}
	if math.IsNaN(d) {
		return nil
	}
	return &d
}

// atoms lays the overview out, one atom a criterion, below a head that is repeated on each page.
func (o *overview) atoms(before float64) []atom {
	low, high := -1.0, 1.0
	for _, r := range o.rows {
		for _, d := range []*float64{r.estimate, r.bound} {
			if d != nil {
				low, high = min(low, math.Floor(*d)), max(high, math.Ceil(*d))
			}
		}
	}
	low, high = max(low, -farthest), min(high, farthest)
	o.labelWidth = 62
	const verdictWidth = 27
	o.unit = scale{low - 0.3, high + 0.3, leftEdge + o.labelWidth + 4, rightEdge - verdictWidth - 3}
	head := atom{height: 8.2, keep: true, draw: o.head}
	out := []atom{head}
	out[0].before = before
	for i := range o.rows {
		r := &o.rows[i]
		lines := wrap(r.label, o.labelWidth)
		height := max(7, float64(float64(len(lines))*leading(8))+2.4)
		out = append(out, atom{height: height, head: []atom{head}, draw: func(p *page, y float64) {
			o.row(p, y, height, r, lines)
		}})
	}
	out[len(out)-1].keep = true
	return append(out, atom{height: 9, draw: o.foot})
}

func (o *overview) head(p *page, y float64) {
	at := o.unit.at(0)
	st := tickStyle
	p.textRight(at-1.5, y+4.2, st, "← "+o.outside)
	p.text(at+1.5, y+4.2, st, o.within+" →")
	p.line(pen{ink, 0.3, nil}, spot{leftEdge, y + 6.6}, spot{rightEdge, y + 6.6})
	p.line(zeroPen, spot{at, y + 2}, spot{at, y + 8.2})
}

func (o *overview) row(p *page, y, height float64, r *overviewRow, lines []textLine) {
	s := o.unit
	middle := y + float64(height/2)
	top := middle - float64(float64(len(lines))*leading(8)/2)
	for i, l := range lines {
		l.draw(p, leftEdge, top+float64(float64(i)*leading(8))+baseline(8))
	}
	p.line(pen{hair, 0.15, nil}, spot{leftEdge, y + height}, spot{rightEdge, y + height})
	p.line(zeroPen, spot{s.at(0), y}, spot{s.at(0), y + height})
	r.sign.draw(p, rightEdge-24, middle, 1.35)
	st := flagStyle
	for _, l := range wrap(r.verdict, 20) {
		l.draw(p, rightEdge-21, middle+1)
		break // a verdict is one or two short words
	}
	if r.estimate == nil {
		p.text(s.at(0)+2, middle+1, style{face: sans, size: st.size, colour: soft}, shorten(st, r.missing, s.to-s.at(0)-2))
		return
	}
	e, _ := o.place(*r.estimate)
	if r.bound != nil {
		b, _ := o.place(*r.bound)
		p.line(pen{accent, 0.9, nil}, spot{b, middle}, spot{e, middle})
		o.end(p, *r.bound, b, middle)
	}
	if at, beyond := o.place(*r.estimate); beyond {
		o.end(p, *r.estimate, at, middle)
		return
	}
	p.fill(ink, spot{e - 1.1, middle}, spot{e, middle - 1.5}, spot{e + 1.1, middle}, spot{e, middle + 1.5})
}

// place returns where a distance stands, and whether it is beyond the scale.
func (o *overview) place(d float64) (x float64, beyond bool) {
	return o.unit.at(max(o.unit.low, min(o.unit.high, d))), !o.unit.holds(d)
}

// end draws the end of a bar: a stroke, or an arrow where the value lies beyond the scale.
func (o *overview) end(p *page, d, x, y float64) {
	if o.unit.holds(d) {
		p.line(pen{accent, 0.6, nil}, spot{x, y - 1.3}, spot{x, y + 1.3})
		return
	}
	back := 2.0
	if d < 0 {
		back = -2
	}
	p.fill(accent, spot{x, y}, spot{x - back, y - 1.2}, spot{x - back, y + 1.2})
}

func (o *overview) foot(p *page, y float64) {
	s := o.unit
	from, to := math.Ceil(s.low), math.Floor(s.high)
	step := 1.0
	if to-from > 10 {
		step = 2
	}
	for d := float64(math.Ceil(from/step) * step); d <= to; d += step {
		x := s.at(d)
		p.line(pen{ink, 0.25, nil}, spot{x, y}, spot{x, y + 1})
		p.textCentre(x, y+3.9, tickStyle, signed(int64(d)))
	}
	st := tickStyle
	st.colour = ink
	p.textCentre((s.from+s.to)/2, y+7.6, st, o.axis)
}

func signed(n int64) string {
	switch {
	case n > 0:
		return "+" + strconv.FormatInt(n, 10)
	}
	return shifted(n, 0)
}

var zeroPen = pen{ink, 0.4, nil} // solid, because it is drawn row by row

var criterionPen = pen{ink, 0.5, []float64{2.6, 0.8, 0.5, 0.8}}
