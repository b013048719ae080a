package runner

import (
	"math"
	"strings"
	"testing"

	"lotproof/runner/internal/reference"
)

// The standard error that a studentized interval divides by, on the sample itself, against figures from outside.
func TestStandardErrorOfEstimate(t *testing.T) {
	number := func(id, name string) float64 { return reference.Find(t, id).Expected[name] }
	mouse := setups["mouse-treatment-mean"]
	with := func(statistic string) setup {
		s := mouse
		s.statistic = statistic
		return s
	}
	rail, law := setups["rail-cluster"], setups["law-cor"]

	// A mean of strata of 7 and 9 with the weights of their sizes: s² = Σ (n_h/n)²·s_h²/n_h. Cochran WG, Sampling
	// Techniques, 3rd edition, Wiley 1977, equation (5.13) without the finite population term (cited from memory).
	// s_h/√n_h of the two strata: the first is a case, the second follows from the standard error of the difference.
	treatment, difference := number("mouse-treatment-jmean", "se"), number("mouse-welch", "se")
	control := math.Sqrt(difference*difference - treatment*treatment)
	stratified := math.Hypot(7*treatment, 9*control) / 16

	tests := []struct {
		what string
		s    setup
		unit string // the value of the key resampling, if not simply the unit
		want float64
	}{
		{"mean, s/√n", mouse, "", treatment},
		{"difference of groups of 7 and 9",
			with("statistic: mean, of: days, compare: {by: group, of: [treatment, control], as: " +
				"difference}"), "", difference},
		{"mean over two strata", with("statistic: mean, of: days"), "row, strata: group", stratified},
		// Six clusters of three: the bootstrap standard error has divisor 6, this one 5.
		{"mean of whole clusters", rail, "rail", number("rail-cluster-boot-se", "se") * math.Sqrt(6.0/5)},
		{"correlation", law, "", number("law-inflcor", "se") * math.Sqrt(15.0/14)},
		{"median of 7, Maritz and Jarrett", with(setups["mouse-treatment-median"].statistic), "",
			number("mouse-treatment-median-exact-boot", "se")},
	}
	for _, tt := range tests {
		s := tt.s
		s.intervals = "studentized"
		if tt.unit != "" {
			s.unit = tt.unit
		}
		in := method(t, s.run(t, 999, 1), "studentized")
		if got := figure(t, in, "standard error of the estimate"); math.Abs(got/tt.want-1) > 1e-8 {
			t.Errorf("%s: standard error %.12g, want %.12g", tt.what, got, tt.want)
		}
	}
}

// With groups of 7 and 9 the acceleration of a difference of means is ⅙ Σ_h Σ l³/n_h³ / (Σ_h Σ l²/n_h²)^(3/2), where l
// is the deviation from the mean of the group, with its sign turned in the second one. Davison and Hinkley 1997,
// section 5.3.2, cited from memory; written out here for the data.
func TestAccelerationOfTwoGroups(t *testing.T) {
	var squares, cubes float64
	for group, sign := range map[string]float64{"treatment": 1, "control": -1} {
		x := reference.Data(t, "mouse.csv").Where("group", group).Numbers("days")
		n, mean := float64(len(x)), 0.0
		for _, v := range x {
			mean += v / n
		}
		for _, v := range x {
			l := sign * (v - mean) / n
			squares += l * l
			cubes += l * l * l
		}
	}
	want := cubes / (6 * squares * math.Sqrt(squares))
	s := setups["mouse-treatment-mean"]
	s.statistic = "statistic: mean, of: days, compare: {by: group, of: [treatment, control], as: difference}"
	s.intervals = "bca"
	if got := figure(t, method(t, s.run(t, 999, 1), "bca"), "a"); math.Abs(got-want) > 1e-12 {
		t.Errorf("acceleration %.15g, want %.15g", got, want)
	}
}

// Nested drawing of a balanced layout has a closed form for the variance of the mean: with a batches of b casks of c
// readings,
//
//	var* = ( mean_i (ȳ_i−ȳ)² + mean_i ( mean_j (ȳ_ij−ȳ_i)² + mean_j mean_k (y_ijk−ȳ_ij)²/c )/b ) / a
//
// which follows from the law of total variance, level by level. What is drawn decides which terms there are. The
// standard deviation of B values has a standard error of about 1/√(2B); five of them are allowed.
func TestNestedStandardError(t *testing.T) {
	d := reference.Data(t, "pastes.csv")
	x, batch, cask := d.Numbers("strength"), d.Texts("batch"), d.Texts("cask")
	mean := func(key func(i int) string) func(i int) float64 {
		sum, n := map[string]float64{}, map[string]float64{}
		for i, v := range x {
			sum[key(i)] += v
			n[key(i)]++
		}
		return func(i int) float64 { return sum[key(i)] / n[key(i)] }
	}
	all := mean(func(int) string { return "" })
	ofBatch := mean(func(i int) string { return batch[i] })
	ofCask := mean(func(i int) string { return batch[i] + " " + cask[i] })
	const a, b, c = 10, 3, 2
	var between, casks, readings float64 // mean squares about the means one level up; every row counts alike
	for i, v := range x {
		n := float64(len(x))
		between += (ofBatch(i) - all(i)) * (ofBatch(i) - all(i)) / n
		casks += (ofCask(i) - ofBatch(i)) * (ofCask(i) - ofBatch(i)) / n
		readings += (v - ofCask(i)) * (v - ofCask(i)) / n
	}
	const resamples = 40000
	columns := "batch: {type: category}, cask: {type: category}, strength: {type: number}"
	for _, tt := range []struct {
		unit     string
		variance float64
	}{
		{"batch", between / a},
		{"[batch, cask]", (between + casks/b) / a},
		{"[batch, cask, row]", (between + (casks+readings/c)/b) / a},
		{"[batch, row]", (between + (casks+readings)/(b*c)) / a},
		{"row", (between + casks + readings) / (a * b * c)},
		{"row, strata: batch", (casks + readings) / (a * b * c)},
	} {
		s := setup{"pastes.csv", columns, "", tt.unit, "statistic: mean, of: strength", "percentile"}
		got, want := *s.run(t, resamples, 3).StandardError, math.Sqrt(tt.variance)
		if math.Abs(got/want-1) > 5/math.Sqrt(2*resamples) {
			t.Errorf("unit %s: standard error %.5f, want %.5f", strings.TrimSpace(tt.unit), got, want)
		}
	}
}
