package numeric

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mathext"
	"gonum.org/v1/gonum/stat/distuv"
)

func near(t *testing.T, what string, got, want, relative float64) {
	t.Helper()
	if math.IsNaN(got) || math.Abs(got-want) > relative*math.Abs(want) {
		t.Errorf("%s = %.17g, want %.17g within %g", what, got, want, relative)
	}
}

// Against math.Erfc of the Go library. Its own error and that of the argument, x/√2, grow with x²; the tolerance is
// (2 + x²) units of 2⁻⁵² relative.
func TestNormalCDF(t *testing.T) {
	for x := -37.0; x <= 9; x += 0.0625 {
		want := math.Erfc(-x/math.Sqrt2) / 2
		near(t, "NormalCDF", NormalCDF(x), want, (4+x*x)*0x1p-52)
	}
	if got := NormalCDF(0); got != 0.5 {
		t.Errorf("NormalCDF(0) = %v", got)
	}
	if !math.IsNaN(NormalCDF(math.NaN())) || NormalCDF(math.Inf(1)) != 1 || NormalCDF(math.Inf(-1)) != 0 {
		t.Error("wrong at NaN or at infinity")
	}
}

// Percentage points printed to 15 or more digits in Wichura's paper as test values of PPND16 (from memory): Φ⁻¹(0.25),
// Φ⁻¹(0.001), Φ⁻¹(10⁻²⁰). Half a unit of the last digit of each, plus two units of binary rounding.
func TestNormalQuantilePublished(t *testing.T) {
	near(t, "Φ⁻¹(0.25)", NormalQuantile(0.25), -0.6744897501960817, 1e-15)
	near(t, "Φ⁻¹(0.001)", NormalQuantile(0.001), -3.090232306167814, 1e-15)
	near(t, "Φ⁻¹(1e-20)", NormalQuantile(1e-20), -9.262340089798408, 1e-15)
}

// The quantile undoes the distribution function; the error of p = Φ(x) carries over by the factor φ(x)·x/Φ(x) ≤ 1 + x².
func TestNormalQuantileInverts(t *testing.T) {
	for x := -36.0; x < 0; x += 0.1 {
		near(t, "Φ⁻¹(Φ(x))", NormalQuantile(NormalCDF(x)), x, 2e-15)
	}
}

// Against gonum's continued fractions, which its makers took from Cephes; both sides are good to about 10⁻¹³.
func TestIncompleteAgainstGonum(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	for range 5000 {
		a, b, x := math.Exp(8*r.Float64()-2), math.Exp(8*r.Float64()-2), r.Float64()
		if r.IntN(2) == 0 {
			x = min(max(a/(a+b)+0.5*(r.Float64()-0.5)*math.Sqrt(a*b/(a+b+1))/(a+b)*8, 1e-9), 1-1e-9)
		}
		want := mathext.RegIncBeta(a, b, x)
		if want > 1e-290 {
			near(t, "IncompleteBeta", IncompleteBeta(a, b, x), want, 2e-12)
		}
		g := a * (0.2 + 2*r.Float64())
		lower, upper := IncompleteGamma(a, g)
		if want := mathext.GammaIncReg(a, g); want > 1e-290 {
			near(t, "P(a, x)", lower, want, 2e-12)
		}
		if want := mathext.GammaIncRegComp(a, g); want > 1e-290 {
			near(t, "Q(a, x)", upper, want, 2e-12)
		}
	}
}

// Exact cases in closed form: I_x(1, b) = 1 − (1−x)^b, I_x(a, 1) = x^a, I_x(½, ½) = (2/π)·asin√x, P(1, x) = 1 − e^(−x).
func TestIncompleteClosedForms(t *testing.T) {
	for _, x := range []float64{1e-12, 0.001, 0.2, 0.5, 0.9, 0.999} {
		for _, b := range []float64{0.3, 1, 7.5, 300} {
			near(t, "I_x(1, b)", IncompleteBeta(1, b, x), -math.Expm1(b*math.Log1p(-x)), 1e-13)
			near(t, "I_x(a, 1)", IncompleteBeta(b, 1, x), math.Pow(x, b), 1e-13*(1+b*math.Abs(math.Log(x))/10))
		}
		near(t, "I_x(½, ½)", IncompleteBeta(0.5, 0.5, x), 2/math.Pi*math.Asin(math.Sqrt(x)), 1e-13)
		lower, upper := IncompleteGamma(1, x)
		near(t, "P(1, x)", lower, -math.Expm1(-x), 1e-13)
		near(t, "Q(1, x)", upper, math.Exp(-x), 1e-13)
	}
}

