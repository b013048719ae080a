package interval

import (
	"fmt"
	"math"
	"math/big"
	"sort"

	"lotproof/runner/numeric"
)

var orderStatistic = Definition{
	Name:       "order statistic",
	Statistics: []string{"median", "quantile"},
	Classical:  true,
	Summary: "The limits are observations: the ranks that reach at least the wanted confidence whatever the " +
		"continuous distribution. " +
		"The confidence really attained is stated. Ranks are found in exact integers.",
	Formula: "lower = x₍ₗ₎ with the largest l for which P(X ≤ l−1) ≤ α;  upper = x₍ᵤ₎ with the smallest u for " +
		"which P(X ≥ u) ≤ α;  X binomial(n, p)",
	Where: "x₍ₖ₎ is the k-th smallest of n observations, p the probability of the quantile, α the probability " +
		"beyond each limit",
	Limits: "For independent observations. With strata the draw is not binomial but less variable, so the interval " +
		"is on the safe side " +
		"for the mixture. Ties raise the confidence. With few observations there may be no such rank.",
	Sources: []string{"Thompson WR. On confidence ranges for the median and other expectation distributions for " +
		"populations of unknown " +
		"distribution form. Annals of Mathematical Statistics 7 (1936) 122–128",
		"ISO 16269-7:2001, Statistical interpretation of data — Part 7: Median — Estimation and confidence intervals"},
	limits: func(in *Input) Result {
		if in.Sample == nil {
			return refuse(dependent)
		}
		x := in.Sample.Sorted
		n := len(x)
		tail := in.tail()
		low, lowTail := lowerPlace(n, in.Sample.P, tail)
		// The upper rank of p is the mirror image of the lower rank of 1 − p.
		mirror, highTail := lowerPlace(n, new(big.Rat).Sub(big.NewRat(1, 1), in.Sample.P), tail)
		high := n + 1 - mirror
		level, _ := new(big.Rat).Sub(big.NewRat(1, 1), tail).Float64()
		missing := func(extreme, side string, tail float64) Result {
			return refuse(fmt.Sprintf("with %d observations even the %s lies %s the quantile with probability %.4f "+
				"only; %.4f is needed",
				n, extreme, side, 1-tail, level))
		}
		if in.lower() && low < 1 {
			return missing("smallest", "below", lowTail)
		}
		if in.upper() && mirror < 1 {
			return missing("largest", "above", highTail)
		}
		r := exactly(math.NaN(), math.NaN())
		r.Attained = 1
		if in.lower() {
			r.Lower = x[low-1]
			r.Attained -= lowTail
			r.Parameters = append(r.Parameters, Parameter{"lower rank", float64(low)})
		}
		if in.upper() {
			r.Upper = x[high-1]
			r.Attained -= highTail
			r.Parameters = append(r.Parameters, Parameter{"upper rank", float64(high)})
		}
		return r
	},
}

// lowerPlace returns the largest l ≥ 0 with P(X ≤ l−1) ≤ tail for X binomial(n, p), and that probability; for l = 0,
// where no observation will do, it returns the probability P(X ≤ 0) that stands in the way. With p = a/b everything is
// decided in integers: C(n, j) aʲ (b−a)ⁿ⁻ʲ against tail·bⁿ.
//
// Above exactRows observations the integers grow too long; then the incomplete beta function, good to 12 digits, decides.
func lowerPlace(n int, p, tail *big.Rat) (l int, below float64) {
	if n > exactRows {
		return lowerPlaceByBeta(n, p, tail)
	}
	a, b := p.Num(), p.Denom()
	rest := new(big.Int).Sub(b, a)
	whole := new(big.Int).Exp(b, big.NewInt(int64(n)), nil)
	term := new(big.Int).Exp(rest, big.NewInt(int64(n)), nil) // j = 0
	allowed := new(big.Int).Mul(tail.Num(), whole)
	share := func(sum *big.Int) float64 {
		f, _ := new(big.Rat).SetFrac(sum, whole).Float64()
		return f
	}
	within := func(sum *big.Int) bool { return new(big.Int).Mul(sum, tail.Denom()).Cmp(allowed) <= 0 }
	sum := new(big.Int).Set(term)
	if !within(sum) {
		return 0, share(sum)
	}
	last := new(big.Int)
	for j := 0; ; {
		last.Set(sum)
		j++
		term.Mul(term, big.NewInt(int64(n-j+1)))
		term.Mul(term, a)
		term.Quo(term, big.NewInt(int64(j)))
		term.Quo(term, rest)
		sum.Add(sum, term)
		if j >= n || !within(sum) {
			return j, share(last)
		}
	}
}

// exactRows is the largest number of observations for which ranks are found in integers; it takes some tenths of a second.
const exactRows = 5000

func lowerPlaceByBeta(n int, p, tail *big.Rat) (l int, below float64) {
	rest, _ := new(big.Rat).Sub(big.NewRat(1, 1), p).Float64()
	allowed, _ := tail.Float64()
	// P(X ≤ l−1) = I(n−l+1, l) at 1 − p.
	upTo := func(l int) float64 { return numeric.IncompleteBeta(float64(n-l+1), float64(l), rest) }
	l = sort.Search(n, func(i int) bool { return upTo(i+1) > allowed }) // the first l+1 that is too much
	if l == 0 {
		return 0, upTo(1)
	}
	return l, upTo(l)
}
