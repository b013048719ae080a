package report

import (
	"math"
	"math/big"
	"strconv"
	"testing"

	"lotproof/runner/record"
	"lotproof/spec"
)

// The rule is that of JCGM 101:2008, 7.9: the numerical tolerance is half a unit of the last digit, and twice the
// Monte-Carlo standard error must not exceed it. The expected decimals are worked by hand: with two decimals half a
// unit is 0.005, so an error of 0.0025 is the largest that supports them.
func TestDigitsFollowMonteCarloError(t *testing.T) {
	tests := []struct {
		most int
		err  float64
		want int
	}{
		{3, 0.00025, 3},
		{3, 0.000250001, 2},
		{2, 0.0025, 2},
		{2, 0.00251, 1},
		{2, 0.025, 1},
		{2, 0.0251, 0},
		{2, 40, 0}, // never a negative number of decimals
		{0, 0.3, 0},
		{5, 0, 5},
		{9, 2.5e-10, 9},
		{9, 2.6e-10, 8},
	}
	for _, tt := range tests {
		if got := supported(tt.most, &tt.err); got != tt.want {
			t.Errorf("at most %d decimals, error %g: %d, want %d", tt.most, tt.err, got, tt.want)
		}
	}
	if got := supported(4, num(0.00001), nil, num(0.002)); got != 2 {
		t.Errorf("the larger error must rule: %d decimals, want 2", got)
	}
	if got := supported(4, nil, nil); got != 4 {
		t.Errorf("a limit without Monte-Carlo error: %d decimals, want 4", got)
	}
}

func TestFixedText(t *testing.T) {
	tests := []struct {
		v        float64
		decimals int
		want     string
	}{
		{1.25, 2, "1.25"},
		{-0.172, 2, "−0.17"},
		{-0.001, 2, "0.00"}, // no sign before a zero
		{-0.001, 3, "−0.001"},
		{1.545, 2, "1.55"}, // 1.54499999999999992895 in binary; a spreadsheet shows 1.55
		{-2.675, 2, "−2.68"},
		{1.54499999999999, 2, "1.54"}, // 15 digits, so it was judged as less than the half
		{1.35 - 1.15, 1, "0.2"},
		{0, 0, "0"},
		{1234567.5, 1, "1234567.5"},
		{1e-5, 6, "0.000010"},
		{999999999999999, 0, "999999999999999"},
		{1e21, 0, "1·10²¹"},
		{-2.5e-20, 22, "−2.5·10⁻²⁰"}, // zeros of a mantissa are left out
		{1.25e300, 0, "1.25·10³⁰⁰"},
		{4.9e-324, 326, "4.94·10⁻³²⁴"}, // the smallest number is 4.940656…·10⁻³²⁴ (IEEE 754)
	}
	for _, tt := range tests {
		got := fixedText(tt.v, tt.decimals)
		if got != tt.want {
			t.Errorf("fixedText(%g, %d) = %q, want %q", tt.v, tt.decimals, got, tt.want)
		}
	}
}

func TestSignificant(t *testing.T) {
	tests := []struct {
		v      *float64
		digits int
		want   string
	}{
		{nil, 3, "none"},
		{num(38), 3, "38"},
		{num(20000), 3, "20000"}, // whole numbers are counts and stay whole
		{num(0.52), 3, "0.52"},
		{num(0.0132345), 3, "0.0132"},
		{num(-1234.56), 4, "−1235"},
		{num(0.99996), 4, "1"},
		{num(0), 4, "0"},
	}
	for _, tt := range tests {
		if got := significant(tt.v, tt.digits); got != tt.want {
			t.Errorf("%v with %d digits = %q, want %q", tt.v, tt.digits, got, tt.want)
		}
	}
}

func TestConfidenceText(t *testing.T) {
	for level, want := range map[string]string{"0.95": "95 %", "0.9": "90 %", "0.975": "97.5 %", "0.9973": "99.73 %",
		"0.99999": "99.999 %", "9.5e-1": "95 %", "0.10": "10 %", "0.950": "95 %"} {
		if got := confidenceText(level); got != want {
			t.Errorf("confidence %s is written %q, want %q", level, got, want)
		}
	}
}

