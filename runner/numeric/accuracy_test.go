package numeric

import (
	"math"
	"math/big"
	"testing"
)

// The values of this file were computed with the Python library mpmath 1.3.0 at 50 or 60 digits, for the binary numbers
// that the arguments become: erfc, npdf and gammainc as they are, quantiles of t and beta by Newton's method on the
// continued fraction Abramowitz and Stegun 26.5.8, summed until it stood in 45 digits.
//
// The tolerances are what the documentation promises: 5 units of 2⁻⁵² for the normal distribution, 10⁻¹³ relative for
// quantiles and incomplete gamma functions, 10⁻¹² for the incomplete beta function.

func TestNormalAgainstLongArithmetic(t *testing.T) {
	const units = 5 * 0x1p-52
	for _, tt := range []struct{ x, below, density float64 }{
		{-37, 5.7255712225245768227e-300, 2.1200065515246056269e-298},
		{-20.5, 1.0764673258790960335e-93, 2.2119843802105702634e-92},
		{-8, 6.2209605742717841235e-16, 5.052271083536892288e-15},
		{-3, 0.0013498980316300945267, 0.0044318484119380071756},
		{-0.7, 0.24196365222307302862, 0.31225393336676126681},
		{-0.6, 0.27425311775007358769, 0.33322460289179964009},
		{0.3, 0.61791142218895263307, 0.38138781546052408688},
	} {
		near(t, "NormalCDF", NormalCDF(tt.x), tt.below, units)
		near(t, "NormalDensity", NormalDensity(tt.x), tt.density, units)
	}
	for _, tt := range []struct{ p, x float64 }{
		{1e-300, -37.047096299361199237}, {1e-100, -21.273453560965324294}, {1e-16, -8.2220822161304356152},
		{0.01, -2.3263478740408410931}, {0.3, -0.52440051270804081597}, {0.9, 1.2815515655446005935},
	} {
		near(t, "NormalQuantile", NormalQuantile(tt.p), tt.x, units)
	}
}

func TestGammaAgainstLongArithmetic(t *testing.T) {
	for _, tt := range []struct{ a, x, lower, upper float64 }{
		{0.5, 0.1, 0.34527915398142297956, 0.65472084601857702044},
		{0.5, 30, 0.99999999999999051426, 9.4857375710738483885e-15},
		{29, 10, 7.6446664081382756559e-7, 0.99999923553335918617},
		{1234.5, 1100, 0.000036383184346785253122, 0.99996361681565321475},
		{1e6, 1003000, 0.99863825935378240852, 0.0013617406462175914794},
	} {
		lower, upper := IncompleteGamma(tt.a, tt.x)
		near(t, "P(a, x)", lower, tt.lower, 1e-13)
		near(t, "Q(a, x)", upper, tt.upper, 1e-13)
	}
}

func TestQuantilesAgainstLongArithmetic(t *testing.T) {
	for _, tt := range []struct{ df, p, want float64 }{
		{1, 1e-10, -3183098861.8379065993},
		{3.7, 0.975, 2.8675207071911884734},
		{9.6, 0.995, 3.1990909870281835995},
		{1234.5, 0.500001, 2.5071359461977551306e-6},
		{1e5, 0.95, 1.6448688647849693034},
		{1e6, 0.975, 1.9599663568141066553},
		{1e6, 1e-10, -6.3614068488767426196},
		{1e8, 0.025, -1.959964008262766797},
	} {
		near(t, "StudentQuantile", StudentQuantile(tt.df, tt.p), tt.want, 1e-13)
	}
	for _, tt := range []struct{ df, p, want float64 }{
		{1, 1e-10, 1.5707963267948967337e-20},
		{3.7, 0.975, 10.618055248352459406},
		{29, 0.025, 16.047071695364885611},
		{1e5, 0.95, 100736.73617731899935},
		{1e6, 1e-10, 991029.99977428352289},
	} {
		near(t, "ChiSquareQuantile", ChiSquareQuantile(tt.df, tt.p), tt.want, 1e-13)
	}
	for _, tt := range []struct{ a, b, p, want float64 }{
		{0.5, 1e5, 0.975, 0.000025119178243257736993},
		{0.5, 1e5, 1 - 1e-10, 0.00020908594226169146259},
		{1, 1e5, 1 - 1e-10, 0.00023023200101620046763},
		{0.5, 0.5, 1e-10, 2.4674011002723398345e-20},
		{3.7, 7.5, 0.025, 0.10164363269429790221},
		{41, 73, 0.025, 0.27445985987684832692},
		{1e6, 300, 0.95, 0.99972798763431882975},
		{1e5, 1e5, 0.001, 0.49654505217147467486},
	} {
		near(t, "BetaQuantile", BetaQuantile(tt.a, tt.b, tt.p), tt.want, 1e-13)
	}
}

