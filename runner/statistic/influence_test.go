package statistic

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// Influence values sum to 0 within rounding: they are a derivative in directions that keep the total weight.
func TestInfluenceSumsToZero(t *testing.T) {
	r := rand.New(rand.NewPCG(21, 1))
	tried := 0
	for _, u := range subjects {
		e, ok := bind(t, u.name, u.settings...).(Influencer)
		if !ok {
			continue
		}
		tried++
		for range 100 {
			n := 5 + r.IntN(40)
			s := u.sample(r, n)
			l := make([]float64, n)
			must(t, e.Influence(s, estimate(t, e, s), l))
			sum, size := 0.0, 0.0
			for _, v := range l {
				sum += v
				size += math.Abs(v)
			}
			if math.Abs(sum) > 1e-11*size {
				t.Fatalf("%s: influence values sum to %g, their sizes to %g", u.name, sum, size)
			}
		}
	}
	if tried < 9 {
		t.Errorf("only %d statistics with influence values", tried)
	}
}

// Influence values against a numerical derivative. The sample is written down 2,000 times, and observation i once more
// or once less; the difference of the two estimates, over that of the weights, is the derivative at the sample with an
// error of the order 1/(2000·n). Divisors n − 1 are first turned into n, as a functional of weights has them, and the
// influence values of Lotproof carry the factor back. Definition: Efron, The Jackknife, the Bootstrap and Other
// Resampling Plans, SIAM 1982, chapter 6 (cited from memory).
func TestInfluenceIsDerivative(t *testing.T) {
	r := rand.New(rand.NewPCG(22, 1))
	power := map[string]float64{"mean": 0, "geometric mean": 0, "standard deviation": 0.5, "variance": 1,
		"coefficient of variation": 0.5, "Pearson correlation": 0, "slope": 0, "intercept": 0, "proportion": 0}
	const copies = 2000
	for _, u := range subjects {
		e, ok := bind(t, u.name, u.settings...).(Influencer)
		p, smooth := power[u.name]
		if !ok || !smooth {
			continue // trimmed mean and repeatability have tests of their own
		}
		n := 9
		s := u.sample(r, n)
		l := make([]float64, n)
		must(t, e.Influence(s, estimate(t, e, s), l))
		var columns [][]float64
		for c := range u.columns {
			columns = append(columns, slices.Repeat(s.Column(c), copies))
		}
		at := func(change, i int) float64 {
			moved := make([][]float64, u.columns)
			for c := range moved {
				if change > 0 {
					moved[c] = append(slices.Clone(columns[c]), columns[c][i])
				} else {
					moved[c] = slices.Delete(slices.Clone(columns[c]), i, i+1)
				}
			}
			size := float64(len(moved[0]))
			return estimate(t, e, NewSample(moved, len(moved[0]), nil, 0)) * math.Pow((size-1)/size, p)
		}
		total := float64(n * copies)
		weights := 1/(total+1) + 1/(total-1)
		largest := 0.0
		for _, v := range l {
			largest = max(largest, math.Abs(v))
		}
		for i, v := range l {
			want := (at(+1, i) - at(-1, i)) / weights * math.Pow(float64(n)/float64(n-1), p)
			if math.Abs(v-want) > 1e-6*largest {
				t.Errorf("%s: influence of observation %d is %.12g, the derivative is %.12g", u.name, i, v, want)
			}
		}
	}
}

// The influence values of the repeatability, summed over a whole level, are the derivative with respect to the weight
// of that level: the pooled variance is the ratio of two sums over levels.
func TestRepeatabilityInfluence(t *testing.T) {
	x := []float64{1, 2, 4, 7, 7.5, 3, 9, 9.25, 8.5, 9.5}
	codes := []int32{0, 0, 0, 1, 1, 2, 3, 3, 3, 3} // level 2 has one reading
	const levels, copies = 4, 2000
	e := bind(t, "repeatability standard deviation", "g").(Influencer)
	s := NewSample([][]float64{x}, len(x), codes, levels)
	l := make([]float64, len(x))
	must(t, e.Influence(s, estimate(t, e, s), l))
	at := func(times func(level int32) int) float64 {
		var column []float64
		var groups []int32
		next := int32(0)
		for level := int32(0); level < levels; level++ {
			for range times(level) {
				for i, c := range codes {
					if c == level {
						column, groups = append(column, x[i]), append(groups, next)
					}
				}
				next++
			}
		}
		return estimate(t, e, NewSample([][]float64{column}, len(column), groups, int(next)))
	}
	for level := range int32(levels) {
		change := func(by int) float64 {
			return at(func(of int32) int {
				if of == level {
					return copies + by
				}
				return copies
			})
		}
		// A weight of 1 on a reading is 1/N of the total; the derivative is taken for one more level in 1/copies of it.
		want := (change(+1) - change(-1)) / 2 * copies * float64(len(x))
		got := 0.0
		for i, c := range codes {
			if c == level {
				got += l[i]
			}
		}
		if math.Abs(got-want) > 1e-5 {
			t.Errorf("level %d: influence %.10g, derivative %.10g", level, got, want)
		}
	}
}

// With many observations the delta-method standard error agrees with the jackknife, for smooth statistics within 1 %
// at n = 400.
func TestInfluenceAgainstJackknife(t *testing.T) {
	r := rand.New(rand.NewPCG(23, 1))
	for _, u := range subjects {
		e, ok := bind(t, u.name, u.settings...).(Influencer)
		if !ok || u.factor {
			continue
		}
		const n = 400
		s := u.sample(r, n)
		l := make([]float64, n)
		must(t, e.Influence(s, estimate(t, e, s), l))
		squares := 0.0
		for _, v := range l {
			squares += v * v
		}
		left := make([]float64, n)
		mean := 0.0
		for i := range left {
			var columns [][]float64
			for c := range u.columns {
				columns = append(columns, slices.Delete(slices.Clone(s.Column(c)), i, i+1))
			}
			left[i] = estimate(t, e, sampleOf(columns...))
			mean += left[i] / n
		}
		spread := 0.0
		for _, v := range left {
			spread += (v - mean) * (v - mean)
		}
		delta, jackknife := math.Sqrt(squares)/n, math.Sqrt(spread*(n-1)/n)
		if math.Abs(delta/jackknife-1) > 0.01 {
			t.Errorf("%s: delta-method standard error %g, jackknife %g", u.name, delta, jackknife)
		}
	}
}