// Critical values of the tables in the NIST/SEMATECH e-Handbook of Statistical Methods, 1.3.6.7.2 and 1.3.6.7.4 (three
// decimals, quoted from memory), and of Student's distribution with one and two degrees of freedom in closed form.
func TestQuantilesPublished(t *testing.T) {
	for _, tt := range []struct{ df, p, want float64 }{
		{1, 0.975, 12.706}, {2, 0.95, 2.920}, {5, 0.975, 2.571}, {10, 0.95, 1.812}, {10, 0.975, 2.228}, {30, 0.99, 2.457},
		{100, 0.975, 1.984},
	} {
		if got := StudentQuantile(tt.df, tt.p); math.Abs(got-tt.want) > 0.0005 {
			t.Errorf("t(%g) at %g = %.6f, the table has %.3f", tt.df, tt.p, got, tt.want)
		}
	}
	for _, tt := range []struct{ df, p, want float64 }{
		{1, 0.95, 3.841}, {5, 0.95, 11.070}, {10, 0.95, 18.307}, {10, 0.975, 20.483}, {10, 0.025, 3.247}, {30, 0.95, 43.773},
		{100, 0.95, 124.342},
	} {
		if got := ChiSquareQuantile(tt.df, tt.p); math.Abs(got-tt.want) > 0.0005 {
			t.Errorf("chi-square(%g) at %g = %.6f, the table has %.3f", tt.df, tt.p, got, tt.want)
		}
	}
	for _, p := range []float64{1e-8, 0.01, 0.3, 0.6, 0.975, 0.9999} {
		near(t, "t(1)", StudentQuantile(1, p), -1/math.Tan(math.Pi*p), 1e-12)
		near(t, "t(2)", StudentQuantile(2, p), (2*p-1)*math.Sqrt(2/(4*p*(1-p))), 1e-12)
		near(t, "chi-square(2)", ChiSquareQuantile(2, p), -2*math.Log1p(-p), 1e-12)
	}
}

// Beta quantiles against gonum's root finder (good to about 10⁻¹²), and their ends.
func TestBetaQuantile(t *testing.T) {
	r := rand.New(rand.NewPCG(2, 2))
	for range 300 {
		a, b := 0.5+100*r.Float64(), 0.5+100*r.Float64()
		p := 0.001 + 0.998*r.Float64()
		near(t, "BetaQuantile", BetaQuantile(a, b, p), distuv.Beta{Alpha: a, Beta: b}.Quantile(p), 1e-10)
		near(t, "I of BetaQuantile", IncompleteBeta(a, b, BetaQuantile(a, b, p)), p, 1e-11)
	}
	near(t, "beta(1, n)", BetaQuantile(1, 59, 0.95), -math.Expm1(math.Log(0.05)/59), 1e-13)
	near(t, "beta(n, 1)", BetaQuantile(59, 1, 0.05), math.Pow(0.05, 1.0/59), 1e-13)
}

// Arguments outside the domain give NaN, and extreme ones end.
func TestSpecialArguments(t *testing.T) {
	nan := math.NaN()
	for i, v := range []float64{IncompleteBeta(0, 1, 0.5), IncompleteBeta(1, 1, nan), IncompleteBeta(1, 1, 2), BetaQuantile(1, 1, 0),
		StudentQuantile(0, 0.5), StudentQuantile(3, 1), ChiSquareQuantile(nan, 0.5), NormalQuantile(2), NormalQuantile(nan)} {
		if !math.IsNaN(v) {
			t.Errorf("case %d gives %v, want NaN", i, v)
		}
	}
	for _, df := range []float64{0.1, 1, 1e3, 1e6} {
		for _, p := range []float64{1e-10, 0.5 - 1e-9, 1 - 1e-10} {
			if v := StudentQuantile(df, p); math.IsNaN(v) {
				t.Errorf("t(%g) at %g is NaN", df, p)
			}
			if v := ChiSquareQuantile(df, p); math.IsNaN(v) || v < 0 {
				t.Errorf("chi-square(%g) at %g is %v", df, p, v)
			}
			if v := BetaQuantile(df, 1e5, p); !(v >= 0 && v <= 1) {
				t.Errorf("beta(%g, 1e5) at %g is %v", df, p, v)
			}
		}
	}
}

func BenchmarkNormalQuantile(b *testing.B) {
	for i := range b.N {
		NormalQuantile(float64(i%1000+1) / 1002)
	}
}

func BenchmarkStudentQuantile(b *testing.B) {
	for range b.N {
		StudentQuantile(29, 0.975)
	}
}
