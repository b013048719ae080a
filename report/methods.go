package report

import (
	"fmt"
	"slices"
	"strings"

	"lotproof/runner/interval"
	"lotproof/runner/record"
	"lotproof/runner/statistic"
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

// designText says what is drawn together.
func designText(s *record.Statistic) string {
	d := &s.Design
	units := d.Unit
	var text string
	switch {
	case len(units) == 1 && units[0] == "row":
		text = "Single rows are drawn with replacement"
	case len(units) == 1:
		text = fmt.Sprintf("Whole units, the levels of %s, are drawn with replacement; all rows of a drawn unit come along, so rows of one unit stay together", units[0])
	default:
		text = "Levels of " + units[0] + " are drawn with replacement"
		for i, inner := range units[1:] {
			if inner == "row" {
				text += "; within each drawn one of " + units[i] + ", rows are drawn with replacement"
			} else {
				text += "; within each drawn one of " + units[i] + ", levels of " + inner + " are drawn with replacement"
			}
		}
	}
	text += ", as many as there are"
	if len(d.By) > 0 {
		text += ", separately within each level of " + strings.Join(d.By, " and ")
	}
	text += "."
	if c := s.Compare; c != nil {
		if c.Paired {
			text += fmt.Sprintf(" Units hold rows of both levels of %s, so both groups are drawn jointly (paired).", c.By)
		} else {
			text += fmt.Sprintf(" No unit holds rows of both compared levels of %s, so the two groups are drawn separately.", c.By)
		}
	}
	return text
}

// streamTexts explains where the random numbers come from and how far the figures depend on them.
func streamTexts(r *record.Results) []string {
	return []string{
		"Each resample has a random stream of its own, addressed by the seed, the resampling design and the number of the resample. " +
			"Results therefore do not depend on how many processors drew, or on which other statistics the plan holds; statistics on the " +
			"same rows with the same design share their resamples. Generator: " + r.Program.Generator + " (Blackman and Vigna 2021). Seed: " +
			seedText(&r.Plan.Resolved) + ".",
		"Every simulated limit has a Monte-Carlo standard error: what another seed would change. It is found from the density of the resample " +
			"values at the limit. No digit is printed whose half unit is below twice this error, except where a digit more is needed to show on " +
			"which side of a criterion a bound lies.",
	}
}

// streamSources are the references behind streamTexts.
var streamSources = []string{
	"Blackman D, Vigna S. Scrambled linear pseudorandom number generators. ACM Transactions on Mathematical Software 47 (2021) article 36",
	"Brackett-Rozinsky N, Lemire D. Batched ranged random integer generation. Software: Practice and Experience 55 (2025) 155–169",
}

// comparisonSource is the reference behind comparisonText.
const comparisonSource = "ASTM E29, Standard Practice for Using Significant Digits in Test Data to Determine Conformance with Specifications"

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

// validityTexts says what the figures do not show.
func validityTexts(r *record.Results) []string {
	texts := []string{
		"An interval from resampling says how the estimate would vary if the study were repeated with units like those observed. It does not " +
			"cover units, conditions or times that were not sampled, nor mistakes in the data.",
		"The advisories are those that this version can compute from the sample. That none is given does not show that all is well.",
		"Each criterion stands alone at its own confidence. The chance that k bounds at 95 % all hold is about 0.95ᵏ if they are independent, " +
			"and at least 1 − 0.05·k in any case.",
		"Lotproof judges a criterion, not a product. Decisions on the safety of a device, drug, water or exposure are for the responsible and " +
			"qualified persons under the regulations that apply.",
	}
	return append(texts, r.Plan.Resolved.Study.Disclaimers...)
}

// replayTexts says how to check the report.
func replayTexts(rec *record.Record) []string {
	return []string{
		"To run this study again and compare every figure to the last bit and every file to the last byte, keep the data files beside the plan and " +
			"give the command: lotproof replay record.json",
		"The digest of the results is the SHA-256 of their compact JSON. " + "The digest of the plan, " + rec.Results.Plan.SHA256 +
			", is over its content: spacing, order of keys and comments do not enter, every value does.",
	}
}

// signatureText stands above the signature block.
func signatureText() string {
	return "The fields are left blank on purpose. What a signature here means, and who may give it, is for the quality system of the user to say."
}

// figureCaption explains the figure of a statistic.
func figureCaption(s *record.Statistic) string {
	text := fmt.Sprintf("The %s resample values of “%s”, with the estimate", grouped(int64(s.Resamples-s.FailedResamples)), s.Label)
	if i := decidingInterval(s); i != nil {
		text += " and the limits of the " + i.Method + " interval that carries the verdict"
	} else if len(s.Intervals) > 0 && s.Intervals[0].Reason == "" {
		text += " and the limits of the " + s.Intervals[0].Method + " interval"
	}
	text += "."
	if len(s.Accept) > 0 {
		text += " Hatched is what the criterion does not allow."
	}
	return text
}
