package report

import (
	"strconv"
	"strings"

	"lotproof/runner/record"
	"lotproof/spec"
)

// resultsPart shows all criteria on one scale, then each statistic by itself.
func (a *appendix) resultsPart() {
	a.flow.add(a.section(0, "Results", "results")...)
	if len(a.results.Statistics) == 0 {
		a.flow.add(prose("The record holds no statistic.")...)
	}
	a.overview()
	for i := range a.results.Statistics {
		a.result(i)
	}
}

// overview draws the criteria on a common scale if there are several.
func (a *appendix) overview() {
	o := overview{outside: "outside the criterion", within: "within the criterion",
		axis: "distance from the criterion, in standard errors"}
	for i := range a.results.Statistics {
		s := &a.results.Statistics[i]
		for j := range s.Accept {
			c := &s.Accept[j]
			limit, err := strconv.ParseFloat(c.Limit, 64)
			if err != nil {
				continue // a record whose limit is no number has no place on the scale
			}
			least := c.Criterion == lowerAtLeast
			r := overviewRow{verdict: plainRun(smallBold, c.Verdict), sign: verdictSymbol(c.Verdict),
				estimate: distance(s.Estimate, s.StandardError, limit, least),
				bound:    distance(c.Bound, s.StandardError, limit, least)}
			r.label = []run{{text: s.Label, style: style{face: sans, size: 8, colour: accent}, to: statisticName(i)},
				{text: ", " + criterionText(s, c), style: style{face: sans, size: 8, colour: soft}}}
			switch {
			case s.Estimate == nil:
				r.missing = "no estimate"
			case r.estimate == nil:
				r.missing = "no standard error"
			}
			o.rows = append(o.rows, r)
		}
	}
	if len(o.rows) < 2 {
		return
	}
	a.flow.add(a.section(1, "All criteria on one scale", "overview")...)
	atoms := o.atoms(1)
	if height(atoms) < 0.6*(bottomEdge-topEdge) {
		atoms = together(atoms)
	}
	atoms[len(atoms)-1].keep = true
	atoms = append(atoms, caption(a.figureLabel(), "Distance of the estimate (diamond) and of the bound that carries the "+
		"verdict (stroke) from each criterion, in standard errors of the statistic; the acceptable side is on the right. "+
		"An arrow stands for a value beyond the scale.", 1)...)
	a.flow.add(atoms...)
}

const (
	lowerAtLeast = "lower_at_least"
	upperAtMost  = "upper_at_most"
)

// resultsNumber is the number of the part on results.
const resultsNumber = 3

// resultNumber returns the number of the section of a statistic, which earlier pages refer to.
func (a *appendix) resultNumber(i int) string {
	criteria := 0
	for _, s := range a.results.Statistics {
		criteria += len(s.Accept)
	}
	if criteria >= 2 {
		i++ // the overview comes first
	}
	return strconv.Itoa(resultsNumber) + "." + strconv.Itoa(i+1)
}

// result is the block of one statistic. Its numbers stay on one page if they can, and with
// the drawing if that does not leave much of a page empty.
func (a *appendix) result(i int) {
	s := &a.results.Statistics[i]
	atoms := a.section(1, s.Label, statisticName(i))
	atoms = append(atoms, prose(capital(describe(s))+". "+capital(s.Role)+" statistic.")...)
	for j := range s.Accept {
		c := &s.Accept[j]
		t := table{columns: []column{{least: 24, most: 24}, {}}, size: sentence.size, before: 2, rows: [][]cell{
			{{runs: plainRun(sentenceBold, c.Verdict), symbol: verdictSymbol(c.Verdict)},
				cellText(sentence, withoutLabel(decisionSentence(a.results, s, c), s.Label))}}}
		atoms = append(atoms, t.atoms()...)
	}
	if s.Estimate == nil {
		atoms = append(atoms, rich(run{text: "No estimate: ", style: bodyBold},
			run{text: s.EstimateReason + full(s.EstimateReason), style: body})...)
	} else {
		atoms = append(atoms, estimates(s)...)
	}
	atoms = append(atoms, groups(s)...)
	atoms = append(atoms, intervals(s)...)
	atoms = append(atoms, findings(s)...)
	drawn := a.distribution(s)
	const page = bottomEdge - topEdge
	switch {
	case height(atoms)+height(drawn) < 0.65*page:
		atoms = together(append(atoms, drawn...))
	case height(atoms) < 0.7*page:
		atoms = append(together(atoms), drawn...)
	default:
		atoms = append(atoms, drawn...)
	}
	a.flow.add(atoms...)
}

// withoutLabel takes the label off the beginning of a sentence that stands below a heading with the same label.
func withoutLabel(sentence, label string) string {
	rest, found := strings.CutPrefix(sentence, label+": ")
	if !found {
		return sentence
	}
	return capital(rest)
}

