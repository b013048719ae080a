package runner

import (
	"cmp"
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/stat/combin"
	"gonum.org/v1/gonum/stat/distuv"

	"lotproof/runner/internal/reference"
	"lotproof/runner/record"
)

// checkExactMedian compares percentile limits of the median with its exact law: a limit must be a quantile of the law
// whose level is within 5 standard errors of a rank of 0.025 or 0.975. In most cases only one value is; for the rivers
// the step at 490 ends at 0.9746, so 490 and 500 both are. The mean of the resample values may differ by 5 standard
// errors.
func checkExactMedian(t *testing.T, c reference.Case, r *record.Statistic, resamples int) {
	t.Helper()
	d := reference.Data(t, c.Data)
	if group, ok := strings.CutPrefix(strings.TrimSuffix(c.ID, "-median-exact-boot"), "mouse-"); ok {
		d = d.Where("group", group)
	}
	law := medianLaw(d.Numbers(c.Columns[0]))
	var mean, squares float64
	for _, p := range law {
		mean += p.share * p.value
		squares += p.share * p.value * p.value
	}
	sd := math.Sqrt(squares - mean*mean)
	// The law as computed here has the figures of the case, but for rounding.
	own := reference.Figures{"mean": mean, "se": sd, "lower": quantileOf(law, 0.025), "upper": quantileOf(law, 0.975)}
	for name, got := range own {
		if want := c.Expected[name]; math.Abs(got-want) > 1e-9*want {
			t.Errorf("%s: the law gives %s = %.12g, the case has %.12g\nsource: %s", c.ID, name, got, want, c.Source)
		}
	}
	if want := c.Number(t, "median"); *r.Estimate != want {
		t.Errorf("%s: median %v, want %v", c.ID, *r.Estimate, want)
	}
	if got, reach := *r.Estimate+*r.Bias, 5*sd/math.Sqrt(float64(resamples)); math.Abs(got-mean) > reach {
		t.Errorf("%s: mean of the resample values %v, want %v ± %v", c.ID, got, mean, reach)
	}
	checkPercentiles(t, c.ID, law, r, resamples)
}

// An atom is one value of a law with its probability.
type atom struct{ value, share float64 }

// quantileOf returns inf{t: P(T ≤ t) ≥ level}; the law is in ascending order.
func quantileOf(law []atom, level float64) float64 {
	sum := 0.0
	for _, p := range law {
		if sum += p.share; sum >= level {
			return p.value
		}
	}
	return math.NaN()
}

// checkPercentiles compares two-sided 0.95 percentile limits with the quantiles of an exact law, 5 standard errors of a
// rank either way.
func checkPercentiles(t *testing.T, what string, law []atom, r *record.Statistic, resamples int) {
	t.Helper()
	reach := 5 * math.Sqrt(0.025*0.975/float64(resamples))
	got := limits(t, r, "percentile")
	for name, level := range map[string]float64{"lower": 0.025, "upper": 0.975} {
		low, high := quantileOf(law, level-reach), quantileOf(law, level+reach)
		if v := got[name]; !(v >= low-1e-9*math.Abs(low) && v <= high+1e-9*math.Abs(high)) {
			t.Errorf("%s: %s limit %v, allowed %v to %v", what, name, v, low, high)
		}
	}
}

// medianLaw returns the exact law of the median over all resamples of x. At least m of n draws lie at or below v with a
// binomial probability; for even n = 2m, the two middle values are a < b if just m draws lie at or below a, one of them
// at it, and the others at or above b, one of them at it.
func medianLaw(x []float64) []atom {
	x = slices.Sorted(slices.Values(x))
	n := len(x)
	m := (n + 1) / 2
	values := slices.Compact(slices.Clone(x))
	below := []float64{0} // share of observations below values[i]; one more entry closes the list
	for _, v := range values {
		count := 0
		for _, w := range x {
			if w <= v {
				count++
			}
		}
		below = append(below, float64(count)/float64(n))
	}
	atLeast := func(p float64) float64 { // P(X ≥ m), X binomial(n, p)
		return 1 - distuv.Binomial{N: float64(n), P: p}.CDF(float64(m-1))
	}
	var law []atom
	choose := math.Exp(combin.LogGeneralizedBinomial(float64(n), float64(m)))
	for i, a := range values {
		alone := atLeast(below[i+1]) - atLeast(below[i])
		if n%2 == 0 {
			left := math.Pow(below[i+1], float64(m)) - math.Pow(below[i], float64(m))
			for j := i + 1; j < len(values); j++ {
				right := math.Pow(1-below[j], float64(m)) - math.Pow(1-below[j+1], float64(m))
				share := choose * left * right
				law = append(law, atom{(a + values[j]) / 2, share})
				alone -= share
			}
		}
		law = append(law, atom{a, alone})
	}
	slices.SortFunc(law, func(a, b atom) int { return cmp.Compare(a.value, b.value) })
	return law
}
