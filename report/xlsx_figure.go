package report

import (
	"math"
	"strconv"

	"lotproof/runner/record"
)

// An upright is a line at one value of the figure of the resample values.
type upright struct {
	name  string
	value float64
	line  plottedLine // how it is drawn
}

// uprights are the estimate, the limits that lead and the criteria.
func uprights(one *record.Statistic) []upright {
	var out []upright
	add := func(name string, v *float64, line plottedLine) {
		if v != nil {
			out = append(out, upright{name, *v, line})
		}
	}
	add("estimate "+withUnit(estimateFigure(one), one.Unit), one.Estimate, plottedLine{colour: bookInk, width: 1.75})
	if in := leadingInterval(one); in != nil {
		lower, upper := limitFigures(one, in)
		add("lower limit "+withUnit(lower, one.Unit)+", "+in.Method, in.Lower,
			plottedLine{colour: bookAccent, width: 1.75, dash: "dash"})
		add("upper limit "+withUnit(upper, one.Unit)+", "+in.Method, in.Upper,
			plottedLine{colour: bookAccent, width: 1.75, dash: "dash dot"})
	}
	for k := range one.Accept {
		a := &one.Accept[k]
		if v, err := strconv.ParseFloat(a.Limit, 64); err == nil {
			add("criterion: "+criterionText(one, a), &v, plottedLine{colour: bookWarn, width: 2.25, dash: "dot"})
		}
	}
	return out
}

// figure draws the histogram with its uprights on one axis true to scale, from points that it writes on sheet p. A
// column chart would know bins only, not values, and not all viewers can lay lines over one.
func (b *book) figure(s, p *bookSheet, i int) {
	one := &b.results.Statistics[i]
	d := one.Distribution
	low, high, step := figureAxis(one)
	if b.err != nil || step == 0 {
		return
	}
	most := 0
	bars := [][2]float64{}
	for k, n := range d.Counts {
		most = max(most, n)
		from, to, up := d.Edges[k], d.Edges[k+1], float64(n)
		bars = append(bars, [2]float64{from, 0}, [2]float64{from, up}, [2]float64{to, up})
	}
	bars = append(bars, [2]float64{d.Edges[len(d.Edges)-1], 0})
	lines := []plottedLine{p.points(i, one.ID, "resample values in each bin", bars,
		plottedLine{colour: "7FA9A9", width: 1.25})}
	for _, u := range uprights(one) {
		points := [][2]float64{{u.value, 0}, {u.value, 1.08 * float64(most)}}
		if u.value < low || u.value > high { // it stands in the legend all the same, so that a reader knows where it went
			u.name += " (beyond the figure)"
			points = [][2]float64{{math.Max(low, math.Min(high, u.value)), 0}}
		}
		lines = append(lines, p.points(i, one.ID, u.name, points, u.line))
	}
	s.plot(5, s.row, plotted{name: one.Label, axis: axisTitle(one), low: low, high: high, step: step,
		format: axisFormat(step), lines: lines})
}

// points writes the points of one line of the figure of a statistic and returns the line.
func (s *bookSheet) points(i int, id, name string, points [][2]float64, line plottedLine) plottedLine {
	first := s.row
	for k, point := range points {
		title := ""
		if k == 0 {
			title = name
		}
		for c, item := range []bookItem{count(i + 1), say(id), say(title), {number: &point[0]}, {number: &point[1]}} {
			s.put(1+c, item, look{})
		}
		s.row++
	}
	line.name = s.reference(3, first, first)
	line.x, line.y = s.reference(4, first, s.row-1), s.reference(5, first, s.row-1)
	return line
}

// figureAxis returns the axis of the figure of a statistic; step is 0 where there is none.
func figureAxis(one *record.Statistic) (low, high, step float64) {
	d := one.Distribution
	frame := distribution{edges: d.Edges, counts: d.Counts, estimate: marker{value: one.Estimate}}
	if in := leadingInterval(one); in != nil {
		frame.lower, frame.upper = marker{value: in.Lower}, marker{value: in.Upper}
	}
	for k := range one.Accept {
		if v, err := strconv.ParseFloat(one.Accept[k].Limit, 64); err == nil {
			frame.criteria = append(frame.criteria, marker{value: &v})
		}
	}
	return niceAxis(frame.shown())
}

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
