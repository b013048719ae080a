package runner

import (
	"context"
	"fmt"
	"math"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"sync"
	"testing"

	"gonum.org/v1/gonum/dsp/fourier"
	"gonum.org/v1/gonum/stat/distuv"

	"lotproof/runner/internal/reference"
	"lotproof/runner/record"
	"lotproof/spec"
)

// A setup is one small study on a file of testdata/reference. Left empty, the unit is the row.
type setup struct {
	file      string
	columns   string
	derive    string
	unit      string
	statistic string // the rest of the entry, without id and interval
	intervals string
}

const allMethods = "[percentile, basic, normal, studentized, bca]"

// setups are the studies behind the simulated cases; the key is how the names of their cases begin. Cases on the ratio of
// two means are not among the copied ones, because the catalogue has no such statistic; nor are ABC limits, balanced
// draws, time blocks and tests.
var setups = map[string]setup{
	"mouse-treatment-mean": {"mouse.csv", "group: {type: category}, days: {type: number}", "", "",
		`where: 'group == "treatment"', statistic: mean, of: days`, allMethods},
	"mouse-control-mean": {"mouse.csv", "group: {type: category}, days: {type: number}", "", "",
		`where: 'group == "control"', statistic: mean, of: days`, allMethods},
	"shoes-diff":     {"shoes.csv", "A: {type: number}, B: {type: number}", "wear: B - A", "", "statistic: mean, of: wear", allMethods},
	"aircondit-mean": {"aircondit.csv", "hours: {type: number}", "", "", "statistic: mean, of: hours", allMethods},
	"aircondit-sd": {"aircondit.csv", "hours: {type: number}", "", "", "statistic: standard deviation, of: hours",
		"[percentile, basic, bca]"},
	"darwin-mean": {"darwin.csv", "diff: {type: number}", "", "", "statistic: mean, of: diff", allMethods},
	"rivers-mean": {"rivers.csv", "miles: {type: number}", "", "", "statistic: mean, of: miles", allMethods},
	"precip-mean": {"precip.csv", "in_per_year: {type: number}", "", "", "statistic: mean, of: in_per_year", allMethods},
	"precip-mc":   {"precip.csv", "in_per_year: {type: number}", "", "", "statistic: mean, of: in_per_year", allMethods},
	"law-cor": {"law.csv", "LSAT: {type: number}, GPA: {type: number}", "", "",
		"statistic: Pearson correlation, of: [LSAT, GPA]", "[percentile, basic, bca]"},
	"cars-cor-mc": {"cars.csv", "speed: {type: number}, dist: {type: number}", "", "",
		"statistic: Pearson correlation, of: [speed, dist]", "[percentile, basic, normal, bca]"},
	"galaxies-sd-mc": {"galaxies.csv", "velocity: {type: number}", "", "", "statistic: standard deviation, of: velocity",
		"[percentile, basic, normal, bca]"},
	"chickwts-trim20-mc95": {"chickwts.csv", "weight: {type: number}", "", "",
		"statistic: trimmed mean, of: weight, with: {trim: 0.2}", "percentile"},
	"rail-cluster": {"rail.csv", "rail: {type: category}, travel: {type: number}", "", "rail", "statistic: mean, of: travel",
		"[percentile, basic]"},
	"pixel-cluster": {"pixel.csv", "dog: {type: category}, pixel: {type: number}", "", "dog", "statistic: mean, of: pixel",
		"[percentile, basic, normal]"},
	"toothgrowth-strat": {"toothgrowth.csv", "supp: {type: category}, len: {type: number}", "", "",
		"statistic: mean, of: len, compare: {by: supp, of: [OJ, VC], as: difference}", "[percentile, basic]"},
	"plant-diff-mc": {"plantgrowth.csv", "group: {type: category}, weight: {type: number}", "", "",
		"statistic: mean, of: weight, compare: {by: group, of: [trt2, trt1], as: difference}", allMethods},
	"mouse-treatment-median": {"mouse.csv", "group: {type: category}, days: {type: number}", "", "",
		`where: 'group == "treatment"', statistic: median, of: days`, "percentile"},
	"mouse-control-median": {"mouse.csv", "group: {type: category}, days: {type: number}", "", "",
		`where: 'group == "control"', statistic: median, of: days`, "percentile"},
	"bod-median":       {"bod.csv", "demand: {type: number}", "", "", "statistic: median, of: demand", "percentile"},
	"aircondit-median": {"aircondit.csv", "hours: {type: number}", "", "", "statistic: median, of: hours", "percentile"},
	"rivers-median":    {"rivers.csv", "miles: {type: number}", "", "", "statistic: median, of: miles", "percentile"},
	"chem-median":      {"chem.csv", "copper: {type: number}", "", "", "statistic: median, of: copper", "percentile"},
}

