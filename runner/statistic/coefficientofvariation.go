package statistic

import "lotproof/spec"

var coefficientOfVariation = Definition{
	Name:        "coefficient of variation",
	Columns:     1,
	MinN:        2,
	Summary:     "The standard deviation (divisor n − 1) as a fraction of the mean.",
	Formula:     "CV = s / x̄",
	Where:       "s is the standard deviation and x̄ the mean of the observations",
	Assumptions: "The quantity has a true zero and the mean is above it; a mean of 0 or less gives no value.",
	Sources:     []string{"ISO 3534-1:2006, Statistics — Vocabulary and symbols — Part 1, 1.18"},
	Unit:        noUnit,
	Bounds:      nonNegative,
	New:         func([]spec.Setting) Estimator { return cvOf{} },
}

type cvOf struct{}

func (cvOf) Estimate(s *Sample) (float64, error) {
	sd, err := standardDeviationOf{}.Estimate(s)
	if err != nil {
		return 0, err
	}
	m := average(s.Column(0))
	if m <= 0 {
		return 0, ErrNotPositive
	}
	return number(sd / m)
}

// Influence follows by the chain rule: L(s)/x̄ − s·(x − x̄)/x̄².
func (cvOf) Influence(s *Sample, value float64, out []float64) error {
	x := s.Column(0)
	m := average(x)
	if err := (standardDeviationOf{}).Influence(s, float64(value*m), out); err != nil {
		return err
	}
	for i, v := range x {
		out[i] = (out[i] - float64(value*(v-m))) / m
	}
	return nil
}
