package statistic

import (
	"math"
	"sync"

	"lotproof/runner/numeric"
	"lotproof/spec"
)

const hyndmanFan = "Hyndman RJ, Fan Y. Sample quantiles in statistical packages. The American Statistician 50 (1996) 361–365"

var quantile = Definition{
	Name:    "quantile",
	Columns: 1,
	Parameters: []spec.Parameter{
		{Name: "p", Kind: spec.KindNumber, Min: 0, Max: 1, Summary: "The probability of the quantile: 0.1 for the 10th percentile."},
		{Name: "definition", Kind: spec.KindWhole, Min: 1, Max: 9, Default: "7",
			Summary: "Which of the nine definitions of Hyndman and Fan (1996); some regulations prescribe one."},
	},
	MinN:    1,
	Summary: "The value below which a share p of the observations lies, by a stated one of nine definitions.",
	Formula: "x(p) = x₍ⱼ₎ + g·(x₍ⱼ₊₁₎ − x₍ⱼ₎);  definition 7: j + g = (n−1)·p + 1;  definition 6: j + g = (n+1)·p",
	Where:   "x₍ⱼ₎ is the j-th smallest of n observations, j whole, 0 ≤ g < 1",
	Assumptions: "A quantile near 0 or 1 rests on few observations; no method reaches a bound beyond the extreme observation without " +
		"assuming a distribution.",
	Sources: []string{hyndmanFan, maritzJarrett},
	Unit:    sameUnit,
	New: func(with []spec.Setting) Estimator {
		return &quantileOf{p: newRatio(with[0].Text), definition: int(with[1].Number)}
	},
}

const maritzJarrett = "Maritz JS, Jarrett RG. A note on estimating the variance of the sample median. Journal of the American " +
	"Statistical Association 73 (1978) 194–196"

type quantileOf struct {
	p          ratio
	definition int
	weights    sync.Map // number of observations → []float64
}

func (q *quantileOf) Estimate(s *Sample) (float64, error) {
	if s.N() < 1 {
		return 0, ErrTooFew
	}
	return number(quantilePlace(q.definition, s.N(), q.p).at(s.Sorted(0)))
}

// StandardError is that of Maritz and Jarrett 1978: the standard deviation of the order statistic of rank k under
// sampling from the sample, from the weights I(i/n) − I((i−1)/n) with the incomplete beta function of k and n−k+1. It is
// the exact bootstrap standard error where the quantile is one order statistic; where it lies between two, k is the
// fractional rank.
func (q *quantileOf) StandardError(s *Sample, _ float64) (float64, error) {
	n := s.N()
	if n < 2 {
		return 0, ErrTooFew
	}
	w := q.weightsFor(n)
	sorted := s.Sorted(0)
	centre := 0.0
	for i, v := range sorted {
		centre += float64(w[i] * v)
	}
	squares := 0.0
	for i, v := range sorted {
		d := v - centre
		squares += float64(w[i] * float64(d*d))
	}
	return number(math.Sqrt(squares))
}

func (q *quantileOf) weightsFor(n int) []float64 {
	if w, ok := q.weights.Load(n); ok {
		return w.([]float64)
	}
	k := quantilePlace(q.definition, n, q.p).rank()
	w := make([]float64, n)
	below := 0.0
	for i := range w {
		up := 1.0
		if i+1 < n {
			up = numeric.IncompleteBeta(k, float64(n)-k+1, float64(i+1)/float64(n))
		}
		w[i] = up - below
		below = up
	}
	q.weights.Store(n, w)
	return w
}
