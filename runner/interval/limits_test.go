package interval

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"lotproof/spec"
)

// drawn is an input with resample values.
func drawn(t testing.TB, estimate float64, values ...float64) *Input {
	t.Helper()
	in := input(t, estimate)
	in.Sample = nil
	in.Values = NewValues(values)
	return in
}

// The rank among B values is ⌊(B+1)α⌋ from either end, in decimal arithmetic. In binary, (999+1)·(1−0.9)/2 comes out as
// 49.999999999999986 and (59+1)·(1−0.9)/2 as 2.999999999999999, one rank too few.
func TestRanks(t *testing.T) {
	tests := []struct {
		resamples  int
		confidence string
		bound      spec.Bound
		rank       int
	}{
		{999, "0.90", spec.TwoSided, 50}, {999, "0.95", spec.TwoSided, 25}, {999, "0.99", spec.TwoSided, 5},
		{999, "0.90", spec.Lower, 100}, {999, "0.95", spec.Lower, 50}, {999, "0.99", spec.Lower, 10},
		{9999, "0.90", spec.TwoSided, 500}, {9999, "0.95", spec.TwoSided, 250}, {9999, "0.99", spec.TwoSided, 50},
		{9999, "0.90", spec.Upper, 1000}, {9999, "0.95", spec.Upper, 500}, {9999, "0.99", spec.Upper, 100},
		{20000, "0.90", spec.TwoSided, 1000}, {20000, "0.95", spec.TwoSided, 500}, {20000, "0.99", spec.TwoSided, 100},
		{20000, "0.90", spec.Lower, 2000}, {20000, "0.95", spec.Lower, 1000}, {20000, "0.99", spec.Lower, 200},
		{999, "0.998", spec.TwoSided, 1}, {39, "0.95", spec.TwoSided, 1}, {19, "0.95", spec.Lower, 1},
		{59, "0.9", spec.TwoSided, 3}, {1000, "0.95", spec.TwoSided, 25},
	}
	for _, tt := range tests {
		in := drawn(t, 0, upTo(tt.resamples)...)
		in.Confidence, in.Bound = level(tt.confidence), tt.bound
		r := percentile.Find(in)
		low, high := float64(tt.rank), float64(tt.resamples+1-tt.rank)
		if tt.bound != spec.Upper && r.Lower != low || tt.bound != spec.Lower && r.Upper != high {
			t.Errorf("B %d, %s %s: ranks %v and %v, want %v and %v "+
				"(%s)", tt.resamples, tt.bound, tt.confidence, r.Lower,
				r.Upper, low, high, r.Reason)
		}
		if tt.bound == spec.Lower != math.IsNaN(r.Upper) || tt.bound == spec.Upper != math.IsNaN(r.Lower) {
			t.Errorf("B %d, %s: %v to %v: not the limits that were asked for", tt.resamples, tt.bound, r.Lower, r.Upper)
		}
	}
	for _, short := range []struct {
		resamples  int
		confidence string
		bound      spec.Bound
	}{{38, "0.95", spec.TwoSided}, {18, "0.95", spec.Lower}, {998, "0.998", spec.TwoSided}, {0, "0.95", spec.Upper}} {
		in := drawn(t, 0, upTo(short.resamples)...)
		in.Confidence, in.Bound = level(short.confidence), short.bound
		for _, d := range []*Definition{&percentile, &basic} {
			if r := d.Find(in); r.Reason != tooFewResamples || !math.IsNaN(r.Lower) || !math.IsNaN(r.Upper) {
				t.Errorf("%s with %d values at %s: %+v", d.Name, short.resamples, short.confidence, r)
			}
		}
	}
}

// Basic limits reflect the percentile limits at the estimate, the error with them; a one-sided bound at confidence c is
// the limit of the two-sided interval at 2c − 1.
func TestReflectionAndSides(t *testing.T) {
	r := rand.New(rand.NewPCG(31, 1))
	values := make([]float64, 1999)
	for i := range values {
		values[i] = math.Exp(r.NormFloat64())
	}
	in := drawn(t, 1.2, values...)
	in.Pivots, in.OwnError, in.Acceleration = NewValues(values), 0.7, 0.05
	p, b := percentile.Find(in), basic.Find(in)
	if b.Lower != 2.4-p.Upper || b.Upper != 2.4-p.Lower || b.LowerError != p.UpperError || b.UpperError != p.LowerError {
		t.Errorf("percentile %+v, basic %+v", p, b)
	}
	for _, d := range []*Definition{&percentile, &basic, &normal, &studentized, &bca} {
		two, low, high := *in, *in, *in
		two.Confidence, low.Bound, high.Bound = level("0.90"), spec.Lower, spec.Upper
		both, lower, upper := d.Find(&two), d.Find(&low), d.Find(&high)
		if lower.Lower != both.Lower || upper.Upper != both.Upper || lower.LowerError != both.LowerError ||
			upper.UpperError != both.UpperError || math.IsNaN(both.Lower) || !(both.LowerError > 0) || !(both.UpperError > 0) {
			t.Errorf("%s: two-sided 0.90 %+v, lower 0.95 %+v, upper 0.95 %+v", d.Name, both, lower, upper)
		}
		for _, v := range []float64{lower.Upper, lower.UpperError, upper.Lower, upper.LowerError} {
			if !math.IsNaN(v) {
				t.Errorf("%s: a one-sided bound has a second limit or its error: %v", d.Name, v)
			}
		}
		if !(both.Lower < both.Upper) {
			t.Errorf("%s: %v to %v", d.Name, both.Lower, both.Upper)
		}
	}
}

