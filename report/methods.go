package report

import (
	"fmt"
	"slices"
	"strings"

	"lotproof/runner/interval"
	"lotproof/runner/record"
	"lotproof/runner/statistic"
	"lotproof/spec"
)

// A methodText explains one statistic or interval that was used.
type methodText struct {
	title, summary, formula, where, caution string
	sources                                 []string
}

// statisticMethods explains the statistics that were used, in the order of first use.
func statisticMethods(r *record.Results) []methodText {
	var out []methodText
	seen := map[string]bool{}
	for _, s := range r.Statistics {
		d := statistic.Lookup(s.Statistic)
		if seen[s.Statistic] || d == nil {
			continue
		}
		seen[s.Statistic] = true
		out = append(out, methodText{d.Name, d.Summary, d.Formula, d.Where, d.Assumptions, d.Sources})
	}
	return out
}

// intervalMethods explains the intervals that were used, in the order of first use.
func intervalMethods(r *record.Results) []methodText {
	var out []methodText
	seen := map[string]bool{}
	for _, s := range r.Statistics {
		for _, i := range s.Intervals {
			d := interval.Lookup(i.Method)
			if seen[i.Method] || d == nil {
				continue
			}
			seen[i.Method] = true
			out = append(out, methodText{d.Name, d.Summary, d.Formula, d.Where, d.Limits, d.Sources})
		}
	}
	return out
}

// resamplingTexts explains the resampling designs that were used, in the order of first use, with the statistics that
// use each.
func resamplingTexts(r *record.Results) []string {
	var texts []string
	users := map[string][]string{}
	for i := range r.Statistics {
		text := designText(&r.Statistics[i])
		if users[text] == nil {
			texts = append(texts, text)
		}
		users[text] = append(users[text], r.Statistics[i].ID)
	}
	for i, text := range texts {
		texts[i] = text + " Used for: " + strings.Join(users[text], ", ") + "."
	}
	return texts
}

// designText says what is drawn together, how often, and what comes along.
func designText(s *record.Statistic) string {
	d := &s.Design
	units, last := d.Unit, len(d.Unit)-1
	var text string
	switch {
	case last == 0 && units[0] == spec.Row:
		text = "The resampling unit is the single row. Rows are drawn with replacement, "
	case last == 0:
		text = fmt.Sprintf("The resampling unit is %s. Whole units are drawn with replacement, ", units[0])
	default:
		text = fmt.Sprintf("The outermost resampling unit is %s. Units are drawn with replacement, ", units[0])
	}
	text += drawnText(d)
	for i, inner := range units[1:] {
		if inner == spec.Row {
			text += fmt.Sprintf("; within each drawn %s its rows are drawn with replacement, as many as it has", units[i])
		} else {
			text += fmt.Sprintf("; within each drawn %s its units of %s are drawn with replacement, as many as it has",
				units[i], inner)
		}
	}
	if units[last] != spec.Row {
		text += fmt.Sprintf("; all rows of a drawn %s come along", units[last])
	}
	text += "."
	if c := s.Compare; c != nil {
		if c.Paired {
			text += fmt.Sprintf(" Units hold rows of both groups (%s %s and %s), so the groups are drawn jointly, as pairs.",
				c.By, c.Of[0], c.Of[1])
		} else {
			text += fmt.Sprintf(" No unit holds rows of both groups (%s %s and %s), so each group is drawn by itself.", c.By,
				c.Of[0], c.Of[1])
		}
	}
	return text
}

// mostStrata is how many strata are named one by one.
const mostStrata = 12

// drawnText says how many units are drawn from how many, in each stratum.
func drawnText(d *record.Design) string {
	if len(d.Strata) == 1 && d.Strata[0].Name == "" {
		return fmt.Sprintf("%s from %[1]s", countText(d.Strata[0].Units))
	}
	within := strings.Join(d.By, " and ")
	if within == "" {
		within = "group"
	}
	least, most := d.Strata[0].Units, d.Strata[0].Units
	var names, parts []string
	for _, st := range d.Strata {
		least, most = min(least, st.Units), max(most, st.Units)
		names = append(names, st.Name)
		parts = append(parts, fmt.Sprintf("%s %s from %[2]s", st.Name, countText(st.Units)))
	}
	switch {
	case len(parts) > mostStrata && least == most:
		return fmt.Sprintf("%s from %[1]s within each of %d strata (%s)", countText(least), len(parts), within)
	case len(parts) > mostStrata:
		return fmt.Sprintf("as many as there are, %s to %s, within each of %d strata (%s)", countText(least),
			countText(most), len(parts), within)
	case least == most:
		return fmt.Sprintf("%s from %[1]s within each %s (%s)", countText(least), within, strings.Join(names, "; "))
	}
	return fmt.Sprintf("within each %s: %s", within, strings.Join(parts, "; "))
}

