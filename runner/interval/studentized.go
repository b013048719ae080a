package interval

import "math"

var studentized = Definition{
	Name:    "studentized",
	Compare: true,
	Pivots:  true,
	Summary: "On every resample the deviation from the estimate is divided by a standard error computed from that " +
		"resample; the " +
		"quantiles of these ratios take the place of the t table. The standard error comes from the empirical " +
		"influence " +
		"values summed over resampling units, or, for statistics without them, from the jackknife over resampling " +
		"units.",
	Formula: "lower = t − s·q₍B+1−k₎,  upper = t − s·q₍ₖ₎,  q = (t* − t)/s*,  k = ⌊(B+1)α⌋",
	Where: "t is the estimate and s its standard error, t* and s* the same on a resample, q₍ₖ₎ the k-th smallest " +
		"of the ratios, " +
		"α the probability beyond each limit",
	Limits: "Can be very long when some resamples have almost no spread, as with fewer than about 8 units, many " +
		"ties or " +
		"outliers. Resamples without a standard error are counted and reported.",
	Sources: []string{"Efron B, Tibshirani RJ. An Introduction to the Bootstrap. Chapman & Hall 1993, section 12.5",
		"Davison AC, Hinkley DV. Bootstrap Methods and their Application. Cambridge University Press 1997, section " +
			"5.2"},
	limits: func(in *Input) Result {
		if math.IsNaN(in.OwnError) {
			return refuse("the sample gives no standard error for this statistic")
		}
		if in.OwnError == 0 {
			return refuse("the standard error of the estimate is 0")
		}
		low, high, ok := in.Pivots.tails(in)
		if !ok {
			return refuse(tooFewResamples)
		}
		s := in.OwnError
		r := found(in.Estimate-float64(s*high.value), in.Estimate-float64(s*low.value), float64(s*high.err), float64(s*low.err))
		r.Parameters = []Parameter{{"standard error of the estimate", s}, {"lower quantile of the ratios", low.value},
			{"upper quantile of the ratios", high.value}, {"ratios", float64(in.Pivots.N())}}
		return r
	},
}
