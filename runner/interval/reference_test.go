package interval

import (
	"math"
	"math/big"
	"slices"
	"strconv"
	"strings"
	"testing"

	"lotproof/runner/internal/reference"
	"lotproof/spec"
)

// input is what a classical method gets for the observations; two-sided at 0.95 unless changed.
func input(t testing.TB, estimate float64, observations ...float64) *Input {
	t.Helper()
	return &Input{Bound: spec.TwoSided, Confidence: level("0.95"), Estimate: estimate,
		Least: math.Inf(-1), Most: math.Inf(1), Acceleration: math.NaN(), OwnError: math.NaN(),
		Sample: &Sample{Sorted: slices.Sorted(slices.Values(observations)), P: big.NewRat(1, 2)}}
}

func level(text string) spec.Number {
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		panic(err)
	}
	return spec.Number{Text: text, Value: v}
}

func parameter(t testing.TB, r Result, name string) float64 {
	t.Helper()
	for _, p := range r.Parameters {
		if p.Name == name {
			return p.Value
		}
	}
	t.Fatalf("no parameter %q in %+v", name, r)
	return 0
}

// TestReference checks the classical and exact methods against two independent programs; the source of each figure is
// in the case and printed when it fails.
func TestReference(t *testing.T) {
	checks := map[string]func(*testing.T, reference.Case){}
	column := func(t *testing.T, c reference.Case) []float64 { return reference.Data(t, c.Data).Numbers(c.Columns[0]) }

	for _, id := range []string{"chem-medci", "rivers-medci", "aircondit-medci"} {
		checks[id] = func(t *testing.T, c reference.Case) {
			x := column(t, c)
			r := orderStatistic.Find(input(t, 0, x...))
			c.Compare(t, reference.Figures{"lower": r.Lower, "upper": r.Upper}, 0)
			k, attained := c.Number(t, "k"), c.Number(t, "actual_coverage")
			low, high, mirror := parameter(t, r, "lower rank"), parameter(t, r, "upper rank"), float64(len(x))+1-k
			if low != k || high != mirror {
				t.Errorf("%s: ranks %v and %v, want %v and %v", c.ID, low, high, k, mirror)
			}
			if math.Abs(r.Attained-attained) > 1e-14 {
				t.Errorf("%s: attained confidence %.17g, want %.17g", c.ID, r.Attained, attained)
			}
		}
	}
	checks["precip-tci"] = func(t *testing.T, c reference.Case) {
		r := student.Find(input(t, 0, column(t, c)...))
		c.Compare(t, reference.Figures{"lower": r.Lower, "upper": r.Upper}, 0)
	}
	for _, id := range []string{"precip-sdci", "pastes-sdci"} {
		checks[id] = func(t *testing.T, c reference.Case) {
			x := column(t, c)
			_, _, variance := moments(x)
			r := chiSquare.Find(input(t, math.Sqrt(variance), x...))
			c.Compare(t, reference.Figures{"lower": r.Lower, "upper": r.Upper}, 0)
			// The limits of the variance are the squares.
			v := chiSquare.Find(input(t, variance, x...))
			c.Compare(t, reference.Figures{"lower": math.Sqrt(v.Lower), "upper": math.Sqrt(v.Upper)}, 0)
		}
	}
	checks["asah-clopper-pearson"] = func(t *testing.T, c reference.Case) {
		x := column(t, c)
		r := clopperPearson.Find(input(t, 0, x...))
		c.Compare(t, reference.Figures{"lower": r.Lower, "upper": r.Upper}, 0)
		if got, want := parameter(t, r, "count"), c.Number(t, "successes"); got != want {
			t.Errorf("count %v, want %v", got, want)
		}
	}
	for id, groups := range map[string][2]string{"mouse-welch": {"treatment", "control"}, "plant-welch": {"trt2", "trt1"},
		"sprays-welch": {"A", "F"}, "toothgrowth-welch": {"OJ", "VC"}} {
		checks[id] = func(t *testing.T, c reference.Case) {
			in := input(t, 0)
			in.Sample.As = "difference"
			for i, group := range groups {
				in.Sample.Groups[i] = reference.Data(t, c.Data).Where(c.Columns[0], group).Numbers(c.Columns[1])
			}
			r := student.Find(in)
			c.Compare(t, reference.Figures{"lower": r.Lower, "upper": r.Upper, "difference": (r.Lower + r.Upper) / 2,
				"se": parameter(t, r, "standard error"), "df": parameter(t, r, "degrees of freedom")}, 0, "t", "p_two_sided")
		}
	}
	reference.Run(t, "interval", checks)
}

func upTo(n int) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = float64(i + 1)
	}
	return x
}

