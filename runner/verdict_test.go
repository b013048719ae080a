package runner

import (
	"strconv"
	"testing"

	"lotproof/runner/record"
	"lotproof/spec"
)

func num(t *testing.T, text string) spec.Number {
	t.Helper()
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return spec.Number{Text: text, Value: v}
}

// The truth table of the comparison. Rounding and absolute method: ASTM E29, Standard Practice for Using Significant
// Digits in Test Data to Determine Conformance with Specifications (the rule as stated there; the numbers are ours).
// Rounding half to even and half away from zero: ISO 80000-1:2009, annex B, rules A and B.
func TestJudge(t *testing.T) {
	absolute := spec.Rounding{Rule: "absolute"}
	even := spec.Rounding{Rule: "rounded", Ties: "even"}
	away := spec.Rounding{Rule: "rounded", Ties: "away"}
	tests := []struct {
		criterion       string
		limit           string
		bound, estimate float64
		rule            spec.Rounding
		verdict         string
		compared        string
	}{
		// at least, absolute: every order of limit, bound and estimate
		{lowerAtLeast, "1.20", 1.25, 1.31, absolute, Met, "1.25"},
		{lowerAtLeast, "1.20", 1.20, 1.31, absolute, Met, "1.2"},
		{lowerAtLeast, "1.20", 1.20, 1.20, absolute, Met, "1.2"},
		{lowerAtLeast, "1.20", 1.19, 1.31, absolute, NotShown, "1.19"},
		{lowerAtLeast, "1.20", 1.19, 1.20, absolute, NotShown, "1.19"},
		{lowerAtLeast, "1.20", 1.19, 1.1999, absolute, NotMet, "1.19"},
		{lowerAtLeast, "1.20", 1.10, 1.15, absolute, NotMet, "1.1"},
		{lowerAtLeast, "1.20", 1.1999999, 1.3, absolute, NotShown, "1.1999999"},
		{lowerAtLeast, "1.20", 1.195, 1.3, absolute, NotShown, "1.195"},
		{lowerAtLeast, "1.20", 1.25, 1.1, absolute, NotShown, "1.25"}, // a bound past its estimate shows nothing
		{upperAtMost, "0.22", 0.20, 0.24, absolute, NotShown, "0.2"},
		// at most, absolute
		{upperAtMost, "0.25", 0.20, 0.18, absolute, Met, "0.2"},
		{upperAtMost, "0.25", 0.25, 0.18, absolute, Met, "0.25"},
		{upperAtMost, "0.25", 0.25, 0.25, absolute, Met, "0.25"},
		{upperAtMost, "0.25", 0.26, 0.18, absolute, NotShown, "0.26"},
		{upperAtMost, "0.25", 0.26, 0.25, absolute, NotShown, "0.26"},
		{upperAtMost, "0.25", 0.26, 0.2501, absolute, NotMet, "0.26"},
		{upperAtMost, "0.25", 0.30, 0.28, absolute, NotMet, "0.3"},
		{upperAtMost, "0.25", 0.2500001, 0.2, absolute, NotShown, "0.2500001"},
		// the boundary in decimal, not in binary arithmetic
		{upperAtMost, "0.3", 0.1 + 0.2, 0.1, absolute, Met, "0.3"},
		{lowerAtLeast, "0.2", 1.35 - 1.15, 0.3, absolute, Met, "0.2"},
		{lowerAtLeast, "0.15", 1.35 - 1.20, 0.3, absolute, Met, "0.15"},
		{lowerAtLeast, "1.1", 1.1, 1.1, absolute, Met, "1.1"},
		{upperAtMost, "4.35", 4.35, 4.35, absolute, Met, "4.35"},
		{upperAtMost, "1e-3", 0.001, 0.0005, absolute, Met, "0.001"},
		{upperAtMost, "1e-3", 0.0010001, 0.0005, absolute, NotShown, "0.0010001"},
		{lowerAtLeast, "1000000", 1e6, 2e6, absolute, Met, "1000000"},
		{lowerAtLeast, "100", 99.99999999999999, 101, absolute, Met, "100"}, // 15 digits are compared
		{lowerAtLeast, "100", 99.9999999999999, 101, absolute, NotShown, "99.9999999999999"},
		// negative limits and zero
		{lowerAtLeast, "-0.15", -0.10, 0.01, absolute, Met, "-0.1"},
		{lowerAtLeast, "-0.15", -0.15, 0.01, absolute, Met, "-0.15"},
		{lowerAtLeast, "-0.15", -0.16, 0.01, absolute, NotShown, "-0.16"},
		{lowerAtLeast, "-0.15", -0.20, -0.16, absolute, NotMet, "-0.2"},
		{upperAtMost, "-1", -1.5, -2, absolute, Met, "-1.5"},
		{upperAtMost, "-1", -0.5, -2, absolute, NotShown, "-0.5"},
		{upperAtMost, "-1", -0.5, -0.9, absolute, NotMet, "-0.5"},
		{upperAtMost, "0", 0, -1, absolute, Met, "0"},
		{lowerAtLeast, "0", -1e-9, 1, absolute, NotShown, "-0.000000001"},
		// rounded: to the decimals of the limit as written
		{lowerAtLeast, "1.20", 1.195, 1.3, even, Met, "1.20"}, // 1.195 to even: 1.20
		{lowerAtLeast, "1.20", 1.195, 1.3, away, Met, "1.20"}, // and away: 1.20
		{lowerAtLeast, "1.20", 1.1949, 1.3, even, NotShown, "1.19"},
		{lowerAtLeast, "1.20", 1.1951, 1.3, even, Met, "1.20"},
		{lowerAtLeast, "1.2", 1.15, 1.3, even, Met, "1.2"},      // 1.15 to even: 1.2
		{lowerAtLeast, "1.3", 1.25, 1.4, even, NotShown, "1.2"}, // 1.25 to even: 1.2
		{lowerAtLeast, "1.3", 1.25, 1.4, away, Met, "1.3"},      // 1.25 away: 1.3
		{upperAtMost, "1.2", 1.25, 1.1, even, Met, "1.2"},
		{upperAtMost, "1.2", 1.25, 1.1, away, NotShown, "1.3"},
		{upperAtMost, "0.25", 0.254, 0.2, even, Met, "0.25"},
		{upperAtMost, "0.25", 0.255, 0.2, even, NotShown, "0.26"}, // 0.255 to even: 0.26
		{upperAtMost, "0.25", 0.245, 0.2, even, Met, "0.24"},
		{upperAtMost, "0.25", 0.2549999, 0.2, away, Met, "0.25"},
		{upperAtMost, "2", 2.5, 1, even, Met, "2"},
		{upperAtMost, "2", 2.5, 1, away, NotShown, "3"},
		{upperAtMost, "3", 3.5, 1, even, NotShown, "4"},
		{lowerAtLeast, "2", 1.5, 3, even, Met, "2"},
		{lowerAtLeast, "3", 2.5, 4, even, NotShown, "2"},
		{lowerAtLeast, "3", 2.5, 2.6, even, NotShown, "2"}, // the estimate is rounded too: 2.6 becomes 3
		{lowerAtLeast, "3", 2.5, 2.4, even, NotMet, "2"},
		{lowerAtLeast, "-1.2", -1.25, 0, even, Met, "-1.2"},
		{lowerAtLeast, "-1.2", -1.25, 0, away, NotShown, "-1.3"},
		{upperAtMost, "-1.3", -1.25, -2, away, Met, "-1.3"},
		{upperAtMost, "-1.3", -1.25, -2, even, NotShown, "-1.2"},
		{lowerAtLeast, "0", -0.4, 1, even, Met, "0"},
		{lowerAtLeast, "0.0", -0.04, 1, even, Met, "0.0"},
		{lowerAtLeast, "0.00", -0.04, 1, even, NotShown, "-0.04"},
		// trailing zeros of the limit decide how fine the rounding is
		{upperAtMost, "5", 5.4, 4, even, Met, "5"},
		{upperAtMost, "5.0", 5.4, 4, even, NotShown, "5.4"},
		{upperAtMost, "5.0", 5.04, 4, even, Met, "5.0"},
		{upperAtMost, "5.00", 5.04, 4, even, NotShown, "5.04"},
	}
	if len(tests) < 60 {
		t.Fatalf("%d rows", len(tests))
	}
	for i, tt := range tests {
		verdict, compared := judge(tt.criterion, num(t, tt.limit), tt.bound, tt.estimate, tt.rule)
		if verdict != tt.verdict || compared != tt.compared {
			t.Errorf("row %d: %s %s, bound %v, estimate %v, %s %s: %s with %s, want %s with "+
				"%s", i, tt.criterion, tt.limit,
				tt.bound, tt.estimate, tt.rule.Rule, tt.rule.Ties, verdict, compared, tt.verdict, tt.compared)
		}
	}
}

