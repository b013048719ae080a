package statistic

import (
	"errors"
	"math/rand/v2"
	"testing"
)

// Equal observations have their value as mean and median and no spread, exactly: no rounding of the mean may look like
// one, or a resample of one value drawn n times would pass for a very precise one.
func TestConstant(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 7))
	for range 3000 {
		n := 2 + r.IntN(40)
		v, steady := r.NormFloat64()*100+0.1, 1+r.Float64()
		x, y := make([]float64, n), make([]float64, n)
		for i := range x {
			x[i], y[i] = v, r.NormFloat64()
		}
		s := sampleOf(x)
		for _, name := range []string{"standard deviation", "variance", "interquartile range",
			"median absolute deviation"} {
			if got := estimate(t, bind(t, name), s); got != 0 {
				t.Fatalf("%s of %d times %v is %g", name, n, v, got)
			}
		}
		for _, name := range []string{"mean", "median"} {
			if got := estimate(t, bind(t, name), s); got != v {
				t.Fatalf("%s of %d times %.17g is %.17g", name, n, v, got)
			}
		}
		if got, err := bind(t, "median").(StandardErrorer).StandardError(s, v); got != 0 || err != nil {
			t.Fatalf("standard error of the median of %d times %v is %g, %v", n, v, got, err)
		}
		for i := range x {
			x[i] = steady
		}
		if got := estimate(t, bind(t, "coefficient of variation"), s); got != 0 {
			t.Fatalf("coefficient of variation of %d times %v is %g", n, steady, got)
		}
		codes := make([]int32, n)
		for i := range codes {
			codes[i] = int32(i % 2 * (n / 3))
		}
		if n > 3 {
			got := estimate(t, bind(t, "repeatability standard deviation"), NewSample([][]float64{x}, n, codes, n))
			if got != 0 {
				t.Fatalf("repeatability standard deviation of %d times %v is %g", n, steady, got)
			}
		}
		for _, name := range []string{"Pearson correlation", "Spearman correlation", "slope", "intercept"} {
			if got, err := bind(t, name).Estimate(sampleOf(x, y)); !errors.Is(err, ErrNoSpread) {
				t.Fatalf("%s on %d times %v is %g, %v", name, n, steady, got, err)
			}
		}
	}
}
