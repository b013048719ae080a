package interval

var percentile = Definition{
	Name:    "percentile",
	Compare: true,
	Summary: "The limits are resample values: the ones that cut off the wanted share of the B resample values at " +
		"either end. " +
		"The rank is ⌊(B+1)α⌋ counted from that end, so a limit is never nearer to the estimate than the share " +
		"asks for.",
	Formula: "lower = t*₍ₖ₎,  upper = t*₍B+1−k₎,  k = ⌊(B+1)α⌋",
	Where:   "t*₍ₖ₎ is the k-th smallest of B resample values, α the probability beyond each limit",
	Limits: "Too short with few units: with 10 units of normal data a nominal 95 % interval of a mean covers about " +
		"90 %. " +
		"For the upper limit of a spread it is shorter still. It does not correct bias.",
	Sources: []string{"Efron B, Tibshirani RJ. An Introduction to the Bootstrap. Chapman & Hall 1993, chapter 13"},
	limits: func(in *Input) Result {
		low, high, ok := in.Values.tails(in)
		if !ok {
			return refuse(tooFewResamples)
		}
		return found(low.value, high.value, low.err, high.err)
	},
}

// A point is a quantile of resample values with its Monte-Carlo standard error.
type point struct{ value, err float64 }

// tails returns the values that cut off the wanted probability at the lower and at the upper end.
func (v *Values) tails(in *Input) (low, high point, ok bool) {
	tail := in.tail()
	p, _ := tail.Float64()
	k, ok := v.lowerRank(tail)
	if !ok {
		return low, high, false
	}
	m, _ := v.upperRank(tail)
	return point{v.Rank(k), v.rankError(k, p)}, point{v.Rank(m), v.rankError(m, 1-p)}, true
}