// For whole a and b the incomplete beta function is a binomial tail, Abramowitz and Stegun 26.5.24; here it is summed in
// 300-bit arithmetic. x is a multiple of 2⁻²⁰, so that 1 − x is exact. 20,000 is where the continued fraction changes.
func TestIncompleteBetaIsBinomialTail(t *testing.T) {
	for _, n := range []int{1, 2, 9, 60, 500, 19_998, 20_001, 60_000} {
		for _, k := range []int{1, 2, n / 50, n / 3, n - 40, n - 2, n} {
			if k < 1 {
				continue
			}
			middle, spread := float64(k)/float64(n+1), math.Sqrt(float64(k)*float64(n+1-k))/math.Pow(float64(n+1), 1.5)
			for _, z := range []float64{-5, -1, 0, 0.5, 3} {
				x := math.Round((middle+z*spread)*0x1p20) / 0x1p20
				if x <= 0 || x >= 1 {
					continue
				}
				want, _ := binomialTail(n, k, x).Float64()
				near(t, "IncompleteBeta", IncompleteBeta(float64(k), float64(n-k+1), x), want, 1e-12)
			}
		}
	}
}

// binomialTail returns the probability of at least k successes in n trials of probability p, terms of less than 2⁻⁴⁰⁰
// of the sum left out.
func binomialTail(n, k int, p float64) *big.Float {
	number := func(v float64) *big.Float { return new(big.Float).SetPrec(300).SetFloat64(v) }
	power := func(x *big.Float, exponent int) *big.Float {
		out := number(1)
		for bit := 20; bit >= 0; bit-- {
			out.Mul(out, out)
			if exponent>>bit&1 == 1 {
				out.Mul(out, x)
			}
		}
		return out
	}
	term := number(0).SetInt(new(big.Int).Binomial(int64(n), int64(k)))
	term.Mul(term, power(number(p), k))
	term.Mul(term, power(number(1-p), n-k))
	odds := number(0).Quo(number(p), number(1-p))
	sum := number(0)
	for j := k; j <= n; j++ {
		sum.Add(sum, term)
		term.Mul(term, odds)
		term.Mul(term, number(float64(n-j)))
		term.Quo(term, number(float64(j+1)))
		if term.Sign() == 0 || term.MantExp(nil) < sum.MantExp(nil)-400 {
			break
		}
	}
	return sum
}

// Near ½ the quantile of two degrees of freedom is (2p−1)·√(2/(4p(1−p))) and of one tan(π(p−½)): closed forms.
func TestStudentQuantileNearMiddle(t *testing.T) {
	for _, d := range []float64{0x1p-50, 1e-9, 1e-4, 0.0199, 0.0201, 0.1} {
		p := 0.5 + d
		d = p - 0.5
		near(t, "t(2)", StudentQuantile(2, p), 2*d*math.Sqrt(2/(4*p*(1-p))), 1e-13)
		near(t, "t(1)", StudentQuantile(1, p), math.Tan(math.Pi*d), 1e-13)
		if a, b := StudentQuantile(7, p), StudentQuantile(7, 1-p); a != -b {
			t.Errorf("t(7) at %g is %g, at 1 − p it is %g", p, a, b)
		}
	}
}

func TestLog1pEdges(t *testing.T) {
	for _, tt := range []struct{ x, want float64 }{
		{0, 0}, {-1, math.Inf(-1)}, {math.Inf(1), math.Inf(1)}, {1e300, math.Log(1e300)},
		{math.MaxFloat64, math.Log(math.MaxFloat64)},
	} {
		if got := Log1p(tt.x); got != tt.want {
			t.Errorf("Log1p(%g) = %v, want %v", tt.x, got, tt.want)
		}
	}
	if !math.IsNaN(Log1p(-1.5)) || !math.IsNaN(Log1p(math.NaN())) {
		t.Error("NaN expected")
	}
	for e := -60; e < 60; e++ { // math.Log1p is itself good to 1 unit of 2⁻⁵²
		x := math.Ldexp(1.3, e)
		near(t, "Log1p", Log1p(x), math.Log1p(x), 3*0x1p-52)
	}
}

func BenchmarkExp(b *testing.B) {
	for i := range b.N {
		Exp(float64(i%1000) / 100)
	}
}

func BenchmarkLog(b *testing.B) {
	for i := range b.N {
		Log(float64(i%1000+1) / 100)
	}
}

func BenchmarkNormalCDF(b *testing.B) {
	for i := range b.N {
		NormalCDF(float64(i%1000)/100 - 5)
	}
}

func BenchmarkIncompleteBeta(b *testing.B) {
	for range b.N {
		IncompleteBeta(41, 73, 0.36)
	}
}

func BenchmarkChiSquareQuantile(b *testing.B) {
	for range b.N {
		ChiSquareQuantile(29, 0.975)
	}
}

func BenchmarkBetaQuantile(b *testing.B) {
	for range b.N {
		BetaQuantile(41, 73, 0.025)
	}
}
