package statistic

import "lotproof/spec"

var proportion = Definition{
	Name:    "proportion",
	Columns: 0,
	Parameters: []spec.Parameter{{Name: "condition", Kind: spec.KindCondition,
		Summary: "What a row must meet to be counted, such as failure_mode == \"peel\"."}},
	MinN:    1,
	Summary: "The share of rows that meet a condition.",
	Formula: "p = x / n",
	Where:   "x of n rows meet the condition",
	Assumptions: "A share of 0 or 1 has no spread under resampling; the exact binomial interval is then the one " +
		"to read.",
	Sources: []string{"ISO 11453:1996, Statistical interpretation of data — Tests and confidence intervals relating " +
		"to proportions"},
	Unit:   noUnit,
	Bounds: fraction,
	// The mean of the column that holds 1 where the condition is met, else 0.
	New: func([]spec.Setting) Estimator { return meanOf{} },
}
