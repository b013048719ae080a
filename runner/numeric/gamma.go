package numeric

import "math"

// Log1p returns log(1 + x) for x > −1, without the loss of the digits of a small x: the rounding of 1 + x is undone by
// the ratio x/((1+x)−1), a device of W. Kahan (cited from memory).
func Log1p(x float64) float64 {
	u := 1 + x
	switch u {
	case 1:
		return x
	case x: // too large for the 1 to matter
		return Log(x)
	}
	return float64(Log(u)*x) / (u - 1)
}

// stirling returns the error of Stirling's formula, log Γ(z) − (z−½)·log z + z − ½·log 2π, for z > 0: by the recurrence up
// to 15 and the asymptotic series from there. Abramowitz and Stegun, Handbook of Mathematical Functions, 6.1.40 to 6.1.42.
func stirling(z float64) float64 {
	sum := 0.0
	for z < 15 {
		sum += float64((z+0.5)*Log1p(1/z)) - 1
		z++
	}
	inverse := 1 / float64(z*z)
	series := horner(inverse, -691.0/360360, 1.0/1188, -1.0/1680, 1.0/1260, -1.0/360, 1.0/12)
	return sum + series/z
}

// deviance returns x·log(x/m) + m − x for x, m > 0, without cancellation where x is near m.
//
// Loader C, "Fast and Accurate Computation of Binomial Probabilities" (2000), the function bd0.
func deviance(x, m float64) float64 {
	if math.Abs(x-m) < float64(0.1*(x+m)) {
		v := (x - m) / (x + m)
		sum := float64((x - m) * v)
		term := float64(2 * x * v)
		square := float64(v * v)
		for j := 3.0; ; j += 2 {
			term *= square
			next := sum + term/j
			if next == sum {
				return sum
			}
			sum = next
		}
	}
	return float64(x*Log(x/m)) + m - x
}

// iterations bounds the continued fractions and series; the slowest need about √a of them.
const iterations = 1_000_000

// tiny keeps the divisors of a continued fraction away from 0.
const tiny = 1e-300

// IncompleteGamma returns the regularised incomplete gamma functions P(a, x) and Q(a, x) = 1 − P(a, x) for a > 0, x ≥ 0,
// each to a relative error of about 10⁻¹³ for a up to 10⁶. Other arguments give NaN.
//
// Series and continued fraction: Abramowitz and Stegun 6.5.29 and 6.5.31; the latter is evaluated by Lentz's method
// (Lentz WJ, Applied Optics 15 (1976) 668–671).
func IncompleteGamma(a, x float64) (lower, upper float64) {
	switch {
	case !(a > 0) || !(x >= 0) || math.IsInf(a, 1):
		return math.NaN(), math.NaN()
	case x == 0:
		return 0, 1
	case math.IsInf(x, 1):
		return 1, 0
	}
	const root = 0.398942280401432677939946059934381868 // 1/√(2π)
	factor := float64(root*math.Sqrt(a)) * Exp(-deviance(a, x)-stirling(a))
	if x < a+1 {
		term, sum := 1.0, 1.0
		for k := 1.0; k < iterations && term > float64(sum*1e-17); k++ {
			term = float64(term * (x / (a + k)))
			sum += term
		}
		lower = min(float64(factor*sum)/a, 1)
		return lower, 1 - lower
	}
	b := x + 1 - a
	c, d := 1/tiny, 1/b
	h := d
	for k := 1.0; k < iterations; k++ {
		an := -float64(k * (k - a))
		b += 2
		d = 1 / away(float64(an*d)+b)
		c = away(b + an/c)
		step := float64(d * c)
		h *= step
		if math.Abs(step-1) < 1e-16 {
			break
		}
	}
	upper = min(float64(factor*h), 1)
	return 1 - upper, upper
}

func away(v float64) float64 {
	if math.Abs(v) < tiny {
		return tiny
	}
	return v
}

// ChiSquareQuantile returns the quantile p of the chi-square distribution with df > 0 degrees of freedom, 0 < p < 1,
// to a relative error of about 10⁻¹³. Other arguments give NaN.
func ChiSquareQuantile(df, p float64) float64 {
	if !(df > 0) || !(p > 0 && p < 1) {
		return math.NaN()
	}
	return smallest(func(x float64) bool {
		lower, upper := IncompleteGamma(df/2, x/2)
		if p > 0.5 {
			return upper <= 1-p
		}
		return lower >= p
	})
}

// smallest returns the smallest positive floating-point number for which ok holds, where ok is false up to some number
// and true from there on. It halves the range of bit patterns, whose order is that of the numbers, so it ends after 63
// steps for any ok.
func smallest(ok func(float64) bool) float64 {
	low, high := uint64(0), math.Float64bits(math.MaxFloat64)
	for high-low > 1 {
		middle := low + (high-low)/2
		if ok(math.Float64frombits(middle)) {
			high = middle
		} else {
			low = middle
		}
	}
	return math.Float64frombits(high)
}
