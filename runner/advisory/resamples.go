package advisory

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"lotproof/runner/record"
)

var failedResamples = Definition{
	Code: "failed resamples",
	Summary: "Resamples on which the statistic has no value: any is a note, more than 1 % a caution, more than 5 % " +
		"a stop.",
	Action: "Draw within strata so that every resample has what the statistic needs, or choose another statistic.",
	Source: "Common practice, no single source",
	check: func(in *Input) *finding {
		f := shareOf(in.Record.FailedResamples, in.Record.Resamples)
		if f == nil {
			return nil
		}
		var reasons []string
		for _, r := range in.Record.Failures {
			reasons = append(reasons, fmt.Sprintf("%s: %d", r.Reason, r.Count))
		}
		f.text = fmt.Sprintf("%d of %d resamples gave no value (%s); they are counted, not "+
			"replaced.", in.Record.FailedResamples,
			in.Record.Resamples, strings.Join(reasons, ", "))
		return f
	},
}

var pivotsWithoutError = Definition{
	Code: "resamples without spread",
	Summary: "Resamples that have a value but no standard error, for the studentized method: any is a note, more " +
		"than 1 % a caution, more than 5 % a stop.",
	Action: "Use another interval in the plan, or take more units.",
	Source: "Common practice, no single source",
	check: func(in *Input) *finding {
		f := shareOf(in.PivotsFailed, in.Record.Resamples)
		if f != nil {
			if f.severity == Stop && !in.decides("studentized") {
				f.severity = Caution // another method carries the verdict
			}
			f.text = fmt.Sprintf("%d of %d resamples have no standard error above 0; the studentized limits rest "+
				"on the others.",
				in.PivotsFailed, in.Record.Resamples)
		}
		return f
	},
}

func shareOf(failed, all int) *finding {
	if failed == 0 {
		return nil
	}
	share := float64(failed) / float64(all)
	f := &finding{severity: Note, evidence: []record.Value{value("resamples", float64(failed)), value("share", share)}}
	if share > 0.05 {
		f.severity = Stop
	} else if share > 0.01 {
		f.severity = Caution
	}
	return f
}

var biased = Definition{
	Code: "biased estimate",
	Summary: "The mean of the resample values differs from the estimate by more than a quarter of their standard " +
		"deviation, beyond its Monte-Carlo error (caution).",
	Action: "Use the bca interval, or an estimator with less bias, in the plan; for readings within groups, draw " +
		"whole groups " +
		"and not the readings in them.",
	Source: "Efron B, Tibshirani RJ. An Introduction to the Bootstrap. Chapman & Hall 1993, section 10.3",
	check: func(in *Input) *finding {
		if !in.resampled() || in.Record.Bias == nil || in.Record.StandardError == nil || *in.Record.StandardError == 0 {
			return nil
		}
		ratio := *in.Record.Bias / *in.Record.StandardError
		noise := 2 / math.Sqrt(float64(max(1, len(in.Values)))) // two Monte-Carlo standard errors of the mean
		if math.Abs(ratio)-noise <= 0.25 {
			return nil
		}
		return &finding{severity: Caution, evidence: []record.Value{value("bias", *in.Record.Bias),
			value("bias in standard errors", ratio)},
			text: fmt.Sprintf("The resamples say that the statistic is biased at this size, by %.2f standard "+
				"errors.", ratio)}
	},
}

var tiedValues = Definition{
	Code: "coarse steps",
	Summary: "The resample values can take few values: the commonest has more than 25 % of them (caution) or more " +
		"than 10 % (note), or there are fewer than 50 different ones (note).",
	Action: "Read the limits as steps of the measurement; prefer the order statistic interval; state the " +
		"resolution of the instrument.",
	Source: "Thresholds of this program",
	check: func(in *Input) *finding {
		if !in.resampled() || len(in.Values) == 0 {
			return nil
		}
		// Values that differ by rounding alone count as one.
		last := len(in.Values) - 1
		near := 1e-10 * (in.Values[last] - in.Values[0])
		distinct, commonest, run := 0, 0, 0
		for i, v := range in.Values {
			if i == 0 || v-in.Values[i-1] > near {
				distinct++
				run = 0
			}
			run++
			commonest = max(commonest, run)
		}
		share := float64(commonest) / float64(len(in.Values))
		if share <= 0.10 && distinct >= 50 {
			return nil
		}
		f := &finding{severity: Note, evidence: []record.Value{value("share of the commonest "+
			"value", share), value("different values", float64(distinct))},
			text: fmt.Sprintf("The resamples give only %d different values, the commonest in %s of them, so limits "+
				"move in steps.", distinct, percent(share))}
		if distinct == 1 {
			f.text = "All resamples give the same value, so resampling shows no uncertainty here."
			f.severity = Stop
		} else if share > 0.25 {
			f.severity = Caution
		}
		return f
	},
}

