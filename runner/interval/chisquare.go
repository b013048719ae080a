package interval

import (
	"math"

	"lotproof/runner/numeric"
)

var chiSquare = Definition{
	Name:       "chi-square",
	Statistics: []string{"standard deviation", "variance"},
	Classical:  true,
	Summary: "The classical interval of a variance or standard deviation: the sum of squares divided by quantiles " +
		"of the chi-square " +
		"distribution. Strata are not taken into account.",
	Formula: "s²(n−1)/χ²_(1−α)(n−1)  to  s²(n−1)/χ²_α(n−1); square roots for a standard deviation",
	Where: "s² is the variance of n observations, χ²_α(ν) the quantile α of the chi-square distribution, α the " +
		"probability beyond each limit",
	Limits: "Exact for independent normal observations only, and badly wrong for others at every n: long tails " +
		"make it too short, " +
		"short tails too long.",
	Sources: []string{"Box GEP. Non-normality and tests on variances. Biometrika 40 (1953) 318–335",
		"ISO 2854:1976, Statistical interpretation of data — Techniques of estimation and tests relating to means " +
			"and variances"},
	limits: func(in *Input) Result {
		if in.Sample == nil {
			return refuse(dependent)
		}
		n, _, variance := moments(in.Sample.Sorted)
		if n < 2 {
			return refuse("it needs two observations")
		}
		if variance == 0 {
			return refuse("the observations have no spread")
		}
		p, _ := in.tail().Float64()
		squares := float64(variance * (n - 1))
		low, high := numeric.ChiSquareQuantile(n-1, p), numeric.ChiSquareQuantile(n-1, 1-p)
		lower, upper := squares/high, squares/low
		// The estimate tells which of the two scales the statistic has.
		if math.Abs(in.Estimate-variance) > math.Abs(in.Estimate-math.Sqrt(variance)) {
			lower, upper = math.Sqrt(lower), math.Sqrt(upper)
		}
		r := exactly(lower, upper)
		r.Parameters = []Parameter{{"degrees of freedom", n - 1}, {"lower chi-square quantile", low}, {"upper chi-square quantile", high}}
		return r
	},
}
