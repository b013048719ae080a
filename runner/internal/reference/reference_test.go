package reference

import (
	"math"
	"slices"
	"testing"
)

// Every case is checked by a package that exists, and has what a comparison needs.
func TestCases(t *testing.T) {
	seen := map[string]bool{}
	for _, c := range Load(t, "") {
		if seen[c.ID] {
			t.Errorf("case %s stands twice", c.ID)
		}
		seen[c.ID] = true
		if len(c.Packages) == 0 {
			t.Errorf("case %s is checked by no package", c.ID)
		}
		for _, p := range c.Packages {
			if !slices.Contains([]string{"statistic", "interval", "runner"}, p) {
				t.Errorf("case %s: unknown package %q", c.ID, p)
			}
		}
		if len(c.Expected) == 0 || c.Source == "" || c.Tolerance <= 0 {
			t.Errorf("case %s is incomplete: %+v", c.ID, c)
		}
		d := Data(t, c.Data)
		for _, name := range c.Columns {
			d.Texts(name)
		}
	}
}

// The rule of tolerance: a listed range at its own number of resamples, else 5·√(sd²/B + se²); a relative share.
func TestRange(t *testing.T) {
	simulated := Case{ToleranceKind: "monte-carlo", Expected: Figures{"lower": 10}, MonteCarlo: &MonteCarlo{Resamples: 100,
		SD: Figures{"lower": 90}, ReferenceError: Figures{Value: 4}, Accept: map[string][2]float64{"lower": {9, 12}}}}
	tests := []struct {
		c         Case
		name      string
		want      float64
		resamples int
		low, high float64
	}{
		{simulated, "lower", 10, 100, 9, 12},
		{simulated, "lower", 0, 100, -1, 2},    // the range moves with the figure that is wanted
		{simulated, "lower", 10, 900, -15, 35}, // 5·√(3² + 4²) = 25
		{Case{ToleranceKind: "relative", Tolerance: 0.01}, Value, -200, 0, -202, -198},
		{Case{ToleranceKind: "absolute", Tolerance: 0.5}, Value, -200, 0, -200.5, -199.5},
	}
	for _, tt := range tests {
		low, high := tt.c.Range(t, tt.name, tt.want, tt.resamples)
		if math.Abs(low-tt.low) > 1e-9 || math.Abs(high-tt.high) > 1e-9 {
			t.Errorf("%s, %d resamples: %g to %g, want %g to "+
				"%g", tt.c.ToleranceKind, tt.resamples, low, high, tt.low, tt.high)
		}
	}
}
