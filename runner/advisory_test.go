package runner_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"lotproof/runner/advisory"
	"lotproof/runner/record"
)

// try runs one statistic on a small table, whose columns are g and h (categories), x and y (numbers).
func try(t *testing.T, statistic string, rows []string) *record.Statistic {
	t.Helper()
	dir := t.TempDir()
	must(t, os.WriteFile(filepath.Join(dir, "t.csv"), []byte("g,h,x,y\n"+strings.Join(rows, "\n")+"\n"), 0o666))
	must(t, os.WriteFile(filepath.Join(dir, "plan.yaml"), []byte(`lotproof: 1
study: {id: T}
sources: {t: {file: t.csv, columns: {g: {type: category}, h: {type: category}, x: {type: number}, y: {type: number}}}}
seed: 5
confidence: 0.95
resampling: {unit: row, resamples: 1999}
rounding: {rule: absolute}
statistics: [{id: s, `+statistic+`}]
`), 0o666))
	return &run(t, study(t, filepath.Join(dir, "plan.yaml")), 0).Statistics[0]
}

// table makes rows: group and second group of row i, and its two numbers.
func table(n int, row func(i int) (g, h string, x, y float64)) []string {
	var out []string
	for i := range n {
		g, h, x, y := row(i)
		out = append(out, fmt.Sprintf("%s,%s,%.6f,%.6f", g, h, x, y))
	}
	return out
}

// spaced returns n values in a fixed shuffled order that follow a normal law closely, so that nothing but what a case
// wants is remarkable about them.
func spaced(n int) []float64 {
	r := rand.New(rand.NewPCG(9, 9))
	out := make([]float64, n)
	for i, k := range r.Perm(n) {
		out[i] = 10 + math.Erfinv(2*(float64(k)+0.5)/float64(n)-1)
	}
	return out
}

