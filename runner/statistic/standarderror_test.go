package statistic

import (
	"math"
	"math/rand/v2"
	"testing"
)

// The standard error of a quantile is the standard deviation of its bootstrap law, also where the quantile lies between
// two order statistics. The law is had by counting: every one of the nⁿ resamples of n observations, for n to 6.
func TestQuantileStandardErrorByCounting(t *testing.T) {
	for _, x := range [][]float64{
		{3, 8},
		{2, 3, 11},
		{1.5, 2, 2, 9},
		{7, 1, 4, 4.5, 30},
		{-3, 12, 0, 5, 5, 1.25},
		{4, 4, 4, 4},
	} {
		n := len(x)
		drawn := NewBase([][]float64{x}).NewSample()
		rows := make([]int32, n)
		for _, tt := range [][]string{{"0.5", "7"}, {"0.1", "7"}, {"0.3", "7"}, {"0.9", "6"}, {"0.25", "8"},
			{"0.4", "2"}, {"0.5", "4"}, {"0.6", "1"}, {"0.35", "3"}, {"0.75", "9"}, {"0.123", "5"}} {
			e := bind(t, "quantile", tt...).(StandardErrorer)
			total := 1
			for range n {
				total *= n
			}
			values := make([]float64, total)
			mean := 0.0
			for k := range values {
				rest := k
				for i := range rows {
					rows[i] = int32(rest % n)
					rest /= n
				}
				drawn.Draw(rows, nil, 0)
				values[k] = estimate(t, e, drawn)
				mean += values[k] / float64(total)
			}
			squares := 0.0
			for _, v := range values {
				squares += (v - mean) * (v - mean)
			}
			want := math.Sqrt(squares / float64(total))
			s := sampleOf(x)
			got, err := e.StandardError(s, estimate(t, e, s))
			must(t, err)
			if !near(got, want, 1e-10) {
				t.Errorf("p %s, definition %s of %v: standard error %.15g, by counting %.15g", tt[0], tt[1], x,
					got, want)
			}
		}
	}
}

// The digits of p count as written, however many they are: 0.10000000001·10 is above 1, so that definition 1 takes the
// second value, and a share of 0.3333333333 (ten digits) is not a third. A fraction is the one of exact arithmetic.
func TestLongProbabilities(t *testing.T) {
	x := make([]float64, 1000)
	for i := range x {
		x[i] = float64(i + 1)
	}
	tests := []struct {
		p, definition string
		n             int
		want          float64
	}{
		{"0.1", "1", 10, 1},
		{"0.10000000001", "1", 10, 2},
		{"0.1000000000000000000000000000000000001", "1", 10, 2},
		{"0.0999999999999999999999999999999999999", "1", 10, 1},
		{"0.5000000000000000000000000000000000001", "1", 10, 6},
		{"0.25000000000000", "2", 4, 1.5},             // zeros at the end are no digits
		{"0.9973002039", "4", 1000, 997.3002039},      // n·p, as x is its own rank
		{"0.9973002039", "6", 999, 997.3002039},       // (n+1)·p
		{"0.00134989803163", "6", 999, 1.34989803163}, // the lower tail of 3 standard deviations of a normal law
		{"1e-12", "7", 1000, 1 + 999e-12},
	}
	for _, tt := range tests {
		got := estimate(t, bind(t, "quantile", tt.p, tt.definition), sampleOf(x[:tt.n]))
		if math.Abs(got-tt.want) > 1e-15*math.Abs(tt.want) {
			t.Errorf("quantile %s by definition %s of %d is %.17g, want %.17g", tt.p, tt.definition, tt.n, got, tt.want)
		}
	}
	// ⌊10·0.19999999999⌋ is 1, ⌊10·0.2⌋ is 2, and ⌊10·0.2000…01⌋ is 2.
	squares := make([]float64, 10)
	for i := range squares {
		squares[i] = float64(i * i)
	}
	for trim, want := range map[string]float64{"0.19999999999": 204.0 / 8, "0.2": 139.0 / 6,
		"0.2000000000000000000001": 139.0 / 6, "1e-30": 28.5, "0": 28.5} {
		if got := estimate(t, bind(t, "trimmed mean", trim), sampleOf(squares)); !near(got, want, 1e-15) {
			t.Errorf("mean trimmed by %s is %v, want %v", trim, got, want)
		}
	}
}

// The weights of a standard error serve several goroutines with samples of different length, and cost no allocation
// where the length stays.
func TestStandardErrorWeights(t *testing.T) {
	r := rand.New(rand.NewPCG(31, 1))
	x := draws(r, 600)
	e := bind(t, "median").(StandardErrorer)
	sizes := []int{600, 599, 300, 601 / 2, 40}
	want := make([]float64, len(sizes))
	for i, n := range sizes {
		var err error
		want[i], err = bind(t, "median").(StandardErrorer).StandardError(sampleOf(x[:n]), 0)
		must(t, err)
	}
	done := make(chan error)
	for worker := range 4 {
		go func() {
			var wrong error
			for k := range 200 {
				i := (k + worker) % len(sizes)
				got, err := e.StandardError(sampleOf(x[:sizes[i]]), 0)
				if err != nil || got != want[i] {
					wrong = ErrNotFinite
				}
			}
			done <- wrong
		}()
	}
	for range 4 {
		if err := <-done; err != nil {
			t.Error("another standard error in one of several goroutines")
		}
	}
	s := sampleOf(x)
	s.Sorted(0)
	if n := testing.AllocsPerRun(20, func() {
		if _, err := e.StandardError(s, 0); err != nil {
			t.Error(err)
		}
	}); n != 0 {
		t.Errorf("a standard error allocates %v times", n)
	}
}