var unstableCorrection = Definition{
	Code: "unstable correction",
	Summary: "The bca correction is large: |a| above 0.2, |z₀| above 0.5, or a corrected level within 5 of the B " +
		"resample values from the end (caution).",
	Action: "Draw more resamples; if the caution stays, plan another interval for the next study.",
	Source: "Efron B. Journal of the American Statistical Association 82 (1987) 171–185; Andrews DWK, Buchinsky " +
		"M. Econometric Reviews 21 (2002) 1–14; thresholds of this program",
	check: func(in *Input) *finding {
		for i := range in.Record.Intervals {
			one := &in.Record.Intervals[i]
			if one.Method != "bca" || one.Reason != "" {
				continue
			}
			edge := 5 / float64(max(1, len(in.Values)))
			var evidence []record.Value
			unstable := false
			for _, p := range one.Parameters {
				v := *p.Value
				evidence = append(evidence, p)
				switch p.Name {
				case "z0":
					unstable = unstable || math.Abs(v) > 0.5
				case "a":
					unstable = unstable || math.Abs(v) > 0.2
				default:
					unstable = unstable || v < edge || v > 1-edge
				}
			}
			if unstable {
				return &finding{severity: Caution, evidence: evidence,
					text: "The bca correction is large, so its limits rest on few extreme resample values or on a " +
						"strong extrapolation."}
			}
		}
		return nil
	},
}

var beyondRange = Definition{
	Code: "limit beyond the possible",
	Summary: "A limit lay outside the possible values of the statistic and was cut at their edge (caution; stop " +
		"for a correlation or a proportion).",
	Action: "Use the percentile, bca or an exact interval, which stay inside.",
	Source: "Arithmetic",
	check: func(in *Input) *finding {
		if len(in.Cut) == 0 {
			return nil
		}
		f := &finding{severity: Caution, text: fmt.Sprintf("The limit of the %s method lay outside the possible "+
			"values and was cut at their edge.",
			strings.Join(slices.Compact(slices.Clone(in.Cut)), ", "))}
		if slices.Contains([]string{"proportion", "Pearson correlation", "Spearman correlation"}, in.Plan.Name) && in.Plan.Compare == nil &&
			slices.Contains(in.Cut, in.Plan.Intervals[0]) {
			f.severity = Stop
		}
		return f
	},
}

var partlyPaired = Definition{
	Code: "partly paired",
	Summary: "Some resampling units have rows in both groups of a comparison and some in one only; all are drawn " +
		"jointly (caution).",
	Action: "See whether unit names are right; if units belong to both groups by design, take the incomplete ones " +
		"out by a rule with a reason.",
	Source: "Common practice, no single source",
	check: func(in *Input) *finding {
		if !in.Partly {
			return nil
		}
		c := in.Record.Compare
		both := c.Units[0] + c.Units[1] - in.Record.Design.Units
		return &finding{severity: Caution, evidence: []record.Value{value("units in both groups", float64(both)), value("units", float64(in.Record.Design.Units))},
			text: fmt.Sprintf("%d of %d units have rows in both groups; all units are drawn jointly, so the group "+
				"sizes vary between resamples.", both, in.Record.Design.Units)}
	},
}

var seedMargin = Definition{
	Code: "seed could decide",
	Summary: "The bound that carries a verdict lies within 3 Monte-Carlo standard errors of the criterion, so " +
		"another seed could reverse it (caution). Computed after the verdict.",
	Action: "Draw more resamples, as many as the evidence says, by an amendment of the plan.",
	Source: "Arithmetic; numerical tolerance in the sense of JCGM 101:2008, 7.9",
}

// Margin returns the advisory that depends on the verdicts, if it applies.
func Margin(s *record.Statistic) []record.Advisory {
	for _, a := range s.Accept {
		if a.Bound == nil {
			continue
		}
		limit, _ := parse(a.Limit)
		for i := range s.Intervals {
			one := &s.Intervals[i]
			if !one.Decides {
				continue
			}
			e := one.MonteCarloError.Lower
			if a.Criterion == "upper_at_most" {
				e = one.MonteCarloError.Upper
			}
			if e == nil {
				continue
			}
			distance := math.Abs(*a.Bound - limit)
			if distance <= 1e-12*math.Abs(limit) {
				distance = 0 // equal but for the rounding of binary arithmetic
			}
			if distance >= 3**e {
				continue
			}
			evidence := []record.Value{value("distance", distance), value("Monte-Carlo error", *e)}
			text := "The bound lies on the criterion within its Monte-Carlo error; another seed could reverse the " +
				"verdict."
			if distance > 0 {
				ratio := 3 * *e / distance
				needed := math.Ceil(float64(s.Resamples) * float64(ratio*ratio))
				evidence = append(evidence, value("resamples needed", needed))
				text = fmt.Sprintf("The bound lies %.1f Monte-Carlo errors from the criterion; another seed could "+
					"reverse the verdict. ", distance / *e)
				if needed > 10_000_000 {
					text += "No number of resamples up to ten million will do."
				} else {
					text += fmt.Sprintf("About %.0f resamples are needed.", needed)
				}
			}
			return []record.Advisory{seedMargin.advisory(&finding{severity: Caution, text: text, evidence: evidence})}
		}
	}
	return nil
}
