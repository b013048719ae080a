package interval

import (
	"math"

	"lotproof/runner/numeric"
)

var bca = Definition{
	Name:     "bca",
	Compare:  true,
	Skewness: true,
	Summary: "Bias-corrected and accelerated: percentile limits at levels shifted by the share of resample values " +
		"below the " +
		"estimate (ties count half) and by the skewness of the estimate, taken from the jackknife over resampling " +
		"units.",
	Formula: "level = Φ( z₀ + (z₀ + z)/(1 − a(z₀ + z)) ),  z₀ = Φ⁻¹( #{t* < t}/B + ½#{t* = t}/B ),  a = Σdᵢ³ / ( 6 " +
		"(Σdᵢ²)^(3/2) )",
	Where: "z is the normal quantile of the wanted level, Φ the normal distribution function, t the estimate, t* " +
		"the B resample " +
		"values, dᵢ = t̄₍·₎ − t₍ᵢ₎ with t₍ᵢ₎ the estimate without unit i; with strata of m units, d is multiplied " +
		"by (m−1)/m " +
		"and centred within each",
	Limits: "Not better than the percentile method below about 20 units. Undefined when all resample values lie on " +
		"one side of " +
		"the estimate. Quantile-like statistics have a crude acceleration.",
	Sources: []string{"Efron B. Better bootstrap confidence intervals. Journal of the American Statistical " +
		"Association 82 (1987) 171–185",
		"Davison AC, Hinkley DV. Bootstrap Methods and their Application. Cambridge University Press 1997, section " +
			"5.3.2"},
	limits: func(in *Input) Result { return bcaLimits(in, 0.5) },
}

// bcaLimits has the weight of ties as a parameter, since references differ in it.
func bcaLimits(in *Input, tieWeight float64) Result {
	v := in.Values
	if v.N() < 2 {
		return refuse(tooFewResamples)
	}
	a := in.Acceleration
	if math.IsNaN(a) {
		return refuse("the acceleration is not defined: leaving out a unit never changes the estimate, or gives no " +
			"estimate")
	}
	share, _ := v.below(in.Estimate, tieWeight)
	if share <= 0 || share >= 1 {
		return refuse("all resample values lie on one side of the estimate, so the bias correction is not defined")
	}
	z0 := numeric.NormalQuantile(share)
	p, _ := in.tail().Float64()
	z := -numeric.NormalQuantile(p)
	r := found(math.NaN(), math.NaN(), math.NaN(), math.NaN())
	r.Parameters = []Parameter{{"z0", z0}, {"a", a}}
	side := func(z float64, name string, rank func(float64) int) (point, string) {
		w := z0 + z
		divisor := 1 - float64(a*w)
		if divisor <= 0 {
			return point{}, "the correction is not defined at this level: 1 − a(z₀ + z) is not positive"
		}
		at := z0 + w/divisor
		level := numeric.NormalCDF(at)
		k := rank(float64(level * float64(v.n+1)))
		if k < 1 || k > v.n {
			return point{}, "the corrected level lies beyond the resample values; more resamples are needed"
		}
		r.Parameters = append(r.Parameters, Parameter{name, level})
		// The limit moves with the rank and, through z₀, with the share below the estimate; both are shares of the same
		// values, so their covariance enters.
		c := float64(numeric.NormalDensity(at)*(1+1/float64(divisor*divisor))) / numeric.NormalDensity(z0)
		variance := float64(level*(1-level)) + float64(float64(c*c)*float64(share*(1-share))) -
			float64(2*c*(min(level, share)-float64(level*share)))
		return point{v.Rank(k), v.spread(k, level) * math.Sqrt(max(0, variance)/float64(v.n))}, ""
	}
	if in.lower() {
		low, reason := side(-z, "lower level", func(x float64) int { return int(math.Floor(x)) })
		if reason != "" {
			return refuse(reason)
		}
		r.Lower, r.LowerError = low.value, low.err
	}
	if in.upper() {
		high, reason := side(z, "upper level", func(x float64) int { return int(math.Ceil(x)) })
		if reason != "" {
			return refuse(reason)
		}
		r.Upper, r.UpperError = high.value, high.err
	}
	return r
}
