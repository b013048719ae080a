package statistic

import (
	"math"

	"lotproof/spec"
)

var standardDeviation = Definition{
	Name:    "standard deviation",
	Columns: 1,
	MinN:    2,
	Summary: "The sample standard deviation with divisor n − 1.",
	Formula: "s = √( Σ(xᵢ − x̄)² / (n − 1) )",
	Where:   "xᵢ are n observations, x̄ is their mean",
	Assumptions: "The population has a fourth moment if the interval is to mean anything. The estimate is a little " +
		"low on average with few observations.",
	Sources: []string{"ISO 3534-1:2006, Statistics — Vocabulary and symbols — Part 1, 1.17", chan1983},
	Unit:    sameUnit,
	Bounds:  nonNegative,
	New:     func([]spec.Setting) Estimator { return standardDeviationOf{} },
}

type standardDeviationOf struct{}

func (standardDeviationOf) Estimate(s *Sample) (float64, error) {
	v, err := varianceOf{}.Estimate(s)
	return math.Sqrt(v), err
}

// Influence is that of the variance divided by 2s.
func (standardDeviationOf) Influence(s *Sample, value float64, out []float64) error {
	if value == 0 {
		return ErrNoSpread
	}
	if err := (varianceOf{}).Influence(s, float64(value*value), out); err != nil {
		return err
	}
	for i := range out {
		out[i] /= 2 * value
	}
	return nil
}
