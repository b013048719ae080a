package report

import (
	"strings"
	"testing"

	"lotproof/runner/record"
	"lotproof/spec"
)

// A decisionCase is one row of TestDecisionSentence: what the record holds, and the sentence that a reader gets.
type decisionCase struct {
	name     string
	bound    spec.Bound
	as       string // comparison
	unit     string
	rule     spec.Rounding
	accept   record.Accept
	estimate *float64
	// companion says that the companion carries the verdict
	companion bool
	// undecided says that the interval is there but carries no verdict
	undecided bool
	level     string
	want      string
}

var (
	absolute = spec.Rounding{Rule: "absolute"}
	rounded  = spec.Rounding{Rule: "rounded", Ties: "even"}
)

const (
	rightSide = "the bound is on the right side of the criterion"
	between   = "the estimate is on the right side of the criterion, the bound is not"
	wrongSide = "estimate and bound are both on the wrong side of the criterion"
)

// The expected sentences were written by hand from the figures beside them.
func TestDecisionSentence(t *testing.T) {
	least := func(limit string, bound *float64, compared, verdict, why string) record.Accept {
		return record.Accept{Criterion: atLeast, Limit: limit, Bound: bound, Compared: compared, Verdict: verdict, Why: why}
	}
	most := func(limit string, bound *float64, compared, verdict, why string) record.Accept {
		return record.Accept{Criterion: atMost, Limit: limit, Bound: bound, Compared: compared, Verdict: verdict, Why: why}
	}
	related := byCompanion + "stopped by few units"
	tests := []decisionCase{
		{name: "lower met", bound: spec.Lower, unit: "N", rule: absolute, estimate: num(1.41),
			accept: least("1.20", num(1.27), "1.27", "met", rightSide),
			want: "Median: the lower 95 % confidence bound is 1.270 N; the criterion, at least 1.20 N, is met " +
				"(absolute comparison, ASTM E29)."},
		{name: "lower equal", bound: spec.Lower, unit: "N", rule: absolute, estimate: num(1.41),
			accept: least("1.20", num(1.2), "1.2", "met", rightSide),
			want: "Median: the lower 95 % confidence bound is 1.200 N; the criterion, at least 1.20 N, is met " +
				"(absolute comparison, ASTM E29)."},
		{name: "lower not shown", bound: spec.Lower, unit: "N", rule: absolute, estimate: num(1.41),
			accept: least("1.30", num(1.27), "1.27", "not shown", between),
			want: "Median: the lower 95 % confidence bound is 1.270 N; the criterion, at least 1.30 N, is not shown " +
				"(absolute comparison, ASTM E29): the estimate, 1.410 N, is on its right side, the bound is not."},
		{name: "lower not met", bound: spec.Lower, unit: "N", rule: absolute, estimate: num(1.41),
			accept: least("1.50", num(1.27), "1.27", "not met", wrongSide),
			want: "Median: the lower 95 % confidence bound is 1.270 N; the criterion, at least 1.50 N, is not met " +
				"(absolute comparison, ASTM E29): the estimate, 1.410 N, and the bound are both on its wrong side."},
		{name: "upper met", bound: spec.Upper, unit: "ug/L", rule: absolute, estimate: num(0.3),
			accept: most("0.5", num(0.41), "0.41", "met", rightSide),
			want: "Median: the upper 95 % confidence bound is 0.410 ug/L; the criterion, at most 0.5 ug/L, is met " +
				"(absolute comparison, ASTM E29)."},
		{name: "upper not shown", bound: spec.Upper, unit: "ug/L", rule: absolute, estimate: num(0.3),
			accept: most("0.4", num(0.41), "0.41", "not shown", between),
			want: "Median: the upper 95 % confidence bound is 0.410 ug/L; the criterion, at most 0.4 ug/L, is not shown " +
				"(absolute comparison, ASTM E29): the estimate, 0.300 ug/L, is on its right side, the bound is not."},
		{name: "upper not met", bound: spec.Upper, unit: "ug/L", rule: absolute, estimate: num(0.3),
			accept: most("0.2", num(0.41), "0.41", "not met", wrongSide),
			want: "Median: the upper 95 % confidence bound is 0.410 ug/L; the criterion, at most 0.2 ug/L, is not met " +
				"(absolute comparison, ASTM E29): the estimate, 0.300 ug/L, and the bound are both on its wrong side."},
		{name: "no unit", bound: spec.Upper, rule: absolute, estimate: num(0.0085),
			accept: most("0.05", num(0.0399), "0.0399", "met", rightSide),
			want: "Median: the upper 95 % confidence bound is 0.040; the criterion, at most 0.05, is met " +
				"(absolute comparison, ASTM E29)."},
		{name: "other confidence", bound: spec.Lower, unit: "N", rule: absolute, estimate: num(2), level: "0.995",
			accept: least("1", num(1.5), "1.5", "met", rightSide),
			want: "Median: the lower 99.5 % confidence bound is 1.500 N; the criterion, at least 1 N, is met " +
				"(absolute comparison, ASTM E29)."},
		{name: "two-sided lower", bound: spec.TwoSided, unit: "N", rule: absolute, estimate: num(-0.11),
			accept: least("-0.15", num(-0.172), "-0.172", "not shown", between),
			want: "Median: the lower limit of the two-sided 95 % confidence interval is −0.172 N; the criterion, at least " +
				"−0.15 N, is not shown (absolute comparison, ASTM E29): the estimate, −0.110 N, is on its right side, the " +
				"bound is not."},
		{name: "two-sided upper", bound: spec.TwoSided, unit: "N", rule: absolute, estimate: num(-0.11),
			accept: most("0.15", num(-0.051), "-0.051", "met", rightSide),
			want: "Median: the upper limit of the two-sided 95 % confidence interval is −0.051 N; the criterion, at most " +
				"0.15 N, is met (absolute comparison, ASTM E29)."},
		{name: "difference", bound: spec.Lower, as: "difference", unit: "N", rule: absolute, estimate: num(-0.11),
			accept: least("-0.2", num(-0.17), "-0.17", "met", rightSide),
			want: "Median (difference, aged less fresh): the lower 95 % confidence bound is −0.170 N; the criterion, at least " +
				"−0.2 N, is met (absolute comparison, ASTM E29)."},
		{name: "difference not met", bound: spec.Upper, as: "difference", unit: "N", rule: absolute, estimate: num(0.4),
			accept: most("0", num(0.6), "0.6", "not met", wrongSide),
			want: "Median (difference, aged less fresh): the upper 95 % confidence bound is 0.600 N; the criterion, at most " +
				"0 N, is not met (absolute comparison, ASTM E29): the estimate, 0.400 N, and the bound are both on its wrong " +
				"side."},
		{name: "ratio", bound: spec.Lower, as: "ratio", rule: absolute, estimate: num(0.93),
			accept: least("0.85", num(0.88), "0.88", "met", rightSide),
			want: "Median (ratio, aged over fresh): the lower 95 % confidence bound is 0.880; the criterion, at least 0.85, " +
				"is " +
				"met (absolute comparison, ASTM E29)."},
		{name: "ratio not shown", bound: spec.TwoSided, as: "ratio", rule: absolute, estimate: num(1.1),
			accept: most("1.25", num(1.31), "1.31", "not shown", between),
			want: "Median (ratio, aged over fresh): the upper limit of the two-sided 95 % confidence interval is 1.310; the " +
				"criterion, at most 1.25, is not shown (absolute comparison, ASTM E29): the estimate, 1.100, is on its right " +
				"side, the bound is not."},
		{name: "rounded met", bound: spec.Lower, unit: "N", rule: rounded, estimate: num(1.41),
			accept: least("1.20", num(1.196), "1.20", "met", rightSide),
			want: "Median: the lower 95 % confidence bound is 1.196 N; the criterion, at least 1.20 N, is met (compared as " +
				"1.20 " +
				"after rounding to the decimals of the criterion, ASTM E29)."},
		{name: "rounded not shown", bound: spec.Lower, unit: "N", rule: rounded, estimate: num(1.41),
			accept: least("1.20", num(1.1949), "1.19", "not shown", between),
			want: "Median: the lower 95 % confidence bound is 1.1949 N; the criterion, at least 1.20 N, is not shown " +
				"(compared " +
				"as 1.19 after rounding to the decimals of the criterion, ASTM E29): the estimate, 1.4100 N, is on its right " +
				"side, the bound is not."},
		{name: "rounded not met", bound: spec.Upper, unit: "N", rule: rounded, estimate: num(1.9),
			accept: most("1.0", num(2.04), "2.0", "not met", wrongSide),
			want: "Median: the upper 95 % confidence bound is 2.040 N; the criterion, at most 1.0 N, is not met (compared as " +
				"2.0 " +
				"after rounding to the decimals of the criterion, ASTM E29): the estimate, 1.900 N, and the bound are both on " +
				"its wrong side."},
		{name: "rounded negative", bound: spec.Lower, unit: "K", rule: rounded, estimate: num(-0.2),
			accept: least("-1", num(-1.4), "-1", "met", rightSide),
			want: "Median: the lower 95 % confidence bound is −1.400 K; the criterion, at least −1 K, is met (compared as −1 " +
				"after rounding to the decimals of the criterion, ASTM E29)."},
		{name: "companion met", bound: spec.Lower, unit: "N", rule: absolute, estimate: num(1.41), companion: true,
			accept: least("1.20", num(1.25), "1.25", "met", rightSide+related),
			want: "Median: the lower 95 % confidence bound is 1.250 N; the criterion, at least 1.20 N, is met (absolute " +
				"comparison, ASTM E29). The companion (order statistic) decided, as the plan says: stopped by few units."},
		{name: "companion not shown", bound: spec.Lower, unit: "N", rule: absolute, estimate: num(1.41), companion: true,
			accept: least("1.30", num(1.25), "1.25", "not shown", between+related),
			want: "Median: the lower 95 % confidence bound is 1.250 N; the criterion, at least 1.30 N, is not shown (absolute " +
				"comparison, ASTM E29): the estimate, 1.410 N, is on its right side, the bound is not. The companion (order " +
				"statistic) decided, as the plan says: stopped by few units."},
		{name: "stopped", bound: spec.Lower, unit: "N", rule: absolute, estimate: num(1.41), undecided: true,
			accept: least("1.20", nil, "", "not shown", "stopped by pseudo-replication"),
			want: "Median: the lower 95 % confidence bound carries no verdict (stopped by pseudo-replication); the criterion, " +
				"at " +
				"least 1.20 N, is not shown."},
		{name: "stopped, two-sided", bound: spec.TwoSided, unit: "N", rule: absolute, estimate: num(1.41), undecided: true,
			accept: most("1.60", nil, "", "not shown", "stopped by few units, failed resamples"),
			want: "Median: the upper limit of the two-sided 95 % confidence interval carries no verdict (stopped by few " +
				"units, " +
				"failed resamples); the criterion, at most 1.60 N, is not shown."},
		{name: "no limit", bound: spec.Upper, unit: "N", rule: absolute, estimate: num(1.41), undecided: true,
			accept: most("1.60", nil, "", "not shown", "no studentized limit: the standard error is 0"),
			want: "Median: the upper 95 % confidence bound carries no verdict (no studentized limit: the standard error is " +
				"0); the " +
				"criterion, at most 1.60 N, is not shown."},
		{name: "no limit, difference", bound: spec.Lower, as: "difference", unit: "N", rule: absolute, estimate: num(1.41),
			undecided: true, accept: least("0", nil, "", "not shown", "no bca limit: too few resamples"),
			want: "Median (difference, aged less fresh): the lower 95 % confidence bound carries no verdict (no bca limit: " +
				"too few " +
				"resamples); the criterion, at least 0 N, is not shown."},
		{name: "no estimate", bound: spec.Lower, unit: "N", rule: absolute,
			accept: least("0", nil, "", "not shown", "there is no estimate: no spread in the observations"), undecided: true,
			want: "Median: the lower 95 % confidence bound carries no verdict (there is no estimate: no spread in the " +
				"observations); the criterion, at least 0 N, is not shown."},
		{name: "more digits than shown", bound: spec.Lower, unit: "N", rule: absolute, estimate: num(1.41),
			accept: least("1.20", num(1.19996), "1.19996", "not shown", between),
			want: "Median: the lower 95 % confidence bound is 1.19996 N; the criterion, at least 1.20 N, is not shown " +
				"(absolute comparison, ASTM E29): the estimate, 1.41000 N, is on its right side, the bound is not."},
		{name: "criterion as written", bound: spec.Lower, unit: "N", rule: absolute, estimate: num(14100),
			accept: least("12000.50", num(12700), "12700", "met", rightSide),
			want: "Median: the lower 95 % confidence bound is 12700.000 N; the criterion, at least 12000.50 N, is met " +
				"(absolute comparison, ASTM E29)."},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			r := tt.results()
			s := &r.Statistics[0]
			got := decisionSentence(r, s, &s.Accept[0])
			if got != tt.want {
				t.Errorf("\n got %s\nwant %s", got, tt.want)
			}
		})
	}
}