// Ties: 12.25 and 12.35 to one decimal are the examples of ISO 80000-1:2009, annex B (from memory), for the rule of the
// even digit and for the rule of the larger magnitude; the others follow from the definition.
func TestRoundDecimal(t *testing.T) {
	tests := []struct {
		v      string
		places int
		ties   string
		want   string
	}{
		{"12.25", 1, "even", "12.2"},
		{"12.25", 1, "away", "12.3"},
		{"12.35", 1, "even", "12.4"},
		{"12.35", 1, "away", "12.4"},
		{"-12.25", 1, "even", "-12.2"},
		{"-12.25", 1, "away", "-12.3"},
		{"12.250001", 1, "even", "12.3"},
		{"12.249999", 1, "away", "12.2"},
		{"0.5", 0, "even", "0"},
		{"1.5", 0, "even", "2"},
		{"-0.5", 0, "away", "-1"},
		{"-1.5", 0, "even", "-2"},
	}
	for _, tt := range tests {
		v, _ := new(big.Rat).SetString(tt.v)
		want, _ := new(big.Rat).SetString(tt.want)
		if got := roundDecimal(v, tt.places, tt.ties); got.Cmp(want) != 0 {
			t.Errorf("%s to %d decimals, ties %s: %s, want %s", tt.v, tt.places, tt.ties, got.FloatString(6), tt.want)
		}
	}
}

// judged makes a statistic of at most three decimals with one criterion and the interval that decided on it.
func judged(criterion, limit string, bound, err float64, compared, verdict string, estimate float64) (*record.Statistic,
	*record.Accept) {
	i := record.Interval{Method: "percentile", Requested: "percentile", Confidence: "0.95", Decides: true}
	if criterion == atLeast {
		i.Bound, i.Lower, i.MonteCarloError.Lower = spec.Lower, &bound, &err
	} else {
		i.Bound, i.Upper, i.MonteCarloError.Upper = spec.Upper, &bound, &err
	}
	s := &record.Statistic{ID: "m", Label: "Median", Unit: "N", Decimals: 3, Estimate: &estimate,
		Intervals: []record.Interval{i},
		Accept: []record.Accept{{Criterion: criterion, Limit: limit, Method: "percentile", Confidence: "0.95", Bound: &bound,
			Compared: compared, Verdict: verdict}}}
	return s, &s.Accept[0]
}

// A reader who compares the printed bound with the criterion must come to the verdict. The error of 0.02 supports one
// decimal of the bound only; more are printed where one would put it on the wrong side. The estimate, which no Monte-Carlo
// error touches, has the three decimals of the plan, or more.
func TestPrintedBoundNeverContradictsVerdict(t *testing.T) {
	tests := []struct {
		name, criterion, limit string
		bound                  float64
		compared, verdict      string
		estimate               float64
		want, wantEstimate     string
	}{
		{"far above", atLeast, "1.20", 1.2731, "1.2731", "met", 1.41, "1.3", "1.410"},
		{"just below", atLeast, "1.20", 1.1961, "1.1961", "not shown", 1.41, "1.196", "1.410"},
		{"below by a hair", atLeast, "1.20", 1.19999999, "1.19999999", "not shown", 1.41, "1.19999999", "1.41000000"},
		{"just above", atLeast, "1.20", 1.2400, "1.24", "met", 1.41, "1.24", "1.410"},
		{"above, one decimal says less", atLeast, "1.24", 1.2449, "1.2449", "met", 1.41, "1.245", "1.410"},
		{"equal", atLeast, "1.20", 1.2, "1.2", "met", 1.41, "1.2", "1.410"},
		{"binary dust", atLeast, "0.2", 1.35 - 1.15, "0.2", "met", 0.4, "0.2", "0.400"},
		{"upper, just above", atMost, "0.10", 0.1004, "0.1004", "not shown", 0.06, "0.1004", "0.0600"},
		{"upper, estimate too", atMost, "0.10", 0.153, "0.153", "not met", 0.1003, "0.1530", "0.1003"},
		{"upper, below", atMost, "0.16", 0.153, "0.153", "met", 0.1, "0.15", "0.100"},
		{"negative zero", atLeast, "0", -0.0001, "-0.0001", "not shown", 0.2, "−0.0001", "0.2000"},
		{"rounded up and met", atLeast, "1.20", 1.1961, "1.20", "met", 1.41, "1.2", "1.410"},
		{"rounded down and not shown", atLeast, "1.20", 1.1949, "1.19", "not shown", 1.41, "1.19", "1.410"},
		{"rounded, upper", atMost, "0.1", 0.1499, "0.1", "met", 0.05, "0.1", "0.050"},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			s, a := judged(tt.criterion, tt.limit, tt.bound, 0.02, tt.compared, tt.verdict, tt.estimate)
			if got := boundFigure(s, a); got != tt.want {
				t.Errorf("bound %.17g is printed %s, want %s", tt.bound, got, tt.want)
			}
			if got := estimateFigure(s); got != tt.wantEstimate {
				t.Errorf("estimate %.17g is printed %s, want %s", tt.estimate, got, tt.wantEstimate)
			}
		})
	}
}

