package statistic

import "lotproof/spec"

var intercept = Definition{
	Name:        "intercept",
	Columns:     2,
	MinN:        2,
	Summary:     "The value of the least-squares line of the second column on the first where the first is 0.",
	Formula:     "a = ȳ − b·x̄",
	Where:       "b is the least-squares slope, x̄ and ȳ are the means of the first and the second column",
	Assumptions: "As for the slope; if 0 lies far outside the observed range, the intercept is an extrapolation.",
	Sources:     []string{draper},
	Unit:        func(units []string) string { return units[1] },
	New:         func([]spec.Setting) Estimator { return lineOf{intercept: true} },
}
