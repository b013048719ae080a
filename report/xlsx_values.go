package report

import (
	"fmt"
	"math"
	"strconv"

	"lotproof/runner/record"
)

// valueSheets show the resample values of each statistic, one printed page each, and hold the points of the figures.
func (b *book) valueSheets() {
	s := b.sheet("Resample values", "histogram, figure and quantiles of the resample values of each statistic", false,
		14, 14, 12, 4, 16, 18, 14, 14, 14)
	p := b.sheet("Figure points", "the points of the lines in the figures on the sheet Resample values", false, 6, 26, 44, 24, 24)
	p.title("Figure points", "The lines drawn on the sheet Resample values. Every figure here stands there or on the sheets Estimates and "+
		"Limits, so this sheet is not printed beyond this sentence.", 5)
	p.printed()
	at := p.row
	p.heads(1, ">No.", "Statistic", "Line", ">Across", ">Up")
	p.freeze(at, 0)
	s.title("Resample values", "What the resamples gave: how many values fell into each bin, and the quantiles. Bins hold their lower end, the "+
		"last one both ends.", 9)
	for i := range b.results.Statistics {
		if i > 0 {
			s.row++
			s.breakPage(s.row)
		}
		b.valueBlock(s, p, i)
	}
}

// valueBlock is the part of one statistic.
func (b *book) valueBlock(s, p *bookSheet, i int) {
	one := &b.results.Statistics[i]
	s.wide(1, 9, fmt.Sprintf("%d  %s", i+1, one.Label), bookHeading)
	s.row++
	d := one.Distribution
	if d == nil || len(d.Counts) == 0 || len(d.Edges) != len(d.Counts)+1 {
		text := "There are no resample values."
		if one.Estimate == nil {
			text = "There is no estimate (" + one.EstimateReason + "), so nothing was drawn for it."
		}
		s.wide(1, 9, text, bookText)
		s.row++
		return
	}
	text := fmt.Sprintf("%s: %s resample values.", one.ID, grouped(int64(one.Resamples-one.FailedResamples)))
	if one.FailedResamples > 0 {
		text += fmt.Sprintf(" %s more resamples gave no value (%s).", grouped(int64(one.FailedResamples)), failureText(one))
	}
	low, high := d.Edges[0], d.Edges[len(d.Edges)-1]
	if low == high {
		text += " All are equal, so there is no figure."
	}
	s.wide(1, 9, text, bookText)
	s.row++
	top := s.row
	s.heads(1, ">From", ">To", ">Resamples")
	places := b.binDecimals(one, low, high)
	for k, n := range d.Counts {
		s.line(1, measured(&d.Edges[k], places, "", ""), measured(&d.Edges[k+1], places, "", ""), count(n))
	}
	bottom := s.row
	s.row = top
	if low < high {
		b.figure(s, p, i)
		s.row = top + figureRows
	}
	s.heads(5, ">Share below", ">Quantile")
	for _, q := range d.Quantiles {
		p := q.P
		share := percentage(&p, 1)
		s.line(5, share, measured(&q.Value, places, one.Unit, ""))
	}
	s.row = max(bottom, s.row)
}

// figureRows is how many rows a figure covers.
const figureRows = 25

// binDecimals is how many decimals tell the edges of the bins apart.
func (b *book) binDecimals(one *record.Statistic, low, high float64) int {
	places := mostDecimals(one)
	if step := (high - low) / 40; step > 0 {
		places = max(places, decimalsFor(step, 2))
	}
	return places
}