// Each check of the catalogue fires on a table made for it, with the severity it should have, and nothing graver comes
// with it but what the case says.
func TestEachAdvisoryFires(t *testing.T) {
	plain := func(n int) []string {
		x := spaced(n)
		return table(n, func(i int) (string, string, float64, float64) {
			return fmt.Sprint("g", i), "a", x[i], x[(i+7)%n]
		})
	}
	tests := []struct {
		code, severity string
		statistic      string
		rows           []string
		also           []string // other codes that the table must raise too
	}{
		{"few units", "caution", "statistic: median, of: x, interval: bca", plain(9), []string{"coarse steps"}},
		{"few units", "stop", "statistic: mean, of: x, interval: studentized", plain(4),
			[]string{"resamples without spread", "coarse steps"}},
		{"quantile out of reach", "stop", "statistic: quantile, with: {p: 0.1}, of: x, bound: lower, interval: " +
			"order statistic",
			plain(28), nil},
		{"pseudo-replication", "stop", "statistic: mean, of: x, interval: studentized",
			table(60, func(i int) (string, string, float64, float64) {
				x := spaced(60)
				return fmt.Sprint("g", i/6), "a", x[i] + 2*spaced(10)[i/6], 0
			}), nil},
		{"pseudo-replication", "caution", "statistic: mean, of: x, interval: studentized",
			table(60, func(i int) (string, string, float64, float64) {
				return fmt.Sprint("g", i/30), "a", spaced(60)[i] + float64(i/30), 0
			}), nil},
		{"bound of a spread", "stop", "statistic: standard deviation, of: x, bound: upper, interval: " +
			"percentile", plain(14), []string{"biased estimate"}},
		{"bound of a spread", "caution", "statistic: standard deviation, of: x, bound: upper, interval: " +
			"studentized", plain(100), nil},
		{"skewed mean", "caution", "statistic: mean, of: x, interval: studentized",
			table(40, func(i int) (string, string, float64, float64) {
				return fmt.Sprint("g", i), "a", math.Exp(0.8 * (spaced(40)[i] - 10)), 0
			}), nil},
		{"narrow interval", "caution", "statistic: mean, of: x, interval: percentile", plain(12), nil},
		{"narrow interval", "note", "statistic: mean, of: x, interval: percentile", plain(25), nil},
		{"small stratum", "stop", "statistic: mean, of: x, interval: studentized, resampling: {strata: h}",
			table(31, func(i int) (string, string, float64, float64) {
				return fmt.Sprint("g", i), []string{"a", "b"}[i/30], spaced(31)[i], 0
			}), nil},
		{"small stratum", "note", "statistic: mean, of: x, interval: studentized, resampling: {strata: h}",
			table(37, func(i int) (string, string, float64, float64) {
				return fmt.Sprint("g", i), []string{"a", "b"}[i/30], spaced(37)[i], 0
			}), nil},
		{"failed resamples", "stop", "statistic: Pearson correlation, of: [x, y], interval: percentile",
			table(12, func(i int) (string, string, float64, float64) {
				return fmt.Sprint("g", i), "a", spaced(12)[i], float64(i / 11)
			}), []string{"biased estimate"}},
		{"resamples without spread", "stop", "statistic: standard deviation, of: x, interval: studentized",
			table(12, func(i int) (string, string, float64, float64) {
				return fmt.Sprint("g", i), "a", float64(i / 11), 0
			}), []string{"bound of a spread", "coarse steps", "biased estimate"}},
		{"coarse steps", "caution", "statistic: median, of: x, interval: percentile",
			table(40, func(i int) (string, string, float64, float64) {
				return fmt.Sprint("g", i), "a", math.Round(spaced(40)[i]), 0
			}), nil},
		{"unstable correction", "caution", "statistic: variance, of: x, interval: bca",
			table(20, func(i int) (string, string, float64, float64) {
				return fmt.Sprint("g", i), "a", math.Exp(1.5 * (spaced(20)[i] - 10)), 0
			}), []string{"bound of a spread"}},
		{"limit beyond the possible", "stop", "statistic: Pearson correlation, of: [x, y], interval: basic",
			table(12, func(i int) (string, string, float64, float64) {
				return fmt.Sprint("g", i), "a", spaced(12)[i], spaced(12)[i] + 0.2*spaced(12)[(i+5)%12]
			}), nil},
		{"partly paired", "caution", "statistic: mean, of: x, interval: studentized, compare: {by: h, of: [a, b], " +
			"as: difference}, " +
			"resampling: {unit: g}",
			table(60, func(i int) (string, string, float64, float64) {
				return fmt.Sprint("g", i%35), []string{"a", "b"}[i/35], spaced(60)[i], 0
			}), nil},
		{"biased estimate", "caution", "statistic: repeatability standard deviation, of: x, with: {factor: g}, " +
			"interval: percentile",
			table(120, func(i int) (string, string, float64, float64) {
				return fmt.Sprint("g", i/2), "a", spaced(120)[i], 0
			}), []string{"bound of a spread"}},
		{"seed could decide", "caution", "statistic: mean, of: x, bound: lower, interval: studentized, accept: " +
			"{lower_at_least: 9.849}",
			plain(60), nil},
	}
	fired := map[string]bool{}
	for _, tt := range tests {
		s := try(t, tt.statistic, tt.rows)
		var codes []string
		for _, a := range s.Advisories {
			codes = append(codes, a.Severity+" "+a.Code)
			if a.Text == "" || a.Action == "" || a.Source == "" || a.Evidence == nil {
				t.Errorf("%s: an advisory without text, action, source or evidence", a.Code)
			}
			if a.Code != tt.code && !slices.Contains(tt.also, a.Code) {
				t.Errorf("%s %s: %s %s came too: %s", tt.severity, tt.code, a.Severity, a.Code, a.Text)
			}
		}
		if !slices.Contains(codes, tt.severity+" "+tt.code) {
			t.Errorf("%s %s did not come for %s; there are %q", tt.severity, tt.code, tt.statistic, codes)
		}
		fired[tt.code] = true
	}
	for _, d := range advisory.All() {
		if !fired[d.Code] {
			t.Errorf("no table was made for %q", d.Code)
		}
	}
}

