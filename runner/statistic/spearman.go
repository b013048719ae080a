package statistic

import "lotproof/spec"

var spearman = Definition{
	Name:    "Spearman correlation",
	Columns: 2,
	MinN:    2,
	Summary: "The product-moment correlation of the ranks of two columns; tied observations share the mean of " +
		"their ranks.",
	Formula:     "r_S = r( rank(x), rank(y) )",
	Where:       "r is the Pearson correlation, rank gives 1 to the smallest observation",
	Assumptions: "It measures a monotone relation and depends on the range that was sampled.",
	Sources: []string{"Spearman C. The proof and measurement of association between two things. American Journal of " +
		"Psychology 15 (1904) 72–101", "Kendall MG. Rank Correlation Methods. Griffin 1948, chapter 3 (ties)"},
	Unit:   noUnit,
	Bounds: correlationRange,
	New:    func([]spec.Setting) Estimator { return spearmanOf{} },
}

type spearmanOf struct{}

func (spearmanOf) Estimate(s *Sample) (float64, error) {
	n := s.N()
	if n < 2 {
		return 0, ErrTooFew
	}
	work := s.Scratch(2 * n)
	midRanks(s.Column(0), s.Sorted(0), work[:n])
	midRanks(s.Column(1), s.Sorted(1), work[n:])
	return correlation(work[:n], work[n:])
}

// midRanks sets out[i] to the rank of x[i] in sorted, which holds the same values in ascending order.
func midRanks(x, sorted, out []float64) {
	for i, v := range x {
		low, high := firstNotBelow(sorted, v), firstAbove(sorted, v)
		out[i] = float64(low+high+1) / 2
	}
}

func firstNotBelow(sorted []float64, v float64) int {
	low, high := 0, len(sorted)
	for low < high {
		if middle := (low + high) / 2; sorted[middle] < v {
			low = middle + 1
		} else {
			high = middle
		}
	}
	return low
}

func firstAbove(sorted []float64, v float64) int {
	low, high := 0, len(sorted)
	for low < high {
		if middle := (low + high) / 2; sorted[middle] <= v {
			low = middle + 1
		} else {
			high = middle
		}
	}
	return low
}
