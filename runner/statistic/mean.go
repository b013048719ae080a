package statistic

import "lotproof/spec"

var mean = Definition{
	Name:    "mean",
	Columns: 1,
	MinN:    1,
	Summary: "The arithmetic mean.",
	Formula: "x̄ = (1/n)·Σxᵢ",
	Where:   "xᵢ are n observations",
	Assumptions: "The population has a mean, and single large observations are not mistakes: the mean follows every " +
		"one of them.",
	Sources: []string{"ISO 3534-1:2006, Statistics — Vocabulary and symbols — Part 1, 1.15"},
	Unit:    sameUnit,
	New:     func([]spec.Setting) Estimator { return meanOf{} },
}

type meanOf struct{}

func (meanOf) Estimate(s *Sample) (float64, error) {
	if s.N() < 1 {
		return 0, ErrTooFew
	}
	return number(average(s.Column(0)))
}

func (meanOf) Influence(s *Sample, value float64, out []float64) error {
	for i, v := range s.Column(0) {
		out[i] = v - value
	}
	return nil
}

// average returns the mean of x: the sum over n, corrected by the mean of the residuals, which takes back most of the
// rounding of the first sum.
func average(x []float64) float64 {
	sum := 0.0
	for _, v := range x {
		sum += v
	}
	n := float64(len(x))
	m := sum / n
	residue := 0.0
	for _, v := range x {
		residue += v - m
	}
	return m + residue/n
}