// A doubt about resampling does not withhold the verdict of a classical interval that the plan names first; a doubt about
// the rows does.
func TestStopsReachWhatTheyConcern(t *testing.T) {
	x := spaced(4)
	few := table(4, func(i int) (string, string, float64, float64) { return fmt.Sprint("g", i), "a", x[i], 0 })
	s := try(t, "statistic: mean, of: x, interval: [t, percentile], accept: {lower_at_least: 5}", few)
	if s.Accept[0].Verdict != "met" || s.Accept[0].Method != "t" {
		t.Errorf("t named first: %s by %q, %s", s.Accept[0].Verdict, s.Accept[0].Method, s.Accept[0].Why)
	}
	s = try(t, "statistic: mean, of: x, interval: [percentile, t], accept: {lower_at_least: 5}", few)
	if s.Accept[0].Verdict != "not shown" || !strings.HasPrefix(s.Accept[0].Why, "stopped by few units") {
		t.Errorf("percentile named first: %s, %s", s.Accept[0].Verdict, s.Accept[0].Why)
	}
	many := spaced(60)
	clustered := table(60, func(i int) (string, string, float64, float64) {
		return fmt.Sprint("g", i/6), "a", many[i] + 2*spaced(10)[i/6], 0
	})
	s = try(t, "statistic: mean, of: x, interval: t, accept: {lower_at_least: 5}", clustered)
	if s.Accept[0].Verdict != "not shown" || s.Accept[0].Why != "stopped by pseudo-replication" {
		t.Errorf("t on clustered rows: %s, %s", s.Accept[0].Verdict, s.Accept[0].Why)
	}
}

// Clean tables raise nothing.
func TestCleanTablesRaiseNothing(t *testing.T) {
	x := spaced(120)
	rows := table(120, func(i int) (string, string, float64, float64) {
		return fmt.Sprint("g", i%12), []string{"a", "b"}[i%2], x[i], x[i]/2 + x[(i+31)%120]
	})
	for _, statistic := range []string{
		"statistic: mean, of: x, interval: studentized",
		"statistic: mean, of: x, interval: bca, bound: lower, accept: {lower_at_least: 5}",
		"statistic: median, of: x, interval: order statistic",
		"statistic: Pearson correlation, of: [x, y], interval: bca",
		"statistic: slope, of: [x, y], interval: percentile",
		"statistic: mean, of: x, interval: studentized, compare: {by: h, of: [a, b], as: ratio}",
	} {
		for _, a := range try(t, statistic, rows).Advisories {
			t.Errorf("%s: %s %s: %s", statistic, a.Severity, a.Code, a.Text)
		}
	}
}

// Pseudo-replication is found: of simulated clusters of 10 rows with intraclass correlation 0.3, drawn as rows, at least
// 95 % are stopped, and of independent rows at most 5 %. Sizes as in the text of the check; 12 clusters, 200 tables each.
func TestPseudoReplicationRates(t *testing.T) {
	if testing.Short() {
		t.Skip("400 studies; run without -short")
	}
	r := rand.New(rand.NewPCG(11, 11))
	rate := func(icc float64) float64 {
		stopped := 0
		for range 200 {
			var group float64
			rows := table(120, func(i int) (string, string, float64, float64) {
				if i%10 == 0 {
					group = math.Sqrt(icc) * r.NormFloat64()
				}
				return fmt.Sprint("g", i/10), "a", 20 + group + math.Sqrt(1-icc)*r.NormFloat64(), 0
			})
			s := try(t, "statistic: mean, of: x, interval: normal, resampling: {resamples: 200}", rows)
			for _, a := range s.Advisories {
				if a.Code == "pseudo-replication" && a.Severity == "stop" {
					stopped++
				}
			}
		}
		return float64(stopped) / 200
	}
	if got := rate(0.3); got < 0.95 {
		t.Errorf("only %.1f %% of clustered tables were stopped", 100*got)
	}
	if got := rate(0); got > 0.05 {
		t.Errorf("%.1f %% of clean tables were stopped", 100*got)
	}
}
