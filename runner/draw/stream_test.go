package draw

import (
	"fmt"
	"math"
	"math/big"
	"math/bits"
	"testing"
)

// Outputs of xoshiro256++ from the state 1, 2, 3, 4, as printed in the test of the rand_xoshiro package of the Rust
// project (which took them from the authors' C code); typed from memory.
func TestStreamPublished(t *testing.T) {
	s := Stream{1, 2, 3, 4}
	want := []uint64{41943041, 58720359, 3588806011781223, 3591011842654386, 9228616714210784205, 9973669472204895162,
		14011001112246962877, 12406186145184390807, 15849039046786891736, 10450023813501588000}
	for i, w := range want {
		if got := s.Next(); got != w {
			t.Errorf("word %d is %d, want %d", i, got, w)
		}
	}
}

// Outputs of SplitMix64 from the seed 1234567, widely printed with implementations of the generator (common practice, no
// single source); typed from memory.
func TestMixPublished(t *testing.T) {
	want := []uint64{6457827717110365317, 3203168211198807973, 9817491932198370423, 4593380528125082431,
		16408922859458223821}
	z := uint64(1234567)
	for i, w := range want {
		z += golden
		if got := mix(z); got != w {
			t.Errorf("word %d is %d, want %d", i, got, w)
		}
	}
}

// Do not change; old plans depend on it. The words and indices were computed a second time, by a separate program in
// another language written from the text of the rules in DEVELOPERS.md, where they stand too.
func TestStreamPinned(t *testing.T) {
	var design [32]byte
	for i := range design {
		design[i] = byte(i)
	}
	key := NewKey(20410117, design)
	s := key.Stream(1)
	got := fmt.Sprintf("%016x %016x %016x", s.Next(), s.Next(), s.Next())
	if want := "30ecf624c8ef0668 832bc06de965fd6c 9fd6096824eb4174"; got != want {
		t.Errorf("words of resample 1: %s, want %s", got, want)
	}
	for _, tt := range []struct {
		n    int
		want string
	}{
		{5, "[3 3 3 0 2 3 0 2 4 3 4 2]"},
		{30, "[22 10 10 20 1 14 24 28 9 7 26 9]"},
		{1000, "[744 839 567 670 877 665 910 902 415 868 760 983]"},
		{300000, "[223451 261090 263299 231981 124760 188488 208961 195225 237063 249363 151020 157907]"},
	} {
		out := make([]int32, 12)
		s := key.Stream(2)
		newChain(tt.n).fill(&s, out)
		if got := fmt.Sprint(out); got != tt.want {
			t.Errorf("indices below %d of resample 2: %s, want %s", tt.n, got, tt.want)
		}
	}
}

// How many integers a word gives, by the stated rule, against exact arithmetic; the printed values are examples.
func TestChainRule(t *testing.T) {
	for n, want := range map[int]uint64{2: 56, 3: 34, 50: 8, 200: 6, 1000: 4, 10000: 4, 1000000: 2} {
		if got := newChain(n).perWord; got != want {
			t.Errorf("%d integers below %d from a word, want %d", got, n, want)
		}
	}
	limit := new(big.Int).Lsh(big.NewInt(1), 56)
	word := new(big.Int).Lsh(big.NewInt(1), 64)
	for n := 2; n < 3000; n++ {
		c := newChain(n)
		power := new(big.Int).Exp(big.NewInt(int64(n)), new(big.Int).SetUint64(c.perWord), nil)
		if power.Cmp(limit) > 0 || !power.IsUint64() || power.Uint64() != c.power {
			t.Fatalf("n = %d: power %d is wrong", n, c.power)
		}
		step := int64(2)
		if c.perWord == 1 {
			step = 1
		}
		more := new(big.Int).Mul(power, new(big.Int).Exp(big.NewInt(int64(n)), big.NewInt(step), nil))
		if more.Cmp(limit) <= 0 {
			t.Fatalf("n = %d: more than %d integers fit into a word", n, c.perWord)
		}
		if want := new(big.Int).Mod(word, power); want.Uint64() != c.rejected {
			t.Fatalf("n = %d: rejects %d words, want %s", n, c.rejected, want)
		}
	}
}