// The fewest observations with a one-sided bound on a quantile: n ≥ ln(1−confidence)/ln(p). Wilks SS, Determination of
// sample sizes for setting tolerance limits, Annals of Mathematical Statistics 12 (1941) 91–96, and the tables of ISO
// 16269-6 (both cited from memory): 59 for 95 % of the population at 95 % confidence, 29 for 90 %, 299 for 99 %, 24 for
// 95 % at 70 %. The bound is the extreme observation, and one observation fewer has none.
func TestSmallestSamples(t *testing.T) {
	tests := []struct {
		p          string // the lower bound of this quantile; the upper one of 1 − p mirrors it
		confidence string
		n          int
	}{
		{"0.1", "0.95", 29}, {"0.05", "0.95", 59}, {"0.01", "0.95", 299}, {"0.05", "0.70", 24},
		{"0.5", "0.95", 5}, {"0.2", "0.95", 14}, {"0.05", "0.90", 45},
	}
	for _, tt := range tests {
		p, _ := new(big.Rat).SetString(tt.p)
		mirror := new(big.Rat).Sub(big.NewRat(1, 1), p)
		for _, n := range []int{tt.n, tt.n - 1} {
			low, high := input(t, 0, upTo(n)...), input(t, 0, upTo(n)...)
			low.Bound, low.Confidence, low.Sample.P = spec.Lower, level(tt.confidence), p
			high.Bound, high.Confidence, high.Sample.P = spec.Upper, level(tt.confidence), mirror
			a, b := orderStatistic.Find(low), orderStatistic.Find(high)
			if n < tt.n {
				if a.Reason == "" || b.Reason == "" || !math.IsNaN(a.Lower) || !math.IsNaN(b.Upper) {
					t.Errorf("p %s at %s: a bound with %d observations: %+v, %+v", tt.p, tt.confidence, n, a, b)
				}
				continue
			}
			q, _ := mirror.Float64()
			attained := 1 - math.Pow(q, float64(n))
			if a.Lower != 1 || b.Upper != float64(n) || math.Abs(a.Attained-attained) > 1e-13 || a.Attained != b.Attained {
				t.Errorf("p %s at %s, n %d: %+v, %+v; want the extremes, attained "+
					"%v", tt.p, tt.confidence, n, a, b, attained)
			}
			if !math.IsNaN(a.Upper) || !math.IsNaN(b.Lower) {
				t.Errorf("p %s: a one-sided bound has a second limit: %+v, %+v", tt.p, a, b)
			}
		}
	}
}

// With 28 observations the smallest one lies below the 10th percentile with probability 1 − 0.9²⁸ = 0.9477 only; the
// reason gives the three figures.
func TestTooFewForQuantile(t *testing.T) {
	in := input(t, 0, upTo(28)...)
	in.Bound, in.Sample.P = spec.Lower, big.NewRat(1, 10)
	r := orderStatistic.Find(in)
	for _, part := range []string{"28 observations", "smallest", "0.9477", "0.9500"} {
		if !strings.Contains(r.Reason, part) {
			t.Errorf("reason %q does not say %q", r.Reason, part)
		}
	}
}

// The sign-test table of the median: two-sided at 95 % needs 6 observations, and the whole range then attains
// 1 − 2/2⁶ = 0.96875; at n = 20 the ranks are 6 and 15 with 0.9586 (Conover WJ, Practical Nonparametric Statistics, 3rd
// edition 1999, section 3.2, cited from memory; the figures follow from the binomial distribution).
func TestMedianRanks(t *testing.T) {
	tests := []struct {
		n           int
		lower, high float64
		attained    float64
	}{
		{6, 1, 6, 0.96875}, {7, 1, 7, 0.984375}, {8, 1, 8, 0.9921875}, {9, 2, 8, 0.9609375}, {20, 6, 15, 0.95861053466796875},
	}
	for _, tt := range tests {
		r := orderStatistic.Find(input(t, 0, upTo(tt.n)...))
		if r.Lower != tt.lower || r.Upper != tt.high || math.Abs(r.Attained-tt.attained) > 1e-15 {
			t.Errorf("n %d: %v to %v attained %.17g, want %v to %v, "+
				"%.17g", tt.n, r.Lower, r.Upper, r.Attained, tt.lower,
				tt.high, tt.attained)
		}
	}
	if r := orderStatistic.Find(input(t, 0, upTo(5)...)); r.Reason == "" {
		t.Errorf("n 5: %+v, want a refusal", r)
	}
	// A level that is met to the last digit is met: 0.96875 with six observations, not a hair more.
	in := input(t, 0, upTo(6)...)
	in.Confidence = level("0.96875")
	if r := orderStatistic.Find(in); r.Lower != 1 || r.Upper != 6 {
		t.Errorf("confidence 0.96875, n 6: %+v, want 1 to 6", r)
	}
	in.Confidence = level("0.968750000000000000001")
	if r := orderStatistic.Find(in); r.Reason == "" {
		t.Errorf("confidence just above 0.96875, n 6: %+v, want a refusal", r)
	}
}

// Clopper and Pearson at the edges have closed forms: 0 of n has the upper limit 1 − (α)^(1/n), n of n mirrors it. For
// 0 of 10 at 95 % two-sided it is 0.3085 (in every table of the method; from memory), and 0 of 59 has the one-sided
// upper 95 % bound 0.0495, below 5 %.
func TestClopperPearsonEdges(t *testing.T) {
	for _, n := range []int{1, 2, 10, 59, 300} {
		for _, bound := range []spec.Bound{spec.TwoSided, spec.Upper, spec.Lower} {
			tail := 0.025
			if bound != spec.TwoSided {
				tail = 0.05
			}
			none, all := input(t, 0, make([]float64, n)...), input(t, 1, slices.Repeat([]float64{1}, n)...)
			none.Bound, all.Bound = bound, bound
			a, b := clopperPearson.Find(none), clopperPearson.Find(all)
			limit := math.Pow(tail, 1/float64(n))
			if bound != spec.Lower && math.Abs(a.Upper-(1-limit)) > 1e-12 || bound != spec.Upper && a.Lower != 0 {
				t.Errorf("0 of %d, %s: %v to %v, want 0 to %v", n, bound, a.Lower, a.Upper, 1-limit)
			}
			if bound != spec.Upper && math.Abs(b.Lower-limit) > 1e-12 || bound != spec.Lower && b.Upper != 1 {
				t.Errorf("%d of %d, %s: %v to %v, want %v to 1", n, n, bound, b.Lower, b.Upper, limit)
			}
		}
	}
	if r := clopperPearson.Find(input(t, 0, make([]float64, 10)...)); math.Abs(r.Upper-0.3085) > 5e-5 {
		t.Errorf("0 of 10: upper limit %v, want 0.3085", r.Upper)
	}
}
