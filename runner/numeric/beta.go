package numeric

import "math"

// IncompleteBeta returns the regularised incomplete beta function I_x(a, b) for a, b > 0 and 0 ≤ x ≤ 1, to a relative
// error below 10⁻¹² for a + b up to 10⁶. Other arguments give NaN.
//
// Continued fraction: Abramowitz and Stegun 26.5.8, evaluated by Lentz's method; the factor before it by the deviance
// form of Loader 2000.
func IncompleteBeta(a, b, x float64) float64 {
	return incompleteBeta(a, b, x, 1-float64(x)) // converted: inlined, x may be a product that would fuse with the 1
}

// incompleteBeta takes x and y = 1 − x apart, so that neither loses digits near 0.
func incompleteBeta(a, b, x, y float64) float64 {
	switch {
	case !(a > 0) || !(b > 0) || !(x >= 0 && y >= 0) || math.IsInf(a, 1) || math.IsInf(b, 1):
		return math.NaN()
	case x == 0:
		return 0
	case y == 0:
		return 1
	}
	n := a + b
	const root = 0.398942280401432677939946059934381868 // 1/√(2π)
	factor := float64(root*math.Sqrt(float64(a/n*b))) *
		Exp(stirling(n)-stirling(a)-stirling(b)-deviance(a, float64(n*x))-deviance(b, float64(n*y)))
	fraction := betaFraction
	if n > 20_000 {
		fraction = betaFractionEven
	}
	if x < (a+1)/(n+2) {
		return min(float64(factor*fraction(a, b, x, y))/a, 1)
	}
	return max(0, 1-float64(factor*fraction(b, a, y, x))/b)
}

func betaFraction(a, b, x, _ float64) float64 {
	c, d := 1.0, 1/away(1-float64((a+b)*x)/(a+1))
	h := d
	for m := 1.0; m < iterations; m++ {
		even := float64(m*(b-m)) / float64((a+2*m-1)*(a+2*m)) * x
		d = 1 / away(1+float64(even*d))
		c = away(1 + even/c)
		h *= float64(d * c)
		odd := -float64((a+m)*(a+b+m)) / float64((a+2*m)*(a+2*m+1)) * x
		d = 1 / away(1+float64(odd*d))
		c = away(1 + odd/c)
		step := float64(d * c)
		h *= step
		if math.Abs(step-1) < 1e-16 {
			break
		}
	}
	return h
}

// betaFractionEven is every second convergent of betaFraction. Its first divisor holds the difference a·y − b·x, where
// betaFraction has 1 − (a+b)·x/(a+1), which loses as many digits as a + b has; below 20,000 betaFraction is good enough,
// and old records depend on its bits.
//
// DiDonato AR, Morris AH, "Algorithm 708: Significant Digit Computation of the Incomplete Beta Function Ratios", ACM
// Transactions on Mathematical Software 18 (1992) 360–373 (cited from memory).
func betaFractionEven(a, b, x, y float64) float64 {
	excess := float64(a*y) - float64(b*x) + 1
	first := away(float64(a/(a+1)) * excess)
	h, c, d := first, first, 0.0
	for m := 1.0; m < iterations; m++ {
		before := a + 2*m - 1
		common := float64(m * float64((b-m)*x) / before)
		top := float64(float64(float64((a+m-1)*(a+b+m-1))*x) / before * common)
		bottom := m + common + float64((a+m)/(a+2*m+1)*(excess+float64(m*(1+y))))
		d = 1 / away(bottom+float64(top*d))
		c = away(bottom + top/c)
		step := float64(c * d)
		h *= step
		if math.Abs(step-1) < 1e-16 {
			break
		}
	}
	return a / h
}

// BetaQuantile returns the quantile p of the beta distribution with parameters a, b > 0, 0 < p < 1, to a relative error
// of about 10⁻¹³ for a + b up to 10⁶. Other arguments give NaN.
func BetaQuantile(a, b, p float64) float64 {
	if !(a > 0) || !(b > 0) || !(p > 0 && p < 1) {
		return math.NaN()
	}
	// Of x and 1 − x the smaller one is sought, since it has the finer grid.
	if IncompleteBeta(a, b, 0.5) >= p {
		return betaRoot(a, b, p, 1-p)
	}
	return 1 - betaRoot(b, a, 1-p, p)
}

// betaRoot returns the smallest x ≤ ½ with I_x(a, b) ≥ p, where q = 1 − p. A small q is compared by itself, since I_x
// has lost its digits there.
func betaRoot(a, b, p, q float64) float64 {
	return smallest(func(x float64) bool {
		switch {
		case x >= 0.5:
			return true
		case q < 0.001:
			return incompleteBeta(b, a, 1-x, x) <= q
		}
		return incompleteBeta(a, b, x, 1-x) >= p
	})
}

// StudentQuantile returns the quantile p of Student's distribution with df > 0 degrees of freedom, which need not be
// whole, 0 < p < 1, to a relative error of about 10⁻¹³. It does not go beyond ±10¹⁵⁰. Other arguments give NaN.
func StudentQuantile(df, p float64) float64 {
	if !(df > 0) || !(p > 0 && p < 1) || math.IsInf(df, 1) {
		return math.NaN()
	}
	if p == 0.5 {
		return 0
	}
	tail, middle := min(p, 1-p), math.Abs(p-0.5)
	t := smallest(func(t float64) bool {
		if t > 1e150 {
			return true
		}
		square := float64(t * t)
		x, y := df/(df+square), square/(df+square)
		if middle < 0.02 { // the tail has lost the digits of the difference from ½
			return incompleteBeta(0.5, df/2, y, x)/2 >= middle
		}
		return incompleteBeta(df/2, 0.5, x, y)/2 <= tail
	})
	if p < 0.5 {
		return -t
	}
	return t
}
