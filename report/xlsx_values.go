package report

import (
	"fmt"

	"lotproof/runner/record"
)

// valueSheets show the resample values of each statistic, one printed page each, and hold the points of the figures.
func (b *book) valueSheets() {
	s := b.sheet("Resample values", "histogram, figure and quantiles of the resample values of each statistic", false,
		14, 14, 12, 4, 16, 18, 14, 14, 14)
	p := b.sheet("Figure points", "the points of the lines in the figures on the sheet Resample values", false,
		6, 26, 44, 24, 24)
	p.title("Figure points", "The lines drawn on the sheet Resample values. Every figure here stands there or on the "+
		"sheets Estimates and Limits, so this sheet is not printed beyond this sentence.", 5)
	p.printed()
	at := p.row
	p.heads(1, ">No.", "Statistic", "Line", ">Across", ">Up")
	p.freeze(at, 0)
	s.title("Resample values", "What the resamples gave: how many values fell into each bin, and the quantiles. Bins "+
		"hold their lower end, the last one both ends.", 9)
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
