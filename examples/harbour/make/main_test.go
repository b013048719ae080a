package main

import (
	"bytes"
	"math"
	"os"
	"slices"
	"testing"
)

// The data in the folder are what the program writes.
func TestFilesAreWhatIsMade(t *testing.T) {
	strips, pouches := tables()
	for name, want := range map[string][]byte{"../strips.csv": strips, "../pouches.csv": pouches} {
		got, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(got, want) {
			t.Errorf("%s is not what the program writes; run go run ./examples/harbour/make", name)
		}
	}
}

// The truth is what README.md says it is, seen in so many pouches that chance no longer matters. The tolerances are
// half a unit of the last digit in README.md, and for the percentile one step of the instrument.
func TestTruth(t *testing.T) {
	const n = 60000 // pouches of each age; standard errors are at most a third of the tolerances
	tests := []struct {
		mean, p10 float64
		short     float64 // share of pouches whose weakest strip is below 1.20
	}{{1.87, 1.50, 0.002}, {1.80, 1.45, 0.004}, {1.72, 1.40, 0.007}}
	random := newSource(1)
	for a, age := range ages {
		var all, weakest []float64
		var within, between float64 // mean squares
		for _, lot := range lots {
			var means []float64
			for i := range n / len(lots) {
				var strips []float64
				for _, steps := range random.pouch(age.level, lot.factor, []string{"S1", "S2"}[i%2]) {
					strips = append(strips, float64(5*steps)/100)
				}
				mean, square, _ := moments(strips)
				within += square * float64(len(strips)) / float64(len(strips)-1) / n
				means = append(means, mean)
				weakest = append(weakest, slices.Min(strips))
				all = append(all, strips...)
			}
			_, square, _ := moments(means)
			between += square / float64(len(lots))
		}
		between -= within / float64(len(positions))
		mean, _, skewness := moments(all)
		slices.Sort(weakest)
		short, _ := slices.BinarySearch(weakest, 1.195)
		check := func(what string, got, want, tolerance float64) {
			if !(math.Abs(got-want) <= tolerance) {
				t.Errorf("%s: %s is %.4f, said to be %.4f", age.name, what, got, want)
			}
		}
		check("mean", mean, tests[a].mean, 0.005)
		check("10th percentile of the weakest strip", weakest[n/10], tests[a].p10, 0.05)
		check("share below 1.20", float64(short)/n, tests[a].short, 0.001)
		check("correlation within a pouch", between/(between+within), 0.5, 0.05)
		check("skewness", skewness, -0.6, 0.05)
		if a == 2 {
			check("repeatability standard deviation", math.Sqrt(within), 0.11, 0.005)
		}
	}
}

// moments returns the mean, the mean square deviation and the skewness.
func moments(x []float64) (mean, square, skewness float64) {
	for _, v := range x {
		mean += v / float64(len(x))
	}
	var cube float64
	for _, v := range x {
		d := v - mean
		square += d * d / float64(len(x))
		cube += d * d * d / float64(len(x))
	}
	return mean, square, cube / math.Pow(square, 1.5)
}
