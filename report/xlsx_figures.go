package report

import (
	"fmt"
	"strings"

	"lotproof/runner/record"
	"lotproof/spec"
)

// estimateSheet has one row for each statistic.
func (b *book) estimateSheet() {
	s := b.sheet("Estimates", "every statistic: estimate, standard error, bias, rows, units, resamples", true,
		5, 16, 30, 11, 34, 16, 16, 16, 9, 9, 11, 12, 22)
	s.title("Estimates", "Figures are shown with the digits that they support and stored with all their digits. Standard "+
		"error: the standard deviation of the resample values. Bias: their mean less the estimate.", 13)
	at := s.row
	s.heads(1, ">No.", "Statistic", "Label", "Role", "What is estimated", ">Estimate", ">Standard error", ">Bias",
		">Rows used", ">Units", ">Resamples", ">Without a value", "Reason")
	s.freeze(at, 2)
	for i := range b.results.Statistics {
		one := &b.results.Statistics[i]
		spread, bias := 0, 0
		if one.StandardError != nil {
			spread = standardErrorDecimals(one)
			bias = spread + 1
			if text := biasFigure(one); one.Bias != nil {
				_, fraction, _ := strings.Cut(text, ".")
				bias = len(fraction)
			}
		}
		s.line(1, count(i+1), say(one.ID), say(one.Label), say(one.Role), say(estimated(one)),
			measured(one.Estimate, estimateDecimals(one), one.Unit, noFigure),
			measured(one.StandardError, spread, one.Unit, noFigure), measured(one.Bias, bias, one.Unit, noFigure),
			count(one.N), count(one.Design.Units), count(one.Resamples), count(one.FailedResamples), say(failureText(one)))
	}
	b.groupTable(s)
}

// estimated says what is estimated, with the unit if it does not stand beside the figures.
func estimated(one *record.Statistic) string {
	if longUnit(one.Unit) {
		return describe(one) + ", in " + one.Unit
	}
	return describe(one)
}

// failureText says why figures are missing: that of the sample, or those of resamples.
func failureText(one *record.Statistic) string {
	if one.Estimate == nil {
		return "no estimate: " + one.EstimateReason
	}
	var parts []string
	for _, f := range one.Failures {
		parts = append(parts, fmt.Sprintf("%s: %s", grouped(int64(f.Count)), f.Reason))
	}
	return strings.Join(parts, "; ")
}

// groupTable shows the two groups behind each comparison.
func (b *book) groupTable(s *bookSheet) {
	heads := true
	for i := range b.results.Statistics {
		one := &b.results.Statistics[i]
		c := one.Compare
		if c == nil {
			continue
		}
		if heads {
			s.heading("Groups behind the comparisons")
			s.heads(1, ">No.", "Statistic", "Group", "Drawn", "Comparison", ">Estimate", ">Rows used", ">Units")
			heads = false
		}
		drawn := "separately"
		if c.Paired {
			drawn = "jointly"
		}
		unit, places := one.Unit, estimateDecimals(one)
		if c.As == "ratio" {
			unit = b.unitOfGroups(one)
		}
		for g := range c.Of {
			if v := c.Estimates[g]; c.As == "ratio" && v != nil {
				places = decimalsFor(*v, 4)
			}
			s.line(1, count(i+1), say(one.ID), say(c.By+" "+c.Of[g]), say(drawn), say(comparedText(c)),
				measured(c.Estimates[g], places, unit, noFigure), count(c.N[g]), count(c.Units[g]))
		}
	}
}

// unitOfGroups is the unit of the two figures behind a ratio.
func (b *book) unitOfGroups(one *record.Statistic) string {
	d := definitionOf(one)
	if d == nil || len(one.Of) == 0 {
		return ""
	}
	var units []string
	for i, t := range b.data.Tables {
		if b.results.Sources[i].Name != one.Source {
			continue
		}
		for _, name := range one.Of {
			c := t.Column(name)
			if c == nil {
				return ""
			}
			units = append(units, c.Unit)
		}
	}
	if len(units) != len(one.Of) {
		return ""
	}
	return d.Unit(units)
}

// limitSheet has one row for each interval, those of one statistic one below the other.
func (b *book) limitSheet() {
	s := b.sheet("Limits", "every interval and bound, with Monte-Carlo error and companion", true,
		5, 16, 16, 12, 10, 16, 16, 16, 16, 12, 28, 34)
	s.title("Limits", "The Monte-Carlo error of a limit is the standard deviation that it would have over other seeds. A "+
		"companion is an exact or classical interval shown beside those from resampling. Attained confidence: what an "+
		"interval made of ranks really reaches.", 12)
	at := s.row
	s.heads(1, ">No.", "Statistic", "Interval", ">Confidence", "Bound", ">Lower limit", ">Monte-Carlo error",
		">Upper limit", ">Monte-Carlo error", ">Attained confidence", "Use", "Intermediate figures")
	s.freeze(at, 2)
	for i := range b.results.Statistics {
		one := &b.results.Statistics[i]
		for k := range one.Intervals {
			in := &one.Intervals[k]
			places := intervalDecimals(one, in)
			limit := func(v *float64, unasked spec.Bound) bookItem {
				otherwise := noFigure
				if in.Bound == unasked {
					otherwise = notAsked
				}
				return measured(v, places, one.Unit, otherwise)
			}
			items := []bookItem{count(i + 1), say(one.ID), say(in.Method), confidenceItem(in.Confidence),
				say(string(in.Bound)), limit(in.Lower, spec.Upper), errorItem(in.MonteCarloError.Lower, one.Unit),
				limit(in.Upper, spec.Lower), errorItem(in.MonteCarloError.Upper, one.Unit), percentage(in.Attained, 2),
				say(useText(in)), quietly(figureList(in.Parameters))}
			if in.Decides {
				for _, c := range []int{2, 5, 7, 10} {
					items[c].bold = true
				}
			}
			s.line(1, items...)
		}
	}
}

// errorItem is a Monte-Carlo error with two significant digits.
func errorItem(e *float64, unit string) bookItem {
	if e == nil {
		return bookItem{text: notAsked, soft: true, right: true}
	}
	if *e == 0 {
		return measured(e, 0, unit, "")
	}
	return measured(e, decimalsFor(*e, 2), unit, "")
}

// figureList writes named figures, one a line.
func figureList(values []record.Value) string {
	var parts []string
	for _, v := range values {
		parts = append(parts, v.Name+" "+significant(v.Value, 4))
	}
	return strings.Join(parts, "; ")
}

// advisorySheet lists every advisory, the gravest first.
func (b *book) advisorySheet() {
	s := b.sheet("Advisories", "every doubt about a result, with what to do and where the rule comes from", true,
		12, 22, 34, 52, 42, 34, 44)
	s.title("Advisories", "Stop: the interval carries no verdict. Caution: read the result with care. Note: worth "+
		"knowing. That no advisory is given does not show that all is well; only what the catalogue lists is checked.", 7)
	at := s.row
	s.heads(1, "Severity", "Advisory", "Statistic", "Finding", "What to do", "Evidence", "Source of the rule")
	s.freeze(at, 0)
	none := true
	for _, severity := range []string{"stop", "caution", "note"} {
		for i := range b.results.Statistics {
			one := &b.results.Statistics[i]
			for _, v := range one.Advisories {
				if v.Severity != severity {
					continue
				}
				none = false
				s.line(1, strongly(markOf(severity)+" "+severity), say(v.Code), say(one.Label), say(v.Text), say(v.Action),
					say(figureList(v.Evidence)), quietly(v.Source))
			}
		}
	}
	if none {
		s.line(1, say("none"))
	}
}