// results makes the record of one statistic of at most three decimals.
func (d *decisionCase) results() *record.Results {
	level := d.level
	if level == "" {
		level = "0.95"
	}
	s := record.Statistic{ID: "m", Label: "Median", Unit: d.unit, Decimals: 3, Estimate: d.estimate}
	i := record.Interval{Method: "percentile", Requested: "percentile", Confidence: level, Bound: d.bound}
	if d.companion {
		i.Method, i.Requested, i.Companion = "order statistic", "companion", true
	}
	if d.accept.Criterion == atLeast {
		i.Lower = d.accept.Bound
	} else {
		i.Upper = d.accept.Bound
	}
	i.Decides = !d.undecided
	s.Intervals = []record.Interval{i}
	if d.as != "" {
		s.Compare = &record.Compare{By: "arm", Of: [2]string{"aged", "fresh"}, As: d.as}
	}
	d.accept.Method, d.accept.Confidence = i.Method, level
	s.Accept = []record.Accept{d.accept}
	plan := spec.Plan{Rounding: &d.rule, Statistics: []spec.Statistic{{ID: "m", Bound: d.bound}}}
	return &record.Results{Plan: record.Plan{Resolved: plan}, Statistics: []record.Statistic{s}}
}

// Two criteria on the limits of one interval are two decisions, and both limits have the decimals of the finer need.
func TestTwoCriteria(t *testing.T) {
	rec, _ := fixture()
	r := &rec.Results
	s := &r.Statistics[1]
	want := []string{
		"Loss of median peel strength by ageing (difference, aged less fresh): the lower limit of the two-sided 95 % " +
			"confidence " +
			"interval is −0.17 N/15mm; the criterion, at least −0.15 N/15mm, is not shown (absolute comparison, ASTM E29): " +
			"the " +
			"estimate, −0.110 N/15mm, is on its right side, the bound is not.",
		"Loss of median peel strength by ageing (difference, aged less fresh): the upper limit of the two-sided 95 % " +
			"confidence " +
			"interval is −0.05 N/15mm; the criterion, at most 0.15 N/15mm, is met (absolute comparison, ASTM E29).",
	}
	for i := range s.Accept {
		if got := decisionSentence(r, s, &s.Accept[i]); got != want[i] {
			t.Errorf("\n got %s\nwant %s", got, want[i])
		}
	}
}

