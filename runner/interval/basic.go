package interval

var basic = Definition{
	Name:    "basic",
	Compare: true,
	Summary: "The deviation of the resample values from the estimate is taken for the deviation of the estimate " +
		"from the true " +
		"value, so the percentile limits are reflected at the estimate.",
	Formula: "lower = 2t − t*₍B+1−k₎,  upper = 2t − t*₍ₖ₎,  k = ⌊(B+1)α⌋",
	Where:   "t is the estimate, t*₍ₖ₎ the k-th smallest of B resample values, α the probability beyond each limit",
	Limits: "For skewed data it is skewed to the wrong side; a limit can lie outside the possible values and is " +
		"then cut, " +
		"which the advisories say.",
	Sources: []string{"Davison AC, Hinkley DV. Bootstrap Methods and their Application. Cambridge University Press " +
		"1997, section 5.2"},
	limits: func(in *Input) Result {
		low, high, ok := in.Values.tails(in)
		if !ok {
			return refuse(tooFewResamples)
		}
		twice := 2 * in.Estimate
		return found(twice-high.value, twice-low.value, high.err, low.err)
	},
}
