package interval

import (
	"math"

	"lotproof/runner/numeric"
)

var normal = Definition{
	Name:    "normal",
	Compare: true,
	Summary: "The estimate, less its bias on the resamples, plus and minus the normal quantile times the standard " +
		"deviation of " +
		"the resample values.",
	Formula: "(t − b) ± z·s*,  b = t̄* − t",
	Where: "t is the estimate, t̄* and s* are mean and standard deviation of the resample values, z is the " +
		"normal quantile",
	Limits: "Assumes that the estimate is about normally distributed and takes no account of skewness; a limit can " +
		"lie " +
		"outside the possible values and is then cut, which the advisories say.",
	Sources: []string{"Davison AC, Hinkley DV. Bootstrap Methods and their Application. Cambridge University Press " +
		"1997, section 5.2"},
	limits: func(in *Input) Result {
		v := in.Values
		if v.N() < 2 {
			return refuse(tooFewResamples)
		}
		if v.SD() == 0 {
			return refuse("all resample values are equal")
		}
		p, _ := in.tail().Float64()
		z := -numeric.NormalQuantile(p)
		centre := in.Estimate - (v.Mean() - in.Estimate)
		reach := float64(z * v.SD())
		r := found(centre-reach, centre+reach, v.normalError(z), v.normalError(-z))
		r.Parameters = []Parameter{{"bias", v.Mean() - in.Estimate}, {"standard error", v.SD()}, {"z", z}}
		return r
	},
}

// normalError returns the Monte-Carlo standard error of mean + z·SD of the values: from the variances and the covariance
// of a mean and a standard deviation, Kendall and Stuart, The Advanced Theory of Statistics, volume 1, sections 10.8 to
// 10.10 (cited from memory).
func (v *Values) normalError(z float64) float64 {
	n := float64(v.n)
	variance := float64(v.sd * v.sd)
	ofMean := variance / n
	ofSD := (v.fourth - float64(variance*variance)) / (4 * n * variance)
	both := v.third / (2 * n * v.sd)
	return math.Sqrt(max(0, ofMean+float64(float64(z*z)*ofSD)+float64(2*z*both)))
}