// prepared reads the plan of a setup and prepares it.
func (s setup) prepared(t testing.TB, resamples int, seed uint64) *Study {
	t.Helper()
	unit, derive := s.unit, ""
	if unit == "" {
		unit = "row"
	}
	if s.derive != "" {
		derive = "derive: {" + s.derive + "}"
	}
	text := fmt.Sprintf(`lotproof: 1
study: {id: REFERENCE}
sources:
  data:
    file: %s
    columns: {%s}
    %s
seed: %d
confidence: 0.95
resampling: {unit: %s, resamples: %d}
statistics:
  - {id: it, %s, interval: %s}
`, s.file, s.columns, derive, seed, unit, resamples, s.statistic, s.intervals)
	plan, err := spec.Read(strings.NewReader(text), "plan.yaml", Catalogue())
	if err != nil {
		t.Fatalf("%v\n%s", err, text)
	}
	study, err := Prepare(plan, filepath.Dir(reference.Path(t, s.file)))
	if err != nil {
		t.Fatal(err)
	}
	return study
}

func (s setup) run(t testing.TB, resamples int, seed uint64) *record.Statistic {
	t.Helper()
	r, err := s.prepared(t, resamples, seed).Run(context.Background(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	return &r.Statistics[0]
}

func method(t testing.TB, r *record.Statistic, name string) *record.Interval {
	t.Helper()
	for i := range r.Intervals {
		if r.Intervals[i].Method == name && !r.Intervals[i].Companion {
			return &r.Intervals[i]
		}
	}
	t.Fatalf("%s has no interval %q", r.Statistic, name)
	return nil
}

func limits(t testing.TB, r *record.Statistic, name string) reference.Figures {
	t.Helper()
	in := method(t, r, name)
	if in.Lower == nil || in.Upper == nil {
		t.Fatalf("%s: no limits: %s", name, in.Reason)
	}
	return reference.Figures{"lower": *in.Lower, "upper": *in.Upper}
}

func figure(t testing.TB, in *record.Interval, name string) float64 {
	t.Helper()
	for _, p := range in.Parameters {
		if p.Name == name && p.Value != nil {
			return *p.Value
		}
	}
	t.Fatalf("%s has no figure %q", in.Method, name)
	return 0
}

// TestReference runs the simulated cases through the whole engine, from the text of a plan and a file to the record.
//
// Allowed differences: at 99,999 resamples the range listed with a case where there is one (laws on a lattice), else
// 5·√(sd²/B + se²) from the figures of the case; with -short, 9,999 resamples and the second rule. Each of some 150
// figures would fall outside by chance once in two million.
func TestReference(t *testing.T) {
	resamples := 99999
	if testing.Short() {
		resamples = 9999
	}
	results := map[string]func() *record.Statistic{}
	for prefix, s := range setups {
		results[prefix] = sync.OnceValue(func() *record.Statistic { return s.run(t, resamples, 20410117) })
	}
	checks := map[string]func(*testing.T, reference.Case){}
	for _, c := range reference.Load(t, "runner") {
		prefix := ""
		for p := range setups {
			if strings.HasPrefix(c.ID, p+"-") && len(p) > len(prefix) {
				prefix = p
			}
		}
		if prefix == "" {
			continue // a jackknife case, or reported by reference.Run
		}
		result := results[prefix]
		switch kind := strings.TrimPrefix(strings.TrimPrefix(c.ID, prefix), "-"); kind {
		case "boot-se", "boot-se-mc", "mc-se", "se":
			checks[c.ID] = func(t *testing.T, c reference.Case) {
				c.Compare(t, reference.Figures{"se": *result().StandardError}, resamples)
			}
		case "boot-bias":
			checks[c.ID] = func(t *testing.T, c reference.Case) {
				c.Compare(t, reference.Figures{"bias": *result().Bias}, resamples)
			}
		case "exact-boot":
			checks[c.ID] = func(t *testing.T, c reference.Case) { checkExactMedian(t, c, result(), resamples) }
		case "bca", "mc-bca":
			checks[c.ID] = func(t *testing.T, c reference.Case) { checkBCa(t, c, result(), resamples) }
		default:
			name := strings.TrimPrefix(kind, "mc-")
			if name == "studentised" {
				name = "studentized"
			}
			checks[c.ID] = func(t *testing.T, c reference.Case) {
				got := limits(t, result(), name)
				if c.ID == "law-cor-basic" {
					// The reflected limit is beyond 1. Lotproof cuts it there, and the record has an advisory.
					if low, _ := c.Range(t, "upper", c.Expected["upper"], resamples); got["upper"] != 1 || low <= 1 {
						t.Errorf("upper limit %v, want 1 in the place of %v", got["upper"], c.Expected["upper"])
					}
					delete(got, "upper")
					c.Compare(t, got, resamples, "upper")
					return
				}
				c.Compare(t, got, resamples)
			}
		}
	}
	jackknifeChecks(checks)
	reference.Run(t, "runner", checks)
}

// checkExactMedian compares percentile limits of the median with those of its exact law. The law has few atoms, and none
// of them ends within the simulation error of 0.025 or 0.975, so the limits must be equal. The mean of the resample
// values may differ by 5 standard errors.
func checkExactMedian(t *testing.T, c reference.Case, r *record.Statistic, resamples int) {
	t.Helper()
	c.Compare(t, limits(t, r, "percentile"), 0, "mean", "se")
	if want := c.Number(t, "median"); *r.Estimate != want {
		t.Errorf("%s: median %v, want %v", c.ID, *r.Estimate, want)
	}
	mean, want := *r.Estimate+*r.Bias, c.Expected["mean"]
	if reach := 5 * c.Expected["se"] / math.Sqrt(float64(resamples)); math.Abs(mean-want) > reach {
		t.Errorf("%s: mean of the resample values %v, want %v ± %v", c.ID, mean, want, reach)
	}
}

// checkBCa compares BCa limits. The reference counts values strictly below the estimate for z₀, Lotproof half of those
// equal to it as well (what a value exactly at the estimate says of the bias is nothing, so it should pull neither way).
// For means, whose law on the lattice of the data is known exactly, the limits are computed from that law with both
// weights: with weight 0 it must give the figures of the case, with weight ½ it gives what Lotproof should find. For
// standard deviations and correlations the estimate has an atom below 10⁻⁵ and the weight moves nothing that matters.
func checkBCa(t *testing.T, c reference.Case, r *record.Statistic, resamples int) {
	t.Helper()
	in := method(t, r, "bca")
	a := c.Number(t, "a")
	if got := figure(t, in, "a"); math.Abs(got-a) > 1e-8*math.Abs(a) {
		t.Errorf("%s: acceleration %.15g, want %.15g", c.ID, got, a)
	}
	wanted, z0 := c.Expected, c.Number(t, "z0")
	simulated := strings.Contains(c.ID, "-mc-")
	if l := lawOfMean(t, c); l != nil {
		strict, half := l.bca(a, 0), l.bca(a, 0.5)
		for name, want := range c.Expected {
			low, high := want-1e-9*math.Abs(want), want+1e-9*math.Abs(want)
			if simulated {
				low, high = c.Range(t, name, want, resamples)
			}
			if strict[name] < low || strict[name] > high {
				t.Errorf("%s: the exact law gives %s = %v with ties uncounted, the case has %v", c.ID, name, strict[name], want)
			}
			wanted[name] = want + half[name] - strict[name]
		}
		if !simulated && math.Abs(strict["z0"]-z0) > 1e-9 {
			t.Errorf("%s: the exact law gives z0 = %v with ties uncounted, the case has %v", c.ID, strict["z0"], z0)
		}
		z0 = half["z0"]
	}
	share := distuv.UnitNormal.CDF(z0)
	reach := 5 * math.Sqrt(share*(1-share)/float64(resamples)) / distuv.UnitNormal.Prob(z0)
	if simulated {
		reach *= math.Sqrt(1 + float64(resamples)/12/999999) // the reference has its own error
	}
	if got := figure(t, in, "z0"); math.Abs(got-z0) > reach {
		t.Errorf("%s: z0 %v, want %v ± %v", c.ID, got, z0, reach)
	}
	for name, got := range limits(t, r, "bca") {
		low, high := c.Range(t, name, wanted[name], resamples)
		if !(got >= low && got <= high) {
			t.Errorf("%s: %s = %v, want %v (%v with ties uncounted), allowed %v to %v\n%s\nsource: %s", c.ID, name, got,
				wanted[name], c.Expected[name], low, high, c.Quantity, c.Source)
		}
	}
}

// A law is the exact distribution of a mean, or of a difference of two means, over all resamples: value i is first +
// i·step.
type law struct {
	first, step float64
	share       []float64
	at          int // the place of the estimate
}

// lawOfMean returns the law of the mean behind a case, nil if the case is about another statistic.
func lawOfMean(t testing.TB, c reference.Case) *law {
	t.Helper()
	d := reference.Data(t, c.Data)
	whole := func(x []float64, unit float64) []int {
		out := make([]int, len(x))
		for i, v := range x {
			out[i] = int(math.Round(v * unit))
			if math.Abs(v*unit-float64(out[i])) > 1e-6 {
				t.Fatalf("%s: %v is not on a lattice of 1/%v", c.ID, v, unit)
			}
		}
		return out
	}
	switch {
	case strings.HasPrefix(c.ID, "mouse-treatment"), strings.HasPrefix(c.ID, "mouse-control"):
		group := strings.Split(c.ID, "-")[1]
		return sumLaw(1, whole(d.Where("group", group).Numbers("days"), 1), nil)
	case strings.HasPrefix(c.ID, "shoes"):
		a, b := d.Numbers("A"), d.Numbers("B")
		for i := range b {
			b[i] -= a[i]
		}
		return sumLaw(10, whole(b, 10), nil)
	case strings.HasPrefix(c.ID, "plant"):
		return sumLaw(100, whole(d.Where("group", "trt2").Numbers("weight"), 100), whole(d.Where("group", "trt1").Numbers("weight"), 100))
	case strings.HasPrefix(c.ID, "precip"):
		return sumLaw(10, whole(d.Numbers("in_per_year"), 10), nil)
	case strings.HasSuffix(c.ID, "-mean-bca"):
		return sumLaw(1, whole(d.Numbers(c.Columns[0]), 1), nil)
	}
	return nil
}

// sumLaw convolves the empirical distribution of first n times with itself, by the Fourier transform, and likewise that
// of second, reversed, if there is one of the same number. Observations are in units of 1/unit.
func sumLaw(unit float64, first, second []int) *law {
	n := len(first)
	least, most, total := n*slices.Min(first), n*slices.Max(first), 0
	for _, v := range first {
		total += v
	}
	if second != nil {
		least, most = least-n*slices.Max(second), most-n*slices.Min(second)
		for _, v := range second {
			total -= v
		}
	}
	size := 1
	for size < most-least+1 {
		size *= 2
	}
	fft := fourier.NewFFT(size)
	product := make([]complex128, size/2+1)
	for i := range product {
		product[i] = 1
	}
	multiply := func(values []int, origin, sign int) {
		one := make([]float64, size)
		for _, v := range values {
			one[sign*(v-origin)] += 1 / float64(n)
		}
		for i, f := range fft.Coefficients(nil, one) {
			for range n {
				product[i] *= f
			}
		}
	}
	multiply(first, slices.Min(first), 1)
	if second != nil {
		multiply(second, slices.Max(second), -1)
	}
	share := fft.Sequence(nil, product)[:most-least+1]
	for i := range share {
		share[i] = max(0, share[i]/float64(size))
	}
	scale := unit * float64(n)
	return &law{first: float64(least) / scale, step: 1 / scale, share: share, at: total - least}
}

// bca returns the limits inf{t: P(T ≤ t) ≥ level} at the two corrected levels, and z0.
func (l *law) bca(a, tieWeight float64) reference.Figures {
	below := tieWeight * l.share[l.at]
	for _, p := range l.share[:l.at] {
		below += p
	}
	z0 := distuv.UnitNormal.Quantile(below)
	limit := func(p float64) float64 {
		w := z0 + distuv.UnitNormal.Quantile(p)
		level := distuv.UnitNormal.CDF(z0 + w/(1-a*w))
		sum := 0.0
		for i, q := range l.share {
			if sum += q; sum >= level {
				return l.first + float64(i)*l.step
			}
		}
		return math.NaN()
	}
	return reference.Figures{"lower": limit(0.025), "upper": limit(0.975), "z0": z0}
}

// jackknifeChecks adds the cases of the delete-one jackknife: what the engine finds without each unit, and the
// acceleration.
func jackknifeChecks(checks map[string]func(*testing.T, reference.Case)) {
	add := func(id string, s setup, plugIn bool, without ...string) {
		checks[id] = func(t *testing.T, c reference.Case) {
			study := s.prepared(t, 999, 1)
			b := study.batches()[0]
			w := newBench(b.design, b.analyses)
			w.resample.Whole()
			w.take(w.resample)
			estimate, err := w.estimate(0)
			if err != nil {
				t.Fatal(err)
			}
			left, err := w.leaveOut(0)
			if err != nil {
				t.Fatal(err)
			}
			n := float64(len(left))
			if plugIn { // the case has the variance with divisor n
				estimate *= (n - 1) / n
				for i := range left {
					left[i] *= (n - 2) / (n - 1)
				}
			}
			mean, spread := 0.0, 0.0
			for _, v := range left {
				mean += v / n
			}
			for _, v := range left {
				spread += (v - mean) * (v - mean)
			}
			got := reference.Figures{"se": math.Sqrt((n - 1) / n * spread), "bias": (n - 1) * (mean - estimate),
				"a": acceleration(w.design, left)}
			for _, name := range without {
				if math.Abs(got[name]) > 1e-9*got["se"] {
					t.Errorf("%s: %s of a mean is %g, not 0", c.ID, name, got[name])
				}
				delete(got, name)
			}
			c.Compare(t, got, 0)
		}
	}
	of := func(file, column, statistic string) setup {
		return setup{file, column + ": {type: number}", "", "", "statistic: " + statistic + ", of: " + column, "bca"}
	}
	sd := setups["mouse-treatment-mean"]
	sd.statistic = strings.Replace(sd.statistic, "mean", "standard deviation", 1)
	add("aircondit-jmean", of("aircondit.csv", "hours", "mean"), false, "bias")
	add("aircondit-jcv", of("aircondit.csv", "hours", "coefficient of variation"), false)
	add("mouse-treatment-jmean", setups["mouse-treatment-mean"], false, "bias")
	add("mouse-treatment-jsd", sd, false)
	add("precip-jsd", of("precip.csv", "in_per_year", "standard deviation"), false)
	add("precip-jcv", of("precip.csv", "in_per_year", "coefficient of variation"), false)
	add("pastes-jvarn", of("pastes.csv", "strength", "variance"), true)
	add("law-jcor", setups["law-cor"], false)
}

// The Monte-Carlo error that a record gives is what another seed would show: over 200 seeds the standard deviation of
// each limit agrees with the mean of the errors given. A standard deviation from 200 runs has itself a standard error of
// 5 %, so 15 % is three of them.
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
					t.Errorf("%s, %s %s: SD over seeds %g, mean of the errors given %g", s.statistic, name, end, sd, given)
				}
			}
		}
	}
}
