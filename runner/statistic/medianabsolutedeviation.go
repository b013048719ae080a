package statistic

import (
	"math"

	"lotproof/spec"
)

var medianAbsoluteDeviation = Definition{
	Name:    "median absolute deviation",
	Columns: 1,
	Parameters: []spec.Parameter{{Name: "scale", Kind: spec.KindNumber, Min: 0, Max: 100, Default: "1",
		Summary: "A factor; 1.4826 makes it comparable with the standard deviation of normal data."}},
	MinN:        1,
	Summary:     "The median distance of the observations from their median, times a factor.",
	Formula:     "MAD = c · med| xᵢ − med(x) |",
	Where:       "xᵢ are the observations, med is the median, c the factor (with: scale)",
	Assumptions: "None on the shape; the usual reading as a spread supposes symmetry.",
	Sources: []string{"Hampel FR. The influence curve and its role in robust estimation. Journal of the American " +
		"Statistical Association 69 (1974) 383–393"},
	Unit:   sameUnit,
	Bounds: nonNegative,
	New:    func(with []spec.Setting) Estimator { return madOf{with[0].Number} },
}

type madOf struct{ scale float64 }

// Estimate finds the median distance without sorting again: distances below and above the median grow outwards, so the
// two halves of the sorted sample are merged from the middle.
func (m madOf) Estimate(s *Sample) (float64, error) {
	n := s.N()
	if n < 1 {
		return 0, ErrTooFew
	}
	sorted := s.Sorted(0)
	middle := quantilePlace(7, n, ratio{num: 1, den: 2})
	centre := middle.at(sorted)
	up := 0
	for up < n && sorted[up] < centre {
		up++
	}
	down := up - 1
	var last, before float64
	for range n/2 + 1 {
		before = last
		switch {
		case down < 0:
			last = sorted[up] - centre
			up++
		case up >= n || centre-sorted[down] <= sorted[up]-centre:
			last = centre - sorted[down]
			down--
		default:
			last = sorted[up] - centre
			up++
		}
	}
	if n%2 == 0 {
		last = halfWay(before, last)
	}
	return number(float64(m.scale * math.Abs(last)))
}