// Exactness of the chained draw on a small scale: with words of 8 bits in place of 64 every accepted word can be listed,
// and every tuple of integers must come from equally many words.
func TestChainExactSmall(t *testing.T) {
	for _, tt := range []struct{ n, k int }{{3, 2}, {5, 2}, {5, 3}, {6, 2}, {2, 6}, {15, 2}} {
		power := int(math.Round(math.Pow(float64(tt.n), float64(tt.k))))
		count := map[string]int{}
		for w := range 256 {
			low := w
			tuple := ""
			for range tt.k {
				product := low * tt.n
				tuple += fmt.Sprint(product>>8, ",")
				low = product & 255
			}
			if low < 256%power {
				continue
			}
			if low != (w*power)&255 {
				t.Fatalf("the last low half is not word times power")
			}
			count[tuple]++
		}
		if len(count) != power {
			t.Errorf("n = %d, k = %d: %d tuples, want %d", tt.n, tt.k, len(count), power)
		}
		for tuple, c := range count {
			if c != 256/power {
				t.Errorf("n = %d, k = %d: tuple %s from %d words, want %d", tt.n, tt.k, tuple, c, 256/power)
			}
		}
	}
}

// Uniformity of the indices over many resamples, by Pearson's chi-square: the statistic, standardised, must lie within
// 5 of its mean, which chance exceeds with probability below 10⁻⁵.
func TestIndicesUniform(t *testing.T) {
	for _, n := range []int{2, 7, 30, 200, 1001} {
		key := NewKey(7, [32]byte{byte(n)})
		c := newChain(n)
		counts := make([]float64, n)
		out := make([]int32, n)
		resamples := 2_000_000 / n
		for b := range resamples {
			s := key.Stream(uint64(b + 1))
			c.fill(&s, out)
			for _, i := range out {
				counts[i]++
			}
		}
		expected := float64(resamples)
		chi := 0.0
		for _, o := range counts {
			chi += (o - expected) * (o - expected) / expected
		}
		df := float64(n - 1)
		if z := (chi - df) / math.Sqrt(2*df); math.Abs(z) > 5 {
			t.Errorf("n = %d: chi-square %.1f on %g degrees of freedom", n, chi, df)
		}
	}
}

// Streams of neighbouring resamples and neighbouring seeds: the number of one bits in the exclusive or of their first
// words is binomial(64, ½). Means over 100,000 pairs must lie within 5 standard errors, as above.
func TestStreamsApart(t *testing.T) {
	const pairs = 100_000
	byResample, bySeed := 0, 0
	for i := range uint64(pairs) {
		key := NewKey(5, [32]byte{})
		a, b := key.Stream(i+1), key.Stream(i+2)
		byResample += bits.OnesCount64(a.Next() ^ b.Next())
		if i < 10_000 {
			c, d := NewKey(i, [32]byte{}).Stream(1), NewKey(i+1, [32]byte{}).Stream(1)
			bySeed += bits.OnesCount64(c.Next() ^ d.Next())
		}
	}
	check := func(name string, total, n int) {
		if z := (float64(total) - 32*float64(n)) / (4 * math.Sqrt(float64(n))); math.Abs(z) > 5 {
			t.Errorf("%s: %d one bits in %d pairs, %.1f standard errors from chance", name, total, n, z)
		}
	}
	check("neighbouring resamples", byResample, pairs)
	check("neighbouring seeds", bySeed, 10_000)
}

func BenchmarkIndices(b *testing.B) {
	for _, n := range []int{50, 200, 1000, 10000} {
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			key := NewKey(1, [32]byte{})
			c := newChain(n)
			out := make([]int32, n)
			for i := range b.N {
				s := key.Stream(uint64(i))
				c.fill(&s, out)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(n), "ns/draw")
		})
	}
}