// Which interval decides, and what is said when none does.
func TestDecide(t *testing.T) {
	level := spec.Number{Text: "0.95", Value: 0.95}
	one, two := 1.0, 2.0
	plan := func(companion string) *spec.Statistic {
		limit := spec.Number{Text: "0.5", Value: 0.5}
		return &spec.Statistic{Confidence: []spec.Number{level}, Companion: companion, Accept: spec.Accept{LowerAtLeast: &limit}}
	}
	rule := &spec.Rounding{Rule: "absolute"}
	good := record.Interval{Method: "bca", Confidence: "0.95", Lower: &one}
	none := record.Interval{Method: "bca", Confidence: "0.95", Reason: "of a reason"}
	other := record.Interval{Method: "order statistic", Confidence: "0.95", Lower: &one, Companion: true}
	otherNone := record.Interval{Method: "order statistic", Confidence: "0.95", Reason: "another", Companion: true}
	stop := []record.Advisory{{Code: "few units", Severity: "stop"}}
	caution := []record.Advisory{{Code: "few units", Severity: "caution"}}
	tests := []struct {
		name       string
		companion  string
		intervals  []record.Interval
		advisories []record.Advisory
		method     string
		verdict    string
		why        string
	}{
		{"plain", "shown", []record.Interval{good, other}, nil, "bca", Met, "the bound is on the right side of the " +
			"criterion"},
		{"caution decides all the " +
			"same", "shown", []record.Interval{good}, caution, "bca", Met, "the bound is on the right side of the " +
			"criterion"},
		{"stopped", "shown", []record.Interval{good, other}, stop, "", NotShown, "stopped by few units"},
		{"stopped, companion decides", "decides", []record.Interval{good, other}, stop, "order statistic", Met,
			"the bound is on the right side of the criterion; decided by the companion, as the plan says: stopped " +
				"by few units"},
		{"rows that are not independent", "decides", []record.Interval{good, other},
			[]record.Advisory{{Code: "pseudo-replication", Severity: "stop"}}, "", NotShown, "stopped by pseudo-replication"},
		{"rows that are not independent, and no limit", "decides", []record.Interval{none, other},
			[]record.Advisory{{Code: "pseudo-replication", Severity: "stop"}}, "", NotShown, "stopped by pseudo-replication"},
		{"no limit", "shown", []record.Interval{none, other}, nil, "", NotShown, "no bca limit: of a reason"},
		{"no limit, companion decides", "decides", []record.Interval{none, other}, nil, "order statistic", Met,
			"the bound is on the right side of the criterion; decided by the companion, as the plan says: no bca " +
				"limit: of a reason"},
		{"neither", "decides", []record.Interval{none, otherNone}, nil, "", NotShown,
			"no bca limit: of a reason; no order statistic limit: another"},
	}
	for _, tt := range tests {
		s := record.Statistic{Estimate: &two, Intervals: tt.intervals, Advisories: tt.advisories}
		accept(plan(tt.companion), rule, &s)
		got := s.Accept[0]
		if got.Method != tt.method || got.Verdict != tt.verdict || got.Why != tt.why {
			t.Errorf("%s: %s by %q, %s", tt.name, got.Verdict, got.Method, got.Why)
		}
	}
	s := record.Statistic{EstimateReason: "too few observations"}
	accept(plan("shown"), rule, &s)
	if got := s.Accept[0]; got.Verdict != NotShown || got.Why != "there is no estimate: too few observations" {
		t.Errorf("no estimate: %s, %s", got.Verdict, got.Why)
	}
}

// The study takes the worst of its verdicts.
func TestWorst(t *testing.T) {
	study := func(verdicts ...string) []record.Statistic {
		var s record.Statistic
		for _, v := range verdicts {
			s.Accept = append(s.Accept, record.Accept{Verdict: v})
		}
		return []record.Statistic{{}, s}
	}
	for _, tt := range []struct {
		verdicts []string
		want     string
	}{
		{nil, NoCriterion}, {[]string{Met}, Met}, {[]string{Met, NotShown}, NotShown}, {[]string{NotShown, NotMet, Met}, NotMet},
	} {
		if got := worst(study(tt.verdicts...)); got != tt.want {
			t.Errorf("%v: %s, want %s", tt.verdicts, got, tt.want)
		}
	}
}
