package statistic

import "lotproof/spec"

var trimmedMean = Definition{
	Name:    "trimmed mean",
	Columns: 1,
	Parameters: []spec.Parameter{{Name: "trim", Kind: spec.KindNumber, Min: 0, Max: 0.5, MinIncluded: true,
		Summary: "The share taken off at each end: 0.1 leaves the middle 80 %."}},
	MinN:    1,
	Summary: "The mean of what is left when the smallest and the largest observations are taken off.",
	Formula: "x̄ₜ = ( x₍g₊₁₎ + … + x₍ₙ₋g₎ ) / (n − 2g),  g = ⌊n·trim⌋",
	Where:   "x₍ⱼ₎ is the j-th smallest of n observations",
	Assumptions: "What it estimates is the mean only if the distribution is symmetric; otherwise it is a location of " +
		"its own.",
	Sources: []string{"Tukey JW, McLaughlin DH. Less vulnerable confidence and significance procedures for location " +
		"based on a single sample. Sankhyā A 25 (1963) 331–352"},
	Unit: sameUnit,
	New:  func(with []spec.Setting) Estimator { return trimmedOf{newRatio(with[0].Text)} },
}

type trimmedOf struct{ trim ratio }

func (t trimmedOf) Estimate(s *Sample) (float64, error) {
	n := s.N()
	if n < 1 {
		return 0, ErrTooFew
	}
	g := t.trim.floorOf(n)
	return number(average(s.Sorted(0)[g : n-g]))
}

// Influence is that of the Winsorised values, (w − w̄)·n/(n−2g): Tukey and McLaughlin 1963.
func (t trimmedOf) Influence(s *Sample, _ float64, out []float64) error {
	n := s.N()
	g := t.trim.floorOf(n)
	sorted := s.Sorted(0)
	low, high := sorted[g], sorted[n-1-g]
	for i, v := range s.Column(0) {
		out[i] = min(max(v, low), high)
	}
	centre := average(out)
	scale := float64(n) / float64(n-2*g)
	for i := range out {
		out[i] = float64((out[i] - centre) * scale)
	}
	return nil
}
