package statistic

import (
	"sync"
	"sync/atomic"

	"lotproof/spec"
)

const hyndmanFan = "Hyndman RJ, Fan Y. Sample quantiles in statistical packages. The American Statistician 50 (1996) " +
	"361–365"

var quantile = Definition{
	Name:    "quantile",
	Columns: 1,
	Parameters: []spec.Parameter{
		{Name: "p", Kind: spec.KindNumber, Min: 0, Max: 1,
			Summary: "The probability of the quantile: 0.1 for the 10th percentile."},
		{Name: "definition", Kind: spec.KindWhole, Min: 1, Max: 9, Default: "7",
			Summary: "Which of the nine definitions of Hyndman and Fan (1996); some regulations prescribe one."},
	},
	MinN:    1,
	Summary: "The value below which a share p of the observations lies, by a stated one of nine definitions.",
	Formula: "x(p) = x₍ⱼ₎ + g·(x₍ⱼ₊₁₎ − x₍ⱼ₎);  definition 7: j + g = (n−1)·p + 1;  definition 6: j + g = (n+1)·p",
	Where:   "x₍ⱼ₎ is the j-th smallest of n observations, j whole, 0 ≤ g < 1",
	Assumptions: "A quantile near 0 or 1 rests on few observations; no method reaches a bound beyond the extreme " +
		"observation without assuming a distribution.",
	Sources: []string{hyndmanFan, maritzJarrett},
	Unit:    sameUnit,
	New: func(with []spec.Setting) Estimator {
		return &quantileOf{p: newRatio(with[0].Text), definition: int(with[1].Number)}
	},
}

const maritzJarrett = "Maritz JS, Jarrett RG. A note on estimating the variance of the sample median. Journal of the " +
	"American Statistical Association 73 (1978) 194–196"

type quantileOf struct {
	p          ratio
	definition int
	laws       sync.Map // number of observations → *orderLaw
	last       atomic.Pointer[orderLaw]
}

func (q *quantileOf) Estimate(s *Sample) (float64, error) {
	if s.N() < 1 {
		return 0, ErrTooFew
	}
	return number(quantilePlace(q.definition, s.N(), q.p).at(s.Sorted(0)))
}

// StandardError is the standard deviation of the quantile under sampling from the sample, exactly: Maritz and Jarrett
// 1978 where the quantile is one order statistic, and the same for a point between two of them (see orderLaw).
func (q *quantileOf) StandardError(s *Sample, _ float64) (float64, error) {
	if s.N() < 2 {
		return 0, ErrTooFew
	}
	return number(q.law(s.N()).standardDeviation(s.Sorted(0)))
}

// law returns the law for n observations, kept from an earlier call. The one used last is found without an allocation.
func (q *quantileOf) law(n int) *orderLaw {
	if last := q.last.Load(); last != nil && last.n == n {
		return last
	}
	found, ok := q.laws.Load(n)
	if !ok {
		found, _ = q.laws.LoadOrStore(n, newOrderLaw(n, quantilePlace(q.definition, n, q.p)))
	}
	law := found.(*orderLaw)
	q.last.Store(law)
	return law
}