// With a = 0 and z₀ = 0 the BCa limits are percentile limits, but for the rounding of the rank: with 1,999 values in
// steps of 1 around the estimate the levels 0.025 and 0.975 of 2,000 are ranks 50 and 1,950.
func TestBCaWithoutCorrection(t *testing.T) {
	in := drawn(t, 1000, upTo(1999)...)
	in.Acceleration = 0
	r, p := bca.Find(in), percentile.Find(in)
	if math.Abs(r.Lower-p.Lower) > 1 || math.Abs(r.Upper-p.Upper) > 1 || parameter(t, r, "z0") != 0 {
		t.Errorf("bca %+v, percentile %+v", r, p)
	}
	if low, high := parameter(t, r, "lower level"), parameter(t, r, "upper level"); math.Abs(low-0.025) > 1e-12 ||
		math.Abs(high-0.975) > 1e-12 {
		t.Errorf("levels %.17g and %.17g", low, high)
	}
}

// Equation (14.10) of Efron and Tibshirani 1993 (cited from memory), worked by hand with z₀ = Φ⁻¹(0.55) = 0.125661 and
// a = 0.05 at 95 %: with z = ∓1.959964 and w = z₀ + z, the level is Φ(z₀ + w/(1 − a·w)). Lower: w = −1.834303,
// 1 − a·w = 1.091715, argument −1.554538, level 0.060028; upper: w = 2.085625, 0.895719, argument 2.454099, 0.992938.
func TestBCaByHand(t *testing.T) {
	values := upTo(10000)
	in := drawn(t, 5500.5, values...)
	in.Acceleration = 0.05
	r := bca.Find(in)
	if z0 := parameter(t, r, "z0"); math.Abs(z0-0.125661) > 5e-7 {
		t.Errorf("z0 %v, want 0.125661", z0)
	}
	if low, high := parameter(t, r, "lower level"), parameter(t, r, "upper level"); math.Abs(low-0.060028) > 2e-6 ||
		math.Abs(high-0.992938) > 2e-6 {
		t.Errorf("levels %.8f and %.8f, want 0.060028 and 0.992938", low, high)
	}
	if r.Lower != 600 || r.Upper != 9931 {
		t.Errorf("limits %v and %v, want ranks ⌊600.34⌋ = 600 and ⌈9930.4⌉ = 9931", r.Lower, r.Upper)
	}
}

// Ties with the estimate count half, and values that differ from it by rounding alone are ties.
func TestTies(t *testing.T) {
	hair := 1 + 4e-16
	values := []float64{0, 0, 0, 1, 1, hair, 2 - hair, 2, 2, 2}
	v := NewValues(values)
	if share, equal := v.below(1, 0.5); share != 0.5 || equal != 4 {
		t.Errorf("share %v with %d equal, want 0.5 with 4", share, equal)
	}
	if share, _ := v.below(1, 0); share != 0.3 {
		t.Errorf("share strictly below %v, want 0.3", share)
	}
	if share, equal := v.below(3, 0.5); share != 1 || equal != 0 {
		t.Errorf("share below 3: %v with %d equal", share, equal)
	}
}

