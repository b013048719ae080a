package advisory

import (
	"fmt"
	"math"
	"slices"
	"strconv"

	"lotproof/runner/numeric"
	"lotproof/runner/record"
	"lotproof/spec"
)

var fewUnits = Definition{
	Code: "few units",
	Summary: "An interval from resampling with fewer than 10 outermost resampling units (caution) or fewer than 5 " +
		"(stop); " +
		"in a comparison the smaller group counts.",
	Action: "Let an exact or classical companion decide, or take more units.",
	Source: "With n units there are only C(2n−1, n) different resamples, 126 for n = 5 (arithmetic); thresholds of " +
		"this program",
	check: func(in *Input) *finding {
		n := in.units()
		if !in.resampled() || n >= 10 {
			return nil
		}
		f := &finding{severity: Caution, evidence: []record.Value{value("units", float64(n))},
			text: fmt.Sprintf("Only %s. An interval from resampling is not trustworthy at this size.",
				count(n, "resampling unit"))}
		if n < 5 {
			f.severity = Stop
		}
		return f
	},
}

var quantileOutOfReach = Definition{
	Code: "quantile out of reach",
	Summary: "The bound of a quantile lies further out than the data reach: the chance that the extreme " +
		"observation lies beyond " +
		"the quantile is smaller than the confidence (stop).",
	Action: "State the attained confidence, take more units, or ask for a less extreme quantile.",
	Source: "The chance is 1 − (1−p)ⁿ for a lower and 1 − pⁿ for an upper bound (arithmetic; Wilks SS, Annals of " +
		"Mathematical Statistics 12 (1941) 91–96)",
	Every: true,
	check: func(in *Input) *finding {
		if in.Plan.Compare != nil || !slices.Contains([]string{"quantile", "median"}, in.Plan.Name) {
			return nil
		}
		p := 0.5
		for _, s := range in.Plan.With {
			if s.Name == "p" {
				p = s.Number
			}
		}
		n := float64(in.Record.Design.Units)
		level := in.Plan.Confidence[0].Value
		if in.Plan.Bound == spec.TwoSided {
			level = 1 - float64((1-level)/2)
		}
		worst, side := 1.0, ""
		if in.Plan.Bound != spec.Upper {
			worst, side = 1-numeric.Exp(float64(n*numeric.Log1p(-p))), "lower"
		}
		if in.Plan.Bound != spec.Lower {
			if c := 1 - numeric.Exp(float64(n*numeric.Log(p))); c < worst {
				worst, side = c, "upper"
			}
		}
		if worst >= level-1e-12 {
			return nil
		}
		rate := numeric.Log1p(-p)
		if side == "upper" {
			rate = numeric.Log(p)
		}
		needed := math.Ceil(numeric.Log1p(-level)/rate - 1e-9)
		return &finding{severity: Stop, evidence: []record.Value{value("units", n), value("attainable confidence", worst),
			value("units needed", needed)},
			text: fmt.Sprintf("With %s no %s bound of this quantile reaches %s without assuming a "+
				"distribution. The most "+
				"that can be attained is %s; %.0f units are "+
				"needed.", count(int(n), "unit"), side, percent(level), percent(worst), needed)}
	},
}

// spreads are the statistics whose upper bound by plain resampling is far too low with few units.
var spreads = []string{"standard deviation", "variance", "coefficient of variation", "interquartile range",
	"median absolute deviation", "repeatability standard deviation"}

var spreadFromFewUnits = Definition{
	Code: "bound of a spread",
	Summary: "An interval from resampling of a measure of spread: a caution at every size, because it leans on the tails, and " +
		"a stop with fewer than 15 units by the percentile or basic method.",
	Action: "Read the classical companion where there is one and the data are normal; prefer the studentized method; " +
		"take more units rather than more readings a unit.",
	Source: "Simulation behind this program: nominal 95 % upper percentile bounds of the SD of normal data cover " +
		"66 % with 6 units, 75 % with 12, 89 % with 60",
	check: func(in *Input) *finding {
		if !in.resampled() || !slices.Contains(spreads, in.Plan.Name) {
			return nil
		}
		n := in.units()
		f := &finding{severity: Caution, evidence: []record.Value{value("units", float64(n))}}
		f.text = fmt.Sprintf("Resampling bounds of a spread are too low on the upper side, the more so the longer "+
			"the tails; there are %d units.", n)
		if n < 15 && in.decides("percentile", "basic") {
			f.severity = Stop
		} else if n >= 60 {
			f.text = "Resampling bounds of a spread depend on the tails of the distribution, which a sample hardly " +
				"shows; this caution stands at every size."
		}
		return f
	},
}