// estimates are the figures of a statistic beside its intervals.
func estimates(s *record.Statistic) []atom {
	t := table{columns: []column{{title: "Estimate", align: right}, {title: "Standard error", align: right},
		{title: "Bias", align: right}, {title: "Rows", align: right}, {title: "Units", align: right},
		{title: "Resamples", align: right}, {title: "Without a value", align: right}, {title: "Unit"}},
		size: small.size, before: 3, tight: true}
	t.rows = [][]cell{{cellText(smallBold, estimateFigure(s)), cellText(small, standardErrorFigure(s)),
		cellText(small, biasFigure(s)), cellText(small, grouped(int64(s.N))), cellText(small, grouped(int64(s.Design.Units))),
		cellText(small, grouped(int64(s.Resamples))), cellText(small, grouped(int64(s.FailedResamples))),
		cellText(small, orDash(s.Unit))}}
	atoms := t.atoms()
	if len(s.Failures) > 0 {
		var parts []string
		for _, one := range s.Failures {
			parts = append(parts, grouped(int64(one.Count))+" × "+one.Reason)
		}
		atoms = append(atoms, paragraph(plainRun(quiet, "Resamples without a value: "+strings.Join(parts, ", ")+"."),
			leftEdge, measure, 1)...)
	}
	return atoms
}

// groups shows the two groups behind a comparison.
func groups(s *record.Statistic) []atom {
	c := s.Compare
	if c == nil {
		return nil
	}
	t := table{columns: []column{{title: "Group"}, {title: "Estimate", align: decimal}, {title: "Rows", align: right},
		{title: "Units", align: right}},
		size: small.size, before: 3, tight: true}
	for g := range c.Of {
		t.rows = append(t.rows, []cell{cellText(small, c.By+" "+c.Of[g]), cellText(small, groupFigure(s, g)),
			cellText(small, grouped(int64(c.N[g]))), cellText(small, grouped(int64(c.Units[g])))})
	}
	return t.atoms()
}

// intervals lists the limits, those that decide in bold.
func intervals(s *record.Statistic) []atom {
	if len(s.Intervals) == 0 {
		return nil
	}
	lower, upper := false, false
	for _, i := range s.Intervals {
		lower = lower || i.Bound != spec.Upper
		upper = upper || i.Bound != spec.Lower
	}
	columns := []column{{title: "Interval"}, {title: "Confidence", align: right}}
	if lower {
		columns = append(columns, column{title: "Lower limit", align: decimal},
			column{title: "Monte-Carlo error", align: decimal})
	}
	if upper {
		columns = append(columns, column{title: "Upper limit", align: decimal},
			column{title: "Monte-Carlo error", align: decimal})
	}
	columns = append(columns, column{title: "Use"})
	t := table{columns: columns, size: small.size, before: 3}
	var steps []string
	for _, i := range s.Intervals {
		st := small
		if i.Decides {
			st = smallBold
		}
		row := []cell{cellText(st, i.Method), cellText(st, confidenceText(i.Confidence))}
		low, high := limitFigures(s, &i)
		if lower {
			row = append(row, cellText(st, low), cellText(small, errorFigure(i.MonteCarloError.Lower)))
		}
		if upper {
			row = append(row, cellText(st, high), cellText(small, errorFigure(i.MonteCarloError.Upper)))
		}
		row = append(row, cellText(small, useText(&i)))
		t.rows = append(t.rows, row)
		t.strong = append(t.strong, i.Decides)
		if text := parameterText(&i); text != "" {
			steps = append(steps, text)
		}
	}
	atoms := t.atoms()
	if len(steps) > 0 {
		atoms = append(atoms, paragraph(plainRun(quiet, "Intermediate figures. "+strings.Join(steps, " ")), leftEdge,
			measure, 1.2)...)
	}
	return atoms
}

// findings lists the advisories of a statistic in brief; the part on limits has them with what to do.
func findings(s *record.Statistic) []atom {
	if len(s.Advisories) == 0 {
		return nil
	}
	t := table{columns: []column{{least: 25, most: 25}, {}}, size: small.size, before: 3}
	for _, v := range s.Advisories {
		t.rows = append(t.rows, []cell{{runs: plainRun(smallBold, v.Severity), symbol: severitySymbol(v.Severity)},
			cellText(small, v.Text)})
	}
	return t.atoms()
}

// distribution draws the resample values, if there are any.
func (a *appendix) distribution(s *record.Statistic) []atom {
	d := s.Distribution
	if d == nil || len(d.Counts) == 0 || len(d.Edges) != len(d.Counts)+1 {
		return nil
	}
	fig := distribution{edges: d.Edges, counts: d.Counts, vertical: "resamples", axis: axisTitle(s),
		estimate: marker{value: s.Estimate, label: "estimate " + estimateFigure(s)}}
	for k := range s.Intervals {
		i := &s.Intervals[k]
		if !i.Decides && !(k == 0 && !decided(s)) {
			continue
		}
		fig.bound = i.Bound
		low, high := limitFigures(s, i)
		fig.lower = marker{value: i.Lower, label: "lower limit " + low}
		fig.upper = marker{value: i.Upper, label: "upper limit " + high}
	}
	for k := range s.Accept {
		c := &s.Accept[k]
		limit, err := strconv.ParseFloat(c.Limit, 64)
		if err != nil {
			continue
		}
		fig.criteria = append(fig.criteria, marker{value: &limit, label: "criterion " + criterionText(s, c),
			least: c.Criterion == lowerAtLeast})
	}
	atoms := []atom{{before: 3.5, height: fig.height(), keep: true, draw: fig.draw}}
	return together(append(atoms, caption(a.figureLabel(), figureCaption(s), 1)...))
}

// decided says whether some interval carries the verdict.
func decided(s *record.Statistic) bool {
	for _, i := range s.Intervals {
		if i.Decides {
			return true
		}
	}
	return false
}