// figure draws the histogram with the estimate, the limits that lead and the criteria, all on one axis true to scale.
func (b *book) figure(s, p *bookSheet, i int) {
	one := &b.results.Statistics[i]
	d := one.Distribution
	if s.err != nil {
		return
	}
	frame := distribution{edges: d.Edges, counts: d.Counts, estimate: marker{value: one.Estimate}}
	type upright struct {
		name   string
		value  float64
		colour string
		width  float64
		dash   string
	}
	var uprights []upright
	if one.Estimate != nil {
		uprights = append(uprights, upright{"estimate " + withUnit(estimateFigure(one), one.Unit), *one.Estimate, bookInk, 1.75, ""})
	}
	if in := leadingInterval(one); in != nil {
		frame.lower, frame.upper = marker{value: in.Lower}, marker{value: in.Upper}
		lower, upper := limitFigures(one, in)
		if in.Lower != nil {
			uprights = append(uprights, upright{"lower limit " + withUnit(lower, one.Unit) + ", " + in.Method, *in.Lower, bookAccent, 1.75, "dash"})
		}
		if in.Upper != nil {
			uprights = append(uprights, upright{"upper limit " + withUnit(upper, one.Unit) + ", " + in.Method, *in.Upper, bookAccent, 1.75, "dash dot"})
		}
	}
	for k := range one.Accept {
		if v, err := strconv.ParseFloat(one.Accept[k].Limit, 64); err == nil {
			frame.criteria = append(frame.criteria, marker{value: &v})
			uprights = append(uprights, upright{"criterion: " + criterionText(one, &one.Accept[k]), v, bookWarn, 2.25, "dot"})
		}
	}
	low, high := frame.shown()
	low, high, step := niceAxis(low, high)
	if !(step > 0) {
		return
	}
	most := 0
	for _, n := range d.Counts {
		most = max(most, n)
	}
	var lines []plottedLine
	begin := func(name string) (first int) {
		p.put(3, say(name), bookBody)
		return p.row
	}
	point := func(x, y float64) {
		p.put(1, count(i+1), bookBody)
		p.put(2, say(one.ID), bookBody)
		p.put(4, bookItem{number: &x}, bookBody)
		p.put(5, bookItem{number: &y}, bookBody)
		p.row++
	}
	end := func(first int, l plottedLine) {
		for row := first + 1; row < p.row; row++ {
			now := p.row
			p.row = row
			p.text(3, "", bookBody)
			p.row = now
		}
		l.name, l.x, l.y = p.reference(3, first, first), p.reference(4, first, p.row-1), p.reference(5, first, p.row-1)
		lines = append(lines, l)
	}
	first := begin("resample values in each bin")
	for k, n := range d.Counts {
		point(d.Edges[k], 0)
		point(d.Edges[k], float64(n))
		point(d.Edges[k+1], float64(n))
	}
	point(high0(d), 0)
	end(first, plottedLine{colour: "7FA9A9", width: 1.25})
	for _, u := range uprights {
		if u.value < low || u.value > high {
			// It stands in the legend all the same, so that a reader knows where it went.
			u.name += " (beyond the figure)"
			u.value = math.Max(low, math.Min(high, u.value))
			first := begin(u.name)
			point(u.value, 0)
			end(first, plottedLine{colour: u.colour, width: u.width, dash: u.dash})
			continue
		}
		first := begin(u.name)
		point(u.value, 0)
		point(u.value, 1.08*float64(most))
		end(first, plottedLine{colour: u.colour, width: u.width, dash: u.dash})
	}
	s.plot(5, s.row, plotted{name: one.Label, axis: axisTitle(one), low: low, high: high, step: step, format: axisFormat(step), lines: lines})
}

func high0(d *record.Distribution) float64 { return d.Edges[len(d.Edges)-1] }

// niceAxis widens a range to whole steps of 1, 2 or 5 times a power of ten; step is 0 where there is none.
func niceAxis(low, high float64) (from, to, step float64) {
	marks, _ := ticks(low, high, 8)
	if len(marks) < 2 {
		return low, high, 0
	}
	step, _ = strconv.ParseFloat(strconv.FormatFloat(marks[1].value-marks[0].value, 'e', 0, 64), 64)
	if step <= 0 {
		return low, high, 0
	}
	multiple := func(k float64) float64 { // of the step, as a short decimal
		v, _ := strconv.ParseFloat(strconv.FormatFloat(k*step, 'e', 12, 64), 64)
		return v
	}
	return multiple(math.Floor(low/step + 1e-9)), multiple(math.Ceil(high/step - 1e-9)), step
}

// axisFormat shows as many decimals as the step has.
func axisFormat(step float64) string {
	e := exponent(step, 1)
	if e < -9 || e > 9 {
		return "0.0E+00"
	}
	return decimalFormat(-e)
}