var narrowInterval = Definition{
	Code: "narrow interval",
	Summary: "The percentile interval of a mean is short by the factor √((n−1)/n)·z/t even for normal data: below " +
		"0.97 a note, " +
		"below 0.92 a caution.",
	Action: "Use the studentized method, or let the companion decide.",
	Source: "Hesterberg TC. What teachers should know about the bootstrap. The American Statistician 69 (2015) " +
		"371–386; the factor is arithmetic",
	check: func(in *Input) *finding {
		if !in.decides("percentile", "basic", "normal", "bca") || !slices.Contains([]string{"mean", "trimmed mean", "geometric mean"}, in.Plan.Name) {
			return nil
		}
		n := float64(in.units())
		if n < 2 {
			return nil
		}
		tail := 1 - in.Plan.Confidence[0].Value
		if in.Plan.Bound == spec.TwoSided {
			tail /= 2
		}
		factor := math.Sqrt((n-1)/n) * numeric.NormalQuantile(1-tail) / numeric.StudentQuantile(n-1, 1-tail)
		if factor >= 0.97 {
			return nil
		}
		f := &finding{severity: Note, evidence: []record.Value{value("units", n), value("factor", factor)},
			text: fmt.Sprintf("With %.0f units this kind of interval is about %.0f %% too short even for "+
				"well-behaved data.", n, 100*(1-factor))}
		if factor < 0.92 {
			f.severity = Caution
		}
		return f
	},
}

var skewedMean = Definition{
	Code: "skewed mean",
	Summary: "Mean of skewed data: fewer than 25·g₁² units is a caution, fewer than 5·g₁² a stop, with g₁ the " +
		"sample skewness. " +
		"Checked for independent rows.",
	Action: "Use the studentized method; a median or geometric mean only if the protocol allows it.",
	Source: "The rule 25·g₁² is Cochran's (Sampling Techniques, 3rd edition 1977, section 2.15; cited from " +
		"memory), the stop is this program's",
	check: func(in *Input) *finding {
		if in.Plan.Name != "mean" || in.Plan.Compare != nil || !in.Independent || !in.resampled() {
			return nil
		}
		x := in.Columns[0]
		n := float64(len(x))
		sum := 0.0
		for _, v := range x {
			sum += v
		}
		mean := sum / n
		var second, third float64
		for _, v := range x {
			d := v - mean
			square := float64(d * d)
			second += square
			third += float64(square * d)
		}
		if second == 0 {
			return nil
		}
		second, third = second/n, third/n
		g := third / float64(second*math.Sqrt(second))
		wanted := 25 * float64(g*g)
		if !(n < wanted) || math.IsInf(wanted, 0) { // also where the moments cannot be represented
			return nil
		}
		f := &finding{severity: Caution, evidence: []record.Value{value("skewness", g), value("units", n), value("units wanted", math.Ceil(wanted))},
			text: fmt.Sprintf("Skewness %.2f would want about %.0f units for a mean; there are "+
				"%.0f.", g, math.Ceil(wanted), n)}
		if n < wanted/5 {
			f.severity = Stop
		}
		return f
	},
}

var smallStratum = Definition{
	Code: "small stratum",
	Summary: "A stratum with a single unit adds no spread to the resamples (stop); one with m units makes them too " +
		"narrow by √((m−1)/m): fewer than 5 is a caution, fewer than 10 a note.",
	Action: "Join strata by a rule in the plan, or take more units in each.",
	Source: "Rao JNK, Wu CFJ. Resampling inference with complex survey data. Journal of the American Statistical " +
		"Association 83 (1988) 231–241; the factor is arithmetic",
	check: func(in *Input) *finding {
		if !in.resampled() || len(in.Record.Design.By) == 0 {
			return nil
		}
		least := in.Record.Design.Strata[0]
		for _, s := range in.Record.Design.Strata {
			if s.Units < least.Units {
				least = s
			}
		}
		m := float64(least.Units)
		evidence := []record.Value{value("units in the smallest stratum", m), value("factor", math.Sqrt((m-1)/m))}
		switch {
		case least.Units == 1:
			return &finding{severity: Stop, evidence: evidence,
				text: fmt.Sprintf("Stratum %s has one unit and contributes no uncertainty.", strconv.Quote(least.Name))}
		case least.Units < 10:
			severity := Note
			if least.Units < 5 {
				severity = Caution
			}
			return &finding{severity: severity, evidence: evidence,
				text: fmt.Sprintf("The smallest stratum, %s, has %d units; resampling within it understates its "+
					"spread by the factor %.2f.",
					strconv.Quote(least.Name), least.Units, math.Sqrt((m-1)/m))}
		}
		return nil
	},
}
