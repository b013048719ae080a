package runner

import (
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/dsp/fourier"
	"gonum.org/v1/gonum/stat/distuv"

	"lotproof/runner/internal/reference"
	"lotproof/runner/record"
)

// checkBCa compares BCa limits. The reference counts values strictly below the estimate for z₀, Lotproof half of those
// equal to it as well (what a value exactly at the estimate says of the bias is nothing, so it should pull neither
// way). For means, whose law on the lattice of the data is known exactly, the limits are computed from that law with
// both weights: with weight 0 it must give the figures of the case, with weight ½ it gives what Lotproof should find.
// For standard deviations and correlations the estimate has an atom below 10⁻⁵ and the weight moves nothing that
// matters.
func checkBCa(t *testing.T, c reference.Case, r *record.Statistic, resamples int) {
	t.Helper()
	in := method(t, r, "bca")
	a := c.Number(t, "a")
	if got := figure(t, in, "a"); math.Abs(got-a) > 1e-8*math.Abs(a) {
		t.Errorf("%s: acceleration %.15g, want %.15g", c.ID, got, a)
	}
	wanted, z0 := c.Expected, c.Number(t, "z0")
	simulated := strings.Contains(c.ID, "-mc-")
	if l := lawOfMean(t, c); l != nil {
		strict, half := l.bca(a, 0), l.bca(a, 0.5)
		for name, want := range c.Expected {
			low, high := want-1e-9*math.Abs(want), want+1e-9*math.Abs(want)
			if simulated {
				low, high = c.Range(t, name, want, resamples)
			}
			if strict[name] < low || strict[name] > high {
				t.Errorf("%s: the exact law gives %s = %v with ties uncounted, the case has "+
					"%v", c.ID, name, strict[name], want)
			}
			wanted[name] = want + half[name] - strict[name]
		}
		if !simulated && math.Abs(strict["z0"]-z0) > 1e-9 {
			t.Errorf("%s: the exact law gives z0 = %v with ties uncounted, the case has %v", c.ID, strict["z0"], z0)
		}
		z0 = half["z0"]
	}
	share := distuv.UnitNormal.CDF(z0)
	reach := 5 * math.Sqrt(share*(1-share)/float64(resamples)) / distuv.UnitNormal.Prob(z0)
	if simulated {
		reach *= math.Sqrt(1 + float64(resamples)/12/999999) // the reference has its own error
	}
	if got := figure(t, in, "z0"); math.Abs(got-z0) > reach {
		t.Errorf("%s: z0 %v, want %v ± %v", c.ID, got, z0, reach)
	}
	for name, got := range limits(t, r, "bca") {
		low, high := c.Range(t, name, wanted[name], resamples)
		if !(got >= low && got <= high) {
			t.Errorf("%s: %s = %v, want %v (%v with ties uncounted), allowed %v to %v\n%s\nsource: %s", c.ID, name, got,
				wanted[name], c.Expected[name], low, high, c.Quantity, c.Source)
		}
	}
}

// A law is the exact distribution of a mean, or of a difference of two means, over all resamples: value i is first +
// i·step.
type law struct {
	first, step float64
	share       []float64
	at          int // the place of the estimate
}

// lawOfMean returns the law of the mean behind a case, nil if the case is about another statistic.
func lawOfMean(t testing.TB, c reference.Case) *law {
	t.Helper()
	d := reference.Data(t, c.Data)
	whole := func(x []float64, unit float64) []int {
		out := make([]int, len(x))
		for i, v := range x {
			out[i] = int(math.Round(v * unit))
			if math.Abs(v*unit-float64(out[i])) > 1e-6 {
				t.Fatalf("%s: %v is not on a lattice of 1/%v", c.ID, v, unit)
			}
		}
		return out
	}
	switch {
	case strings.HasPrefix(c.ID, "mouse-treatment"), strings.HasPrefix(c.ID, "mouse-control"):
		group := strings.Split(c.ID, "-")[1]
		return sumLaw(1, whole(d.Where("group", group).Numbers("days"), 1), nil)
	case strings.HasPrefix(c.ID, "shoes"):
		a, b := d.Numbers("A"), d.Numbers("B")
		for i := range b {
			b[i] -= a[i]
		}
		return sumLaw(10, whole(b, 10), nil)
	case strings.HasPrefix(c.ID, "plant"):
		weights := func(group string) []int { return whole(d.Where("group", group).Numbers("weight"), 100) }
		return sumLaw(100, weights("trt2"), weights("trt1"))
	case strings.HasPrefix(c.ID, "precip"):
		return sumLaw(10, whole(d.Numbers("in_per_year"), 10), nil)
	case strings.HasSuffix(c.ID, "-mean-bca"):
		return sumLaw(1, whole(d.Numbers(c.Columns[0]), 1), nil)
	}
	return nil
}

// sumLaw convolves the empirical distribution of first n times with itself, by the Fourier transform, and likewise that
// of second, reversed, if there is one of the same number. Observations are in units of 1/unit.
func sumLaw(unit float64, first, second []int) *law {
	n := len(first)
	least, most, total := n*slices.Min(first), n*slices.Max(first), 0
	for _, v := range first {
		total += v
	}
	if second != nil {
		least, most = least-n*slices.Max(second), most-n*slices.Min(second)
		for _, v := range second {
			total -= v
		}
	}
	size := 1
	for size < most-least+1 {
		size *= 2
	}
	fft := fourier.NewFFT(size)
	product := make([]complex128, size/2+1)
	for i := range product {
		product[i] = 1
	}
	multiply := func(values []int, origin, sign int) {
		one := make([]float64, size)
		for _, v := range values {
			one[sign*(v-origin)] += 1 / float64(n)
		}
		for i, f := range fft.Coefficients(nil, one) {
			for range n {
				product[i] *= f
			}
		}
	}
	multiply(first, slices.Min(first), 1)
	if second != nil {
		multiply(second, slices.Max(second), -1)
	}
	share := fft.Sequence(nil, product)[:most-least+1]
	for i := range share {
		share[i] = max(0, share[i]/float64(size))
	}
	scale := unit * float64(n)
	return &law{first: float64(least) / scale, step: 1 / scale, share: share, at: total - least}
}

// bca returns the limits inf{t: P(T ≤ t) ≥ level} at the two corrected levels, and z0.
func (l *law) bca(a, tieWeight float64) reference.Figures {
	below := tieWeight * l.share[l.at]
	for _, p := range l.share[:l.at] {
		below += p
	}
	z0 := distuv.UnitNormal.Quantile(below)
	limit := func(p float64) float64 {
		w := z0 + distuv.UnitNormal.Quantile(p)
		level := distuv.UnitNormal.CDF(z0 + w/(1-a*w))
		sum := 0.0
		for i, q := range l.share {
			if sum += q; sum >= level {
				return l.first + float64(i)*l.step
			}
		}
		return math.NaN()
	}
	return reference.Figures{"lower": limit(0.025), "upper": limit(0.975), "z0": z0}
}