func TestDesignText(t *testing.T) {
	strata := func(sizes ...record.Stratum) []record.Stratum { return sizes }
	tests := []struct {
		name    string
		design  record.Design
		compare *record.Compare
		want    string
	}{
		{"rows", record.Design{Unit: []string{"row"}, Strata: strata(record.Stratum{Units: 58, Rows: 58})}, nil,
			"The resampling unit is the single row. Rows are drawn with replacement, 58 from 58."},
		{"units in equal strata", record.Design{Unit: []string{"pouch"}, By: []string{"lot"},
			Strata: strata(record.Stratum{Name: "A", Units: 10}, record.Stratum{Name: "B", Units: 10})}, nil,
			"The resampling unit is pouch. Whole units are drawn with replacement, 10 from 10 within each lot (A; B); all " +
				"rows of " +
				"a drawn pouch come along."},
		{"units in unequal strata", record.Design{Unit: []string{"pouch"}, By: []string{"lot"},
			Strata: strata(record.Stratum{Name: "A", Units: 10}, record.Stratum{Name: "B", Units: 9})}, nil,
			"The resampling unit is pouch. Whole units are drawn with replacement, within each lot: A 10 from 10; B 9 from 9; " +
				"all " +
				"rows of a drawn pouch come along."},
		{"nested to the row", record.Design{Unit: []string{"laboratory", "day", "row"},
			Strata: strata(record.Stratum{Units: 8})}, nil,
			"The outermost resampling unit is laboratory. Units are drawn with replacement, 8 from 8; within each drawn " +
				"laboratory " +
				"its units of day are drawn with replacement, as many as it has; within each drawn day its rows are drawn with " +
				"replacement, as many as it has."},
		{"nested to a unit", record.Design{Unit: []string{"laboratory", "day"}, Strata: strata(record.Stratum{Units: 8})},
			nil,
			"The outermost resampling unit is laboratory. Units are drawn with replacement, 8 from 8; within each drawn " +
				"laboratory " +
				"its units of day are drawn with replacement, as many as it has; all rows of a drawn day come along."},
		{"groups apart", record.Design{Unit: []string{"row"},
			Strata: strata(record.Stratum{Name: "aged", Units: 20}, record.Stratum{Name: "fresh", Units: 22})},
			&record.Compare{By: "arm", Of: [2]string{"aged", "fresh"}},
			"The resampling unit is the single row. Rows are drawn with replacement, within each group: aged 20 from 20; " +
				"fresh 22 " +
				"from 22. No unit holds rows of both groups (arm aged and fresh), so each group is drawn by itself."},
		{"pairs", record.Design{Unit: []string{"subject"}, Strata: strata(record.Stratum{Units: 12})},
			&record.Compare{By: "arm", Of: [2]string{"aged", "fresh"}, Paired: true},
			"The resampling unit is subject. Whole units are drawn with replacement, 12 from 12; all rows of a drawn subject " +
				"come " +
				"along. Units hold rows of both groups (arm aged and fresh), so the groups are drawn jointly, as pairs."},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			if got := designText(&record.Statistic{Design: tt.design, Compare: tt.compare}); got != tt.want {
				t.Errorf("\n got %s\nwant %s", got, tt.want)
			}
		})
	}
}

