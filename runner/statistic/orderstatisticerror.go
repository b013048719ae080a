package statistic

import (
	"math"

	"lotproof/runner/numeric"
)

// An orderLaw is the law of the value at a place among n draws with replacement from n ordered values x₁ ≤ … ≤ xₙ, as
// far as its variance needs it. With A of rank k and B of rank k+1 among the draws, the value is T = (1−g)·A + g·B.
//
// A is at most xᵢ if at least k of the draws are, so P(A ≤ xᵢ) = I(k, n−k+1) at i/n, with the incomplete beta function;
// the weights of Maritz and Jarrett 1978 are its differences. For 0 < g < 1 the identity
//
//	(T−c)² = (1−g)·(A−c)² + g·(B−c)² − g·(1−g)·(B−A)²
//
// leaves E(B−A)² to be found. A < B = xⱼ means that k draws lie below xⱼ and the other n−k are at least xⱼ, not all
// above it:
//
//	P(A < B = xⱼ) = Binomial(k; n, (j−1)/n) · ( 1 − ((n−j)/(n−j+1))ⁿ⁻ᵏ )
//
// and, given that, A is the largest of k independent draws from x₁ … xⱼ₋₁. Its first two moments about xⱼ follow from
// those about xⱼ₋₁, in sums without a negative term.
//
// Maritz and Jarrett 1978; for linear combinations of order statistics Hutson AD, Ernst MD. The exact bootstrap mean
// and variance of an L-estimator. Journal of the Royal Statistical Society B 62 (2000) 89–94 (cited from memory; the
// recursion is our own).
type orderLaw struct {
	n     int
	at    place
	low   []float64 // P(A = xᵢ)
	high  []float64 // P(B = xᵢ); nil for g = 0, like those below
	gap   []float64 // P(A < B = xⱼ)
	carry []float64 // of the largest of k draws from x₁ … xⱼ: the probability that it is below xⱼ
}

func newOrderLaw(n int, at place) *orderLaw {
	law := &orderLaw{n: n, at: at, low: make([]float64, n)}
	below := 0.0
	for i := range law.low {
		upTo := reached(at.low, n, i+1)
		law.low[i] = max(0, upTo-below)
		below = upTo
	}
	if at.up == 0 {
		return law
	}
	law.high, law.gap, law.carry = make([]float64, n), make([]float64, n), make([]float64, n)
	below = 0
	for i := range n {
		upTo := reached(at.low+1, n, i+1)
		law.high[i] = max(0, upTo-below)
		// Exactly k of the draws are among the first i: at least k are, less at least k+1.
		exactly := max(0, reached(at.low, n, i)-below)
		law.gap[i] = float64(exactly * (1 - power(n-1-i, n-i, n-at.low)))
		law.carry[i] = power(i, i+1, at.low)
		below = upTo
	}
	return law
}

// reached returns the probability that at least k of n draws with replacement are among the first i of n values.
func reached(k, n, i int) float64 {
	switch i {
	case 0:
		return 0
	case n:
		return 1
	}
	return numeric.IncompleteBeta(float64(k), float64(n-k+1), float64(i)/float64(n))
}

// power returns (a/b)ᵏ for 0 ≤ a < b and k > 0.
func power(a, b, k int) float64 {
	if a == 0 {
		return 0
	}
	return numeric.Exp(float64(float64(k) * numeric.Log(float64(a)/float64(b))))
}

// standardDeviation returns that of the value at the place, for values in ascending order. Everything is measured from
// one of them, so that equal values give exactly 0.
func (law *orderLaw) standardDeviation(sorted []float64) float64 {
	origin := sorted[law.at.low-1]
	centre := moment(law.low, sorted, origin)
	if law.high == nil {
		return math.Sqrt(square(law.low, sorted, origin, centre))
	}
	g := law.at.up
	centre = float64((1-g)*centre) + float64(g*moment(law.high, sorted, origin))
	apart, first, second := 0.0, 0.0, 0.0 // first and second moment of xⱼ − A
	for j := 1; j < law.n; j++ {
		step := sorted[j] - sorted[j-1]
		second = float64(law.carry[j-1]*(second+float64(2*float64(step*first)))) + float64(step*step)
		first = float64(law.carry[j-1]*first) + step
		apart += float64(law.gap[j] * second)
	}
	variance := float64((1-g)*square(law.low, sorted, origin, centre)) +
		float64(g*square(law.high, sorted, origin, centre)) - float64(float64(g*(1-g))*apart)
	return math.Sqrt(max(0, variance))
}

func moment(weights, x []float64, origin float64) float64 {
	sum := 0.0
	for i, v := range x {
		sum += float64(weights[i] * (v - origin))
	}
	return sum
}

func square(weights, x []float64, origin, centre float64) float64 {
	sum := 0.0
	for i, v := range x {
		d := v - origin - centre
		sum += float64(weights[i] * float64(d*d))
	}
	return sum
}
