package runner

import (
	"math"
	"strconv"
	"testing"
)

// The Monte-Carlo error that a record gives is what another seed would show: over 200 seeds the standard deviation of
// each limit agrees with the mean of the errors given. A standard deviation from 200 runs has itself a standard error
// of 5 %, so 15 % is three of them.
func TestMonteCarloError(t *testing.T) {
	if testing.Short() {
		t.Skip("400 runs")
	}
	const seeds, resamples = 200, 2000
	for _, s := range []setup{setups["precip-mean"], {"precip.csv", "in_per_year: {type: number}", "", "",
		"statistic: standard deviation, of: in_per_year", allMethods}} {
		type side struct{ limit, given []float64 }
		found := map[string]*[2]side{}
		var names []string
		for seed := range uint64(seeds) {
			r := s.run(t, resamples, 1000+seed)
			for _, in := range r.Intervals {
				if in.Companion {
					continue
				}
				if found[in.Method] == nil {
					found[in.Method] = &[2]side{}
					names = append(names, in.Method)
				}
				f := found[in.Method]
				f[0].limit, f[0].given = append(f[0].limit, *in.Lower), append(f[0].given, *in.MonteCarloError.Lower)
				f[1].limit, f[1].given = append(f[1].limit, *in.Upper), append(f[1].given, *in.MonteCarloError.Upper)
			}
		}
		if len(names) != 5 {
			t.Errorf("methods %q", names)
		}
		for _, name := range names {
			for i, end := range []string{"lower", "upper"} {
				f := found[name][i]
				mean, given, squares := 0.0, 0.0, 0.0
				for j := range f.limit {
					mean += f.limit[j] / seeds
					given += f.given[j] / seeds
				}
				for _, v := range f.limit {
					squares += (v - mean) * (v - mean)
				}
				sd := math.Sqrt(squares / (seeds - 1))
				t.Logf("%s, %s %s: SD over seeds %s, given %s, ratio %.3f", s.statistic, name, end,
					strconv.FormatFloat(sd, 'g', 4, 64), strconv.FormatFloat(given, 'g', 4, 64), given/sd)
				if math.Abs(given/sd-1) > 0.15 {
					t.Errorf("%s, %s %s: SD over seeds %g, mean of the errors given "+
						"%g", s.statistic, name, end, sd, given)
				}
			}
		}
	}
}