// Every refusal has its reason, and then no limit.
func TestRefusals(t *testing.T) {
	spread := upTo(999)
	same := slices.Repeat([]float64{4}, 999)
	with := func(change func(in *Input), values ...float64) *Input {
		in := drawn(t, 500, values...)
		in.Pivots, in.OwnError, in.Acceleration = NewValues(upTo(999)), 1, 0
		change(in)
		return in
	}
	nothing := func(*Input) {}
	observed := func(x ...float64) *Input { return input(t, 0, x...) }
	dependentRows := input(t, 0, 1, 2)
	dependentRows.Sample = nil
	groups := func(as string, first, second []float64) *Input {
		in := input(t, 0)
		in.Sample.As, in.Sample.Groups = as, [2][]float64{first, second}
		return in
	}
	tests := []struct {
		method *Definition
		in     *Input
		reason string
	}{
		{&normal, with(nothing, 1), tooFewResamples},
		{&normal, with(nothing, same...), "all resample values are equal"},
		{&studentized, with(func(in *Input) { in.OwnError = math.NaN() }, spread...),
			"the sample gives no standard error for this statistic"},
		{&studentized, with(func(in *Input) { in.OwnError = 0 }, spread...), "the standard error of the estimate is 0"},
		{&studentized, with(func(in *Input) { in.Pivots = NewValues(upTo(38)) }, spread...), tooFewResamples},
		{&bca, with(nothing, 1), tooFewResamples},
		{&bca, with(func(in *Input) { in.Acceleration = math.NaN() }, spread...),
			"the acceleration is not defined: leaving out a unit never changes the estimate, or gives no estimate"},
		{&bca, with(func(in *Input) { in.Estimate = 0 }, spread...),
			"all resample values lie on one side of the estimate, so the bias correction is not defined"},
		{&bca, with(func(in *Input) { in.Estimate = 1000 }, spread...),
			"all resample values lie on one side of the estimate, so the bias correction is not defined"},
		{&bca, with(func(in *Input) { in.Acceleration = 0.6 }, spread...),
			"the correction is not defined at this level: 1 − a(z₀ + z) is not positive"},
		{&bca, with(func(in *Input) { in.Estimate = 950.5 }, spread...),
			"the corrected level lies beyond the resample values; more resamples are needed"},
		{&student, dependentRows, dependent},
		{&chiSquare, dependentRows, dependent},
		{&clopperPearson, dependentRows, dependent},
		{&orderStatistic, dependentRows, dependent},
		{&student, observed(3), "it needs two observations"},
		{&chiSquare, observed(3), "it needs two observations"},
		{&student, groups("difference", []float64{1}, []float64{1, 2}), "it needs two observations in each group"},
		{&student, groups("ratio", []float64{1, 3}, []float64{1, 2}), "it has no form for the ratio of two groups"},
		{&student, groups("difference", []float64{1, 1}, []float64{2, 2}), "the observations have no spread"},
	}
	for _, tt := range tests {
		r := tt.method.Find(tt.in)
		if r.Reason != tt.reason || !math.IsNaN(r.Lower) || !math.IsNaN(r.Upper) || !math.IsNaN(r.LowerError) {
			t.Errorf("%s: %+v, want reason %q", tt.method.Name, r, tt.reason)
		}
	}
}

// Equal observations have no spread, whatever their mean rounds to.
func TestEqualObservations(t *testing.T) {
	r := rand.New(rand.NewPCG(32, 1))
	for range 5000 {
		x := slices.Repeat([]float64{100 * r.NormFloat64()}, 2+r.IntN(60))
		for _, d := range []*Definition{&student, &chiSquare} {
			if got := d.Find(input(t, 0, x...)); got.Reason != "the observations have no spread" {
				t.Fatalf("%s of %d times %v: %+v", d.Name, len(x), x[0], got)
			}
		}
	}
}

// A limit outside the possible values is cut at their edge and says so; an interval wholly outside is refused, and so
// is a limit that cannot be represented.
func TestPossibleValues(t *testing.T) {
	in := drawn(t, 0.9, upTo(999)...)
	for i := range in.Values.sorted {
		in.Values.sorted[i] = in.Values.sorted[i] / 1000 // 0.001 to 0.999
	}
	in.Least, in.Most = -1, 1
	r := basic.Find(in) // 1.8 − 0.975 to 1.8 − 0.025
	if math.Abs(r.Lower-0.825) > 1e-12 || r.Upper != 1 || !r.Cut || r.Reason != "" {
		t.Errorf("%+v, want 0.825 to 1, cut", r)
	}
	in.Bound = spec.Lower
	if r := basic.Find(in); r.Cut || math.IsNaN(r.Lower) {
		t.Errorf("%+v: nothing to cut in a lower bound", r)
	}
	in.Bound, in.Estimate = spec.TwoSided, 2.5
	if r := basic.Find(in); r.Reason != "the limit lies outside the possible values of the statistic" || r.Cut {
		t.Errorf("%+v, want a refusal", r)
	}
	huge := drawn(t, math.MaxFloat64, upTo(999)...)
	if r := basic.Find(huge); r.Reason != "the limit is too large to be represented" || !math.IsNaN(r.Upper) {
		t.Errorf("%+v, want a refusal", r)
	}
}

// Where a method applies is part of its entry; companions are the classical ones.
func TestRegistry(t *testing.T) {
	var names, classical []string
	for _, d := range All() {
		names = append(names, d.Name)
		if d.Classical {
			classical = append(classical, d.Name)
		}
		if d.Summary == "" || d.Formula == "" || d.Where == "" || d.Limits == "" || len(d.Sources) == 0 {
			t.Errorf("%s lacks a text", d.Name)
		}
		if Lookup(d.Name) != d {
			t.Errorf("%s is not found by its name", d.Name)
		}
	}
	if want := []string{"percentile", "basic", "normal", "studentized", "bca", "order statistic", "t", "chi-square",
		"Clopper-Pearson"}; !slices.Equal(names, want) {
		t.Errorf("methods %q, want %q", names, want)
	}
	if want := []string{"order statistic", "t", "chi-square", "Clopper-Pearson"}; !slices.Equal(classical, want) {
		t.Errorf("companions %q, want %q", classical, want)
	}
}
