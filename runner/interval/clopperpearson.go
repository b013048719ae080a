package interval

import (
	"math"

	"lotproof/runner/numeric"
)

var clopperPearson = Definition{
	Name:       "Clopper-Pearson",
	Statistics: []string{"proportion"},
	Classical:  true,
	Summary: "The exact binomial interval of a proportion: the limits are the proportions at which the observed " +
		"count, or one " +
		"further out, has just the allowed probability. Strata are not taken into account.",
	Formula: "lower = B⁻¹(α; x, n−x+1),  upper = B⁻¹(1−α; x+1, n−x)",
	Where: "x of n observations meet the condition, B⁻¹ is the quantile of the beta distribution, α the " +
		"probability beyond each limit",
	Limits: "For independent observations; its coverage is at least the confidence and often more.",
	Sources: []string{"Clopper CJ, Pearson ES. The use of confidence or fiducial limits illustrated in the case of " +
		"the binomial. Biometrika 26 (1934) 404–413"},
	limits: func(in *Input) Result {
		if in.Sample == nil {
			return refuse(dependent)
		}
		n, x := float64(len(in.Sample.Sorted)), 0.0
		for _, v := range in.Sample.Sorted {
			x += v
		}
		p, _ := in.tail().Float64()
		lower, upper := 0.0, 1.0
		if x > 0 {
			lower = numeric.BetaQuantile(x, n-x+1, p)
		}
		if x < n {
			upper = numeric.BetaQuantile(x+1, n-x, 1-p)
		}
		r := exactly(lower, upper)
		r.Parameters = []Parameter{{"count", x}, {"observations", n}}
		if math.IsNaN(lower) || math.IsNaN(upper) {
			return refuse("the beta quantile could not be computed")
		}
		return r
	},
}