// The same as a law, over bounds and estimates on a grid round the criterion that is finer than what is printed.
func TestPrintedFiguresOnGrid(t *testing.T) {
	limit := big.NewRat(6, 5)
	for k := -3000; k <= 3000; k += 7 {
		bound := 1.2 + float64(k)*1e-6
		for _, estimate := range []float64{bound + 0.1, bound + 3e-4} {
			verdict := "met"
			if judgedDecimal(bound).Cmp(limit) < 0 {
				verdict = "not met"
				if judgedDecimal(estimate).Cmp(limit) >= 0 {
					verdict = "not shown"
				}
			}
			s, a := judged(atLeast, "1.20", bound, 0.03, judgedDecimal(bound).FloatString(20), verdict, estimate)
			printed, _ := new(big.Rat).SetString(boundFigure(s, a))
			printedEstimate, _ := new(big.Rat).SetString(estimateFigure(s))
			if (printed.Cmp(limit) >= 0) != (verdict == "met") {
				t.Fatalf("bound %.17g is printed %s against 1.20, but the criterion is %s", bound, boundFigure(s, a), verdict)
			}
			if verdict != "met" && (printedEstimate.Cmp(limit) >= 0) != (verdict == "not shown") {
				t.Fatalf("estimate %.17g is printed %s against 1.20, but the criterion is %s", estimate, estimateFigure(s), verdict)
			}
		}
	}
}

// Without a statement of the plan, the largest figure has four significant digits and the standard error two.
func TestMostDecimals(t *testing.T) {
	tests := []struct {
		estimate, standardError float64
		want                    int
	}{
		{1.2345, 0.1, 3},
		{123.45, 3, 1},
		{123456, 3, 1},
		{0.00123, 0.0004, 6},
		{1000.123, 0.012, 3},
		{-56.7, 8, 2},
		{0, 0, 3},
		{0, 0.031, 3},
	}
	for _, tt := range tests {
		s := &record.Statistic{Decimals: -1, Estimate: &tt.estimate, StandardError: &tt.standardError}
		if got := mostDecimals(s); got != tt.want {
			t.Errorf("estimate %g, standard error %g: %d decimals, want %d", tt.estimate, tt.standardError, got, tt.want)
		}
	}
	if got := mostDecimals(&record.Statistic{Decimals: 1, Estimate: num(math.Pi)}); got != 1 {
		t.Errorf("the plan says 1 decimal, %d are taken", got)
	}
}

// The relative Monte-Carlo error of a standard error of B normal resample values is 1/√(2B): 0.005 for 20 000. Twice
// that is 0.000213 of 0.0213, more than half a unit of the third digit and less than half a unit of the second.
func TestStandardErrorAndBias(t *testing.T) {
	s := &record.Statistic{Decimals: 3, Estimate: num(1.31), StandardError: num(0.02134), Bias: num(0.00112),
		Resamples: 20000}
	if got := standardErrorFigure(s); got != "0.021" {
		t.Errorf("standard error %s, want 0.021", got)
	}
	// Its own error is 0.02134/√20000 = 0.00015; twice that is within half of 0.001.
	if got := biasFigure(s); got != "0.001" {
		t.Errorf("bias %s, want 0.001", got)
	}
	s.Resamples = 100 // relative error 7 %: one digit
	if got := standardErrorFigure(s); got != "0.02" {
		t.Errorf("standard error from 100 resamples %s, want 0.02", got)
	}
	if got := standardErrorFigure(&record.Statistic{}) + biasFigure(&record.Statistic{}); got != "nonenone" {
		t.Errorf("figures that are not there are written %q", got)
	}
}

// Limits whose Monte-Carlo errors support few decimals must still read as lying on their sides of the estimate and apart.
func TestPrintedLimitsStayInOrder(t *testing.T) {
	for _, tt := range []struct{ estimate, lower, upper, err float64 }{
		{0.00009, 0.0000637, 0.000145, 0.000004}, {5.0010, 4.9966, 5.0054, 0.0004}, {1.38, 1.36, 1.43, 0.02},
	} {
		s := &record.Statistic{Decimals: 8, Estimate: &tt.estimate}
		i := &record.Interval{Bound: spec.TwoSided, Lower: &tt.lower, Upper: &tt.upper,
			MonteCarloError: record.Limits{Lower: &tt.err, Upper: &tt.err}}
		lower, upper := limitFigures(s, i)
		read := func(text string) float64 {
			v, err := strconv.ParseFloat(text, 64)
			if err != nil {
				t.Fatal(err)
			}
			return v
		}
		if !(read(lower) <= tt.estimate && tt.estimate <= read(upper) && read(lower) < read(upper)) {
			t.Errorf("estimate %v, limits %v and %v, are printed as %s to %s", tt.estimate, tt.lower, tt.upper, lower, upper)
		}
	}
}
