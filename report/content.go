// Package report writes what a run found: the results workbook, the method appendix, and the short texts of the command
// line. Each is a pure function of the record and the rows that were read.
//
// What is said is decided once, here and in number.go, wording.go and methods.go: digits, units, sentences, order.
// The writers only set it out. One file imports the workbook library (xlsx.go), and files that begin with pdf the PDF
// library.
package report

import (
	"fmt"
	"math/big"
	"strings"

	"lotproof/runner/record"
	"lotproof/spec"
)

// confidenceText returns a confidence as a percentage, without binary rounding: 0.95 becomes 95 %.
func confidenceText(level string) string {
	p, ok := new(big.Rat).SetString(level)
	if !ok {
		return level
	}
	return trimZeros(p.Mul(p, big.NewRat(100, 1)).FloatString(12)) + " %"
}

// boundText names the limits of an interval in words: "lower 95 % confidence bound".
func boundText(bound spec.Bound, level string) string {
	if bound == spec.TwoSided {
		return fmt.Sprintf("two-sided %s confidence interval", confidenceText(level))
	}
	return fmt.Sprintf("%s %s confidence bound", bound, confidenceText(level))
}

// criterionText returns a criterion in words with its unit: "at least 1.20 N/15mm".
func criterionText(s *record.Statistic, a *record.Accept) string {
	text := "at least "
	if a.Criterion == atMost {
		text = "at most "
	}
	return withUnit(text+minus(a.Limit), s.Unit)
}

// decisionSentence says what was compared with what, the verdict, and for a verdict other than met the reason.
func decisionSentence(r *record.Results, s *record.Statistic, a *record.Accept) string {
	name, criterion := verdictBound(r, s, a), criterionText(s, a)
	head := s.Label + ": the " + name
	if c := s.Compare; c != nil {
		head = fmt.Sprintf("%s (%s): the %s", s.Label, comparedText(c), name)
	}
	if a.Bound == nil {
		return fmt.Sprintf("%s carries no verdict (%s); the criterion, %s, is %s.", head, a.Why, criterion, a.Verdict)
	}
	text := fmt.Sprintf("%s is %s; the criterion, %s, is %s (%s)", head, withUnit(boundFigure(s, a), s.Unit),
		criterion, a.Verdict,
		comparison(r, a))
	estimate := withUnit(estimateFigure(s), s.Unit)
	switch {
	case a.Verdict == "not shown" && boundRight(a):
		text += fmt.Sprintf(": the bound lies past its own estimate, %s, which is on the wrong side", estimate)
	case a.Verdict == "not shown":
		text += fmt.Sprintf(": the estimate, %s, is on its right side, the bound is not", estimate)
	case a.Verdict == "not met":
		text += fmt.Sprintf(": the estimate, %s, and the bound are both on its wrong side", estimate)
	}
	if _, why, companion := strings.Cut(a.Why, byCompanion); companion {
		text += fmt.Sprintf(". The companion (%s) decided, as the plan says: %s", a.Method, why)
	}
	return text + "."
}

// byCompanion parts the verdict from the reason why the companion decided, in the words of the runner.
const byCompanion = "; decided by the companion, as the plan says: "

// comparedText names the two groups of a comparison.
func comparedText(c *record.Compare) string {
	if c.As == "ratio" {
		return fmt.Sprintf("ratio, %s over %s", c.Of[0], c.Of[1])
	}
	return fmt.Sprintf("difference, %s less %s", c.Of[0], c.Of[1])
}

// verdictBound names the bound that belongs to a criterion: "lower 95 % confidence bound".
func verdictBound(r *record.Results, s *record.Statistic, a *record.Accept) string {
	side := "lower"
	if a.Criterion == atMost {
		side = "upper"
	}
	if boundOf(r, s) == spec.TwoSided {
		return fmt.Sprintf("%s limit of the two-sided %s confidence interval", side, confidenceText(a.Confidence))
	}
	return fmt.Sprintf("%s %s confidence bound", side, confidenceText(a.Confidence))
}

// boundOf says which limits the plan asks for.
func boundOf(r *record.Results, s *record.Statistic) spec.Bound {
	if i := decidingInterval(s); i != nil {
		return i.Bound
	}
	for _, p := range r.Plan.Resolved.Statistics {
		if p.ID == s.ID {
			return p.Bound
		}
	}
	return spec.TwoSided
}

// decidingInterval returns the interval that carries the verdict, or nil.
func decidingInterval(s *record.Statistic) *record.Interval {
	for i := range s.Intervals {
		if s.Intervals[i].Decides {
			return &s.Intervals[i]
		}
	}
	return nil
}

