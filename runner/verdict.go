package runner

import (
	"fmt"
	"math/big"
	"slices"
	"strconv"
	"strings"

	"lotproof/runner/advisory"
	"lotproof/runner/record"
	"lotproof/spec"
)

// The three verdicts, and the word for a study without criteria.
const (
	Met         = "met"
	NotMet      = "not met"
	NotShown    = "not shown"
	NoCriterion = "no criterion"
)

// The names of the criteria, as the plan writes them.
const (
	lowerAtLeast = "lower_at_least"
	upperAtMost  = "upper_at_most"
)

// figureDigits is how many significant decimal digits of a computed figure enter a comparison: as many as every binary
// number of 64 bits carries faithfully (IEEE 754, 53-bit significand). It takes off what binary arithmetic adds, so
// that 1.35 − 1.15 compares as 0.2.
const figureDigits = 15

// judge compares a bound with a limit under a rule of ASTM E29 and returns the verdict and the decimal that was compared.
// The criterion is met if bound and estimate are on its right side (equal counts as right), not met if neither is, and not
// shown if one of them is. The estimate is compared by the same rule.
func judge(criterion string, limit spec.Number, bound, estimate float64, rule spec.Rounding) (verdict, compared string) {
	at := decimal(limit.Text)
	places := limit.Decimals()
	right := func(v float64) (bool, string) {
		d := decimal(strconv.FormatFloat(v, 'e', figureDigits-1, 64))
		text := plain(d)
		if rule.Rule == "rounded" {
			d = roundTo(d, places, rule.Ties)
			text = d.FloatString(places)
		}
		if criterion == upperAtMost {
			return d.Cmp(at) <= 0, text
		}
		return d.Cmp(at) >= 0, text
	}
	met, compared := right(bound)
	side, _ := right(estimate)
	switch {
	case met && side:
		return Met, compared
	case met || side:
		return NotShown, compared // a bound past its own estimate shows nothing either
	}
	return NotMet, compared
}

// judgedRight says whether a bound by itself is on the right side of a limit.
func judgedRight(criterion string, limit spec.Number, bound float64, rule spec.Rounding) bool {
	verdict, _ := judge(criterion, limit, bound, bound, rule)
	return verdict == Met
}

// decimal reads a decimal text exactly. The text comes from spec or from strconv.
func decimal(text string) *big.Rat {
	d, ok := new(big.Rat).SetString(text)
	if !ok {
		panic("runner: not a decimal number: " + text)
	}
	return d
}

// plain writes a finite decimal without exponent and without needless zeros.
func plain(d *big.Rat) string {
	// The denominator has no factors but 2 and 5, so some number of decimals is exact; the figures here need few.
	for places := 0; ; places++ {
		text := d.FloatString(places)
		if back, _ := new(big.Rat).SetString(text); back.Cmp(d) == 0 {
			return text
		}
	}
}

// roundTo rounds to a number of decimals, a tie to the even digit or away from zero.
func roundTo(d *big.Rat, places int, ties string) *big.Rat {
	scale := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(places)), nil))
	scaled := new(big.Rat).Mul(d, scale)
	negative := scaled.Sign() < 0
	scaled.Abs(scaled)
	whole, rest := new(big.Int).QuoRem(scaled.Num(), scaled.Denom(), new(big.Int))
	twice := rest.Lsh(rest, 1)
	switch twice.Cmp(scaled.Denom()) {
	case 1:
		whole.Add(whole, big.NewInt(1))
	case 0:
		if ties == "away" || whole.Bit(0) == 1 {
			whole.Add(whole, big.NewInt(1))
		}
	}
	out := new(big.Rat).SetInt(whole)
	if negative {
		out.Neg(out)
	}
	return out.Quo(out, scale)
}

// accept judges the criteria of a statistic from the intervals and advisories that are already in its record.
func accept(p *spec.Statistic, rule *spec.Rounding, s *record.Statistic) {
	s.Accept = []record.Accept{}
	if p.Accept.LowerAtLeast == nil && p.Accept.UpperAtMost == nil {
		return
	}
	deciding, why := decide(p, s)
	one := func(criterion string, limit *spec.Number, bound func(*record.Interval) *float64) {
		if limit == nil {
			return
		}
		out := record.Accept{Criterion: criterion, Limit: limit.Text, Confidence: p.Confidence[0].Text,
			Verdict: NotShown, Why: why}
		if deciding != nil {
			out.Method, out.Confidence = deciding.Method, deciding.Confidence
			out.Bound = bound(deciding)
		}
		if out.Bound != nil && s.Estimate != nil {
			out.Verdict, out.Compared = judge(criterion, *limit, *out.Bound, *s.Estimate, *rule)
			switch rightSide := judgedRight(criterion, *limit, *out.Bound, *rule); {
			case out.Verdict == Met:
				out.Why = "the bound is on the right side of the criterion"
			case out.Verdict == NotMet:
				out.Why = "estimate and bound are both on the wrong side of the criterion"
			case rightSide:
				out.Why = "the bound lies past its own estimate, which is on the wrong side of the criterion"
			default:
				out.Why = "the estimate is on the right side of the criterion, the bound is not"
			}
			if deciding.Companion {
				out.Why += "; decided by the companion, as the plan says: " + why
			}
		}
		s.Accept = append(s.Accept, out)
	}
	one(lowerAtLeast, p.Accept.LowerAtLeast, func(i *record.Interval) *float64 { return i.Lower })
	one(upperAtMost, p.Accept.UpperAtMost, func(i *record.Interval) *float64 { return i.Upper })
}

// decide marks the interval that carries the verdict: the first that the plan names, at its first confidence. If that
// one cannot be had or is stopped by an advisory, the companion decides where the plan says so, and else nothing does.
// The text says why the first one does not decide.
func decide(p *spec.Statistic, s *record.Statistic) (*record.Interval, string) {
	var first, companion *record.Interval
	for i := range s.Intervals {
		in := &s.Intervals[i]
		if in.Confidence != p.Confidence[0].Text {
			continue
		}
		if in.Companion && companion == nil {
			companion = in
		}
		if !in.Companion && first == nil {
			first = in
		}
	}
	if s.Estimate == nil {
		return nil, "there is no estimate: " + s.EstimateReason
	}
	if first == nil {
		return nil, "no interval was computed"
	}
	var stops []string
	for _, a := range s.Advisories {
		if a.Severity == advisory.Stop {
			stops = append(stops, a.Code)
		}
	}
	stopped := "stopped by " + strings.Join(stops, ", ")
	why := stopped
	switch {
	case first.Reason != "":
		why = fmt.Sprintf("no %s limit: %s", first.Method, first.Reason)
	case len(stops) == 0:
		first.Decides = true
		return first, ""
	}
	if companion != nil && p.Companion == "decides" && slices.ContainsFunc(stops, advisory.StopsEvery) {
		return nil, stopped
	}
	if p.Companion == "decides" && companion != nil {
		if companion.Reason != "" {
			return nil, why + fmt.Sprintf("; no %s limit: %s", companion.Method, companion.Reason)
		}
		companion.Decides = true
		return companion, why
	}
	return nil, why
}

// worst returns the verdict of the study: the worst over all criteria.
func worst(statistics []record.Statistic) string {
	verdict := NoCriterion
	rank := map[string]int{NoCriterion: 0, Met: 1, NotShown: 2, NotMet: 3}
	for _, s := range statistics {
		for _, a := range s.Accept {
			if rank[a.Verdict] > rank[verdict] {
				verdict = a.Verdict
			}
		}
	}
	return verdict
}
