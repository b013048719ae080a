package interval

import (
	"math"
	"math/big"
	"slices"
)

// Values holds the values of a statistic on the resamples that gave one.
type Values struct {
	sorted []float64
	n      int

	mean, sd      float64
	third, fourth float64 // central moments, divisor n
}

// NewValues takes the values in the order of the resamples, so that sums do not depend on how they were computed.
// The slice is not modified.
func NewValues(values []float64) *Values {
	v := &Values{n: len(values), sorted: slices.Clone(values)}
	slices.Sort(v.sorted)
	if v.n < 2 {
		return v
	}
	n := float64(v.n)
	sum := 0.0
	for _, x := range values {
		sum += x
	}
	v.mean = sum / n
	var residue, second, third, fourth float64
	for _, x := range values {
		d := x - v.mean
		residue += d
		square := float64(d * d)
		second += square
		third += float64(square * d)
		fourth += float64(square * square)
	}
	second -= float64(residue*residue) / n
	v.sd = math.Sqrt(second / (n - 1))
	v.third, v.fourth = third/n, fourth/n
	return v
}

// N returns how many values there are.
func (v *Values) N() int { return v.n }

// Mean returns their mean; of fewer than two values it is 0.
func (v *Values) Mean() float64 { return v.mean }

// SD returns their standard deviation, divisor n − 1; of fewer than two values it is 0.
func (v *Values) SD() float64 { return v.sd }

// Sorted returns the values in ascending order; not to be modified.
func (v *Values) Sorted() []float64 { return v.sorted }

// Rank returns the value of a rank from 1 to N.
func (v *Values) Rank(k int) float64 { return v.sorted[k-1] }

// lowerRank returns ⌊(B+1)·p⌋ and upperRank its mirror image, exactly; ok is false if the rank is not among 1 … B.
func (v *Values) lowerRank(p *big.Rat) (k int, ok bool) {
	r := new(big.Rat).Mul(p, new(big.Rat).SetInt64(int64(v.n)+1))
	k = int(new(big.Int).Quo(r.Num(), r.Denom()).Int64())
	return k, k >= 1 && k <= v.n
}

func (v *Values) upperRank(tail *big.Rat) (k int, ok bool) {
	k, ok = v.lowerRank(tail)
	return v.n + 1 - k, ok
}

// rankError returns the Monte-Carlo standard error of the value at rank k as an estimate of the quantile p of the
// distribution that is sampled: √(p(1−p)/B) divided by the density, which is taken from the values two standard errors
// of rank to either side. On a lattice it is 0 only if the neighbouring values within that reach are equal.
func (v *Values) rankError(k int, p float64) float64 {
	return v.spread(k, p) * math.Sqrt(float64(p*(1-p))/float64(v.n))
}

// spread is an estimate of 1/density at rank k.
func (v *Values) spread(k int, p float64) float64 {
	reach := int(math.Ceil(2 * math.Sqrt(float64(float64(v.n)*p)*(1-p))))
	reach = max(reach, 1)
	low, high := max(1, k-reach), min(v.n, k+reach)
	if low == high {
		return 0
	}
	return (v.Rank(high) - v.Rank(low)) * (float64(v.n) / float64(high-low))
}

// below returns the share of values below t, those equal to t counting with the given weight. Values that differ from t
// by rounding alone count as equal: within 10⁻¹⁰ of the spread of the values and some units of the last place of t.
func (v *Values) below(t, weight float64) (share float64, equal int) {
	tolerance := float64(1e-10*v.sd) + float64(0x1p-49*math.Abs(t))
	first, _ := slices.BinarySearch(v.sorted, t-tolerance)
	after, _ := slices.BinarySearchFunc(v.sorted, t+tolerance, func(x, limit float64) int {
		if x <= limit {
			return -1
		}
		return 1
	})
	equal = after - first
	return (float64(first) + float64(weight*float64(equal))) / float64(v.n), equal
}

const tooFewResamples = "there are too few resample values for this confidence"