// comparison names the rule of one comparison.
func comparison(r *record.Results, a *record.Accept) string {
	rule := r.Plan.Resolved.Rounding
	if rule != nil && rule.Rule == "rounded" {
		return fmt.Sprintf("compared as %s after rounding to the decimals of the criterion, ASTM E29", minus(a.Compared))
	}
	return "absolute comparison, ASTM E29"
}

// comparisonText says how bounds are compared with criteria; empty if there is no criterion.
func comparisonText(r *record.Results) string {
	rule := r.Plan.Resolved.Rounding
	criteria := false
	for _, s := range r.Statistics {
		criteria = criteria || len(s.Accept) > 0
	}
	if rule == nil || !criteria {
		return ""
	}
	text := "A criterion is met if bound and estimate lie on the right side of the limit; equal counts as right. It is not " +
		"met if neither does, and not shown if one of them does not, or if no bound carries a verdict. "
	if rule.Rule == "rounded" {
		ties := "to the even digit"
		if rule.Ties == "away" {
			ties = "away from zero"
		}
		return text + "Bound and estimate are first rounded to the decimals in which the limit is written, halves " + ties +
			" (rounding method of ASTM E29). The comparison is made in decimal arithmetic."
	}
	return text + "Bounds are compared without rounding (absolute method of ASTM E29), in decimal arithmetic with 15 " +
		"significant digits, which takes off what binary arithmetic adds."
}

// useText says what an interval is there for.
func useText(i *record.Interval) string {
	switch {
	case i.Reason != "":
		return "no limit: " + i.Reason
	case i.Decides && i.Companion:
		return "companion; carries the verdict"
	case i.Decides:
		return "carries the verdict"
	case i.Companion:
		return "companion"
	}
	return "shown"
}

// describe says in words what a statistic is: name, parameters, columns, rows and comparison.
func describe(s *record.Statistic) string {
	text := s.Statistic
	if len(s.Of) > 0 {
		text += " of " + strings.Join(s.Of, " and ")
	}
	var with []string
	for _, p := range s.With {
		with = append(with, p.Name+" "+p.Text)
	}
	if len(with) > 0 {
		text += " (" + strings.Join(with, ", ") + ")"
	}
	text += ", source " + s.Source
	if s.Where != "" {
		text += ", rows where " + s.Where
	}
	if c := s.Compare; c != nil {
		text += fmt.Sprintf(", %s (%s)", comparedText(c), c.By)
	}
	return text
}

// parameterText lists the intermediate figures of an interval; empty if there are none.
func parameterText(i *record.Interval) string {
	var parts []string
	for _, p := range i.Parameters {
		parts = append(parts, p.Name+" = "+significant(p.Value, 4))
	}
	if i.Attained != nil {
		parts = append(parts, "attained confidence = "+attainedText(i.Attained))
	}
	if len(parts) == 0 {
		return ""
	}
	return fmt.Sprintf("%s, %s: %s.", i.Method, confidenceText(i.Confidence), strings.Join(parts, ", "))
}

// evidenceText lists the figures behind an advisory; empty if there are none.
func evidenceText(a *record.Advisory) string {
	var parts []string
	for _, p := range a.Evidence {
		parts = append(parts, p.Name+" "+significant(p.Value, 3))
	}
	return strings.Join(parts, ", ")
}

// axisTitle names the axis of the figure of a statistic.
func axisTitle(s *record.Statistic) string {
	return withUnit(s.Statistic, bracketed(s.Unit))
}

func bracketed(unit string) string {
	if unit == "" {
		return ""
	}
	return "(" + unit + ")"
}

// rowsText is the ledger of a source in one line.
func rowsText(s *record.Source) string {
	return fmt.Sprintf("%s read = %s used + %s excluded", countText(s.Rows.Read), countText(s.Rows.Used),
		countText(s.Rows.Excluded))
}

// seedText says where the seed comes from.
func seedText(p *spec.Plan) string {
	if p.Seed.Derived {
		return fmt.Sprintf("%d, derived from the plan: the first 8 bytes of the SHA-256 of its content without the seed "+
			"line", p.Seed.Value)
	}
	return fmt.Sprintf("%d, chosen in the plan", p.Seed.Value)
}

// orElse returns the text, or the other one if the text is empty.
func orElse(text, other string) string {
	if text == "" {
		return other
	}
	return text
}

// notStated stands where a plan says nothing.
const notStated = "not stated"

// markOf is the shape of a verdict or a severity; the word always stands beside it.
func markOf(word string) string {
	switch word {
	case "met":
		return "●"
	case "not met":
		return "■"
	case "not shown":
		return "▲"
	case "stop":
		return "■"
	case "caution":
		return "▲"
	}
	return "○"
}