// streamTexts explains where the random numbers come from and how far the figures depend on them.
func streamTexts(r *record.Results) []string {
	return []string{
		"Each resample has a random stream of its own, addressed by the seed, the resampling design and the number of the " +
			"resample. Results therefore do not depend on how many processors drew, or on which other statistics the plan " +
			"holds; statistics on the same rows with the same design share their resamples. Generator: " +
			r.Program.Generator + " (Blackman and Vigna 2021). Seed: " +
			seedText(&r.Plan.Resolved) + ".",
		"Every simulated limit has a Monte-Carlo standard error: what another seed would change. It is found from the " +
			"density of the resample values at the limit. No digit is printed whose half unit is below twice this error, " +
			"except where a digit more is needed to show on which side of a criterion a bound lies.",
	}
}

// streamSources are the references behind streamTexts.
var streamSources = []string{
	"Blackman D, Vigna S. Scrambled linear pseudorandom number generators. ACM Transactions on Mathematical Software 47 " +
		"(2021) article 36",
	"Brackett-Rozinsky N, Lemire D. Batched ranged random integer generation. Software: Practice and Experience 55 " +
		"(2025) 155–169",
}

// comparisonSource is the reference behind comparisonText.
const comparisonSource = "ASTM E29, Standard Practice for Using Significant Digits in Test Data to Determine " +
	"Conformance with Specifications"

// references lists what the report relies on, each once, in the order of first use: only what was used.
func references(r *record.Results) []string {
	var out []string
	add := func(sources ...string) {
		for _, s := range sources {
			if !slices.Contains(out, s) {
				out = append(out, s)
			}
		}
	}
	for _, m := range statisticMethods(r) {
		add(m.sources...)
	}
	for _, m := range intervalMethods(r) {
		add(m.sources...)
	}
	add(streamSources...)
	if comparisonText(r) != "" {
		add(comparisonSource)
	}
	return out
}

// validityTexts says what the figures do not show. The disclaimers of the plan stand by themselves.
func validityTexts(r *record.Results) []string {
	texts := []string{
		"An interval says how far the estimate may lie from the true value when units like those observed are taken again " +
			"and again. It does not cover units, conditions or times that were not sampled, nor mistakes in the data.",
		"It rests on resampling units that are independent of each other within their stratum. Rows that belong together " +
			"must lie in one unit.",
		"The advisories are those that this version computes from the data. That none is given does not show that all is " +
			"well.",
	}
	criteria := 0
	for _, s := range r.Statistics {
		criteria += len(s.Accept)
	}
	if criteria > 1 {
		texts = append(texts, fmt.Sprintf("The %d criteria are judged one by one, each at its own confidence. The "+
			"confidence that all bounds hold "+
			"together is lower.", criteria))
	}
	if r.Plan.Resolved.Study.Status == "draft" {
		texts = append(texts, "The plan is a draft: it was not marked as approved before the run.")
	}
	for _, m := range r.Plan.Resolved.Amendments {
		if m.ResultsSeen {
			texts = append(texts, fmt.Sprintf("Amendment %d was made after results had been seen.", m.Number))
		}
	}
	return append(texts, notForLotproof)
}

// notForLotproof is said in every report.
const notForLotproof = "Lotproof judges a criterion, not a product. Decisions on the safety of a device, drug, water " +
	"or exposure are for the responsible and qualified persons under the regulations that apply."

// replayTexts says how to check the report.
func replayTexts(rec *record.Record) []string {
	return []string{
		"To run this study again and compare every figure to the last bit and every file to the last byte, keep the data " +
			"files beside the plan and give the command: lotproof replay record.json",
		"The digest of the results is the SHA-256 of their compact JSON. The digest of the plan, " + rec.Results.Plan.SHA256 +
			", is over its content: spacing, order of keys and comments do not enter, every value does.",
	}
}

// signatureText stands above the signature block.
func signatureText() string {
	return "The fields are left blank on purpose. What a signature here means, and who may give it, is for the quality " +
		"system of the user to say."
}

// figureCaption explains the figure of a statistic.
func figureCaption(s *record.Statistic) string {
	text := fmt.Sprintf("The %s resample values of “%s”, with the estimate", countText(s.Resamples-s.FailedResamples),
		s.Label)
	limits := func(i *record.Interval) string {
		if i.Bound == spec.TwoSided {
			return " and both limits of the " + i.Method + " interval"
		}
		return fmt.Sprintf(" and the %s bound of the %s method", i.Bound, i.Method)
	}
	if i := decidingInterval(s); i != nil {
		text += limits(i) + ", which carries the verdict"
	} else if len(s.Intervals) > 0 && s.Intervals[0].Reason == "" {
		text += limits(&s.Intervals[0])
	}
	text += "."
	if len(s.Accept) > 0 {
		text += " Hatched is what the criterion does not allow."
	}
	return text
}
