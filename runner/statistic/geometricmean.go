package statistic

import (
	"lotproof/runner/numeric"
	"lotproof/spec"
)

var geometricMean = Definition{
	Name:        "geometric mean",
	Columns:     1,
	MinN:        1,
	Summary:     "The exponential of the mean logarithm.",
	Formula:     "G = exp( (1/n)·Σ ln xᵢ )",
	Where:       "xᵢ are n observations",
	Assumptions: "All observations are above 0; otherwise there is no value.",
	Sources: []string{"ISO 3534-1:2006, Statistics — Vocabulary and symbols — Part 1 (mean, note on the geometric " +
		"mean)"},
	Unit:   sameUnit,
	Bounds: nonNegative,
	New:    func([]spec.Setting) Estimator { return geometricMeanOf{} },
}

type geometricMeanOf struct{}

func (geometricMeanOf) Estimate(s *Sample) (float64, error) {
	x := s.Column(0)
	if len(x) < 1 {
		return 0, ErrTooFew
	}
	logs := s.Scratch(len(x))
	for i, v := range x {
		if v <= 0 {
			return 0, ErrNotPositive
		}
		logs[i] = numeric.Log(v)
	}
	return number(numeric.Exp(average(logs)))
}

// Influence is G·(ln x − ln G).
func (geometricMeanOf) Influence(s *Sample, value float64, out []float64) error {
	centre := numeric.Log(value)
	for i, v := range s.Column(0) {
		out[i] = float64(value * (numeric.Log(v) - centre))
	}
	return nil
}
