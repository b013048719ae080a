package statistic

import "lotproof/spec"

var variance = Definition{
	Name:        "variance",
	Columns:     1,
	MinN:        2,
	Summary:     "The sample variance with divisor n − 1.",
	Formula:     "s² = Σ(xᵢ − x̄)² / (n − 1)",
	Where:       "xᵢ are n observations, x̄ is their mean",
	Assumptions: "The population has a fourth moment if the interval is to mean anything.",
	Sources:     []string{"ISO 3534-1:2006, Statistics — Vocabulary and symbols — Part 1, 1.16", chan1983},
	Unit:        squaredUnit,
	Bounds:      nonNegative,
	New:         func([]spec.Setting) Estimator { return varianceOf{} },
}

const chan1983 = "Chan TF, Golub GH, LeVeque RJ. Algorithms for computing the sample variance: analysis and " +
	"recommendations. The American Statistician 37 (1983) 242–247"

type varianceOf struct{}

func (varianceOf) Estimate(s *Sample) (float64, error) {
	if s.N() < 2 {
		return 0, ErrTooFew
	}
	squares, _ := centred(s.Column(0))
	return number(squares / float64(s.N()-1))
}

// Influence gives the values of the variance with divisor n, (x − x̄)² − m₂, times n/(n−1), so that they belong to the
// value with divisor n − 1.
func (varianceOf) Influence(s *Sample, value float64, out []float64) error {
	x := s.Column(0)
	m, n := average(x), float64(s.N())
	scale := n / (n - 1)
	for i, v := range x {
		d := v - m
		out[i] = float64(scale*float64(d*d)) - value
	}
	return nil
}

// centred returns the sum of squared deviations from the mean and the mean, by the corrected two-pass algorithm,
// equation (1.7) of Chan, Golub and LeVeque 1983.
func centred(x []float64) (squares, mean float64) {
	sum := 0.0
	for _, v := range x {
		sum += v
	}
	n := float64(len(x))
	mean = sum / n
	residue := 0.0
	for _, v := range x {
		d := v - mean
		squares += float64(d * d)
		residue += d
	}
	return max(0, squares-float64(residue*residue)/n), mean
}