// Only what was used is explained and cited, each once.
func TestMethodsOnlyOfWhatWasUsed(t *testing.T) {
	rec, _ := fixture()
	r := &rec.Results
	r.Statistics = r.Statistics[:1]
	var names []string
	for _, m := range append(statisticMethods(r), intervalMethods(r)...) {
		names = append(names, m.title)
		if m.summary == "" || m.formula == "" || m.caution == "" || len(m.sources) == 0 {
			t.Errorf("%s is not explained wholly: %+v", m.title, m)
		}
	}
	if got := strings.Join(names, ", "); got != "median, bca, percentile, order statistic" {
		t.Errorf("explained: %s", got)
	}
	seen := map[string]bool{}
	for _, s := range references(r) {
		if seen[s] {
			t.Errorf("cited twice: %s", s)
		}
		seen[s] = true
		if strings.Contains(s, "Clopper") {
			t.Errorf("cited, but not used: %s", s)
		}
	}
	if !seen[comparisonSource] {
		t.Error("there is a criterion, but its standard is not cited")
	}
	for i := range r.Statistics {
		r.Statistics[i].Accept = nil
	}
	for _, s := range references(r) {
		if s == comparisonSource {
			t.Error("there is no criterion, but its standard is cited")
		}
	}
}

// What every report must say whatever it holds, and what it says only in some cases.
func TestValidityTexts(t *testing.T) {
	rec, _ := fixture()
	r := &rec.Results
	all := strings.Join(validityTexts(r), "\n")
	for _, needed := range []string{notForLotproof, "does not show that all is well", "7 criteria", "is a draft"} {
		if !strings.Contains(all, needed) {
			t.Errorf("the limits of validity do not say %q", needed)
		}
	}
	r.Statistics = r.Statistics[:1]
	r.Plan.Resolved.Study.Status = "approved"
	r.Plan.Resolved.Amendments[0].ResultsSeen = true
	all = strings.Join(validityTexts(r), "\n")
	for _, wrong := range []string{"criteria are judged", "draft"} {
		if strings.Contains(all, wrong) {
			t.Errorf("the limits of validity say %q without cause", wrong)
		}
	}
	if !strings.Contains(all, "Amendment 1 was made after results had been seen.") {
		t.Error("an amendment made after results were seen is passed over")
	}
}
