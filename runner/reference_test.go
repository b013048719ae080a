package runner

import (
	"context"
	"fmt"
	"math"
	"path/filepath"
	"strings"
	"sync"
	"testing"

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

// setups are the studies behind the simulated cases; the key is how the names of their cases begin. Cases on the ratio
// of two means are not among the copied ones, because the catalogue has no such statistic; nor are ABC limits, balanced
// draws, time blocks and tests.
var setups = map[string]setup{
	"mouse-treatment-mean": {"mouse.csv", "group: {type: category}, days: {type: number}", "", "",
		`where: 'group == "treatment"', statistic: mean, of: days`, allMethods},
	"mouse-control-mean": {"mouse.csv", "group: {type: category}, days: {type: number}", "", "",
		`where: 'group == "control"', statistic: mean, of: days`, allMethods},
	"shoes-diff": {"shoes.csv", "A: {type: number}, B: {type: number}", "wear: B - A", "",
		"statistic: mean, of: wear", allMethods},
	"aircondit-mean": {"aircondit.csv", "hours: {type: number}", "", "", "statistic: mean, of: hours", allMethods},
	"aircondit-sd": {"aircondit.csv", "hours: {type: number}", "", "", "statistic: standard deviation, of: hours",
		"[percentile, basic, bca]"},
	"darwin-mean": {"darwin.csv", "diff: {type: number}", "", "", "statistic: mean, of: diff", allMethods},
	"rivers-mean": {"rivers.csv", "miles: {type: number}", "", "", "statistic: mean, of: miles", allMethods},
	"precip-mean": {"precip.csv", "in_per_year: {type: number}", "", "", "statistic: mean, of: " +
		"in_per_year", allMethods},
	"precip-mc": {"precip.csv", "in_per_year: {type: number}", "", "", "statistic: mean, of: " +
		"in_per_year", allMethods},
	"law-cor": {"law.csv", "LSAT: {type: number}, GPA: {type: number}", "", "",
		"statistic: Pearson correlation, of: [LSAT, GPA]", "[percentile, basic, bca]"},
	"cars-cor-mc": {"cars.csv", "speed: {type: number}, dist: {type: number}", "", "",
		"statistic: Pearson correlation, of: [speed, dist]", "[percentile, basic, normal, bca]"},
	"galaxies-sd-mc": {"galaxies.csv", "velocity: {type: number}", "", "", "statistic: standard deviation, of: " +
		"velocity",
		"[percentile, basic, normal, bca]"},
	"chickwts-trim20-mc95": {"chickwts.csv", "weight: {type: number}", "", "",
		"statistic: trimmed mean, of: weight, with: {trim: 0.2}", "percentile"},
	"rail-cluster": {"rail.csv", "rail: {type: category}, travel: {type: number}", "", "rail",
		"statistic: mean, of: travel",
		"[percentile, basic]"},
	"pixel-cluster": {"pixel.csv", "dog: {type: category}, pixel: {type: " +
		"number}", "", "dog", "statistic: mean, of: pixel",
		"[percentile, basic, normal]"},
	"toothgrowth-strat": {"toothgrowth.csv", "supp: {type: category}, len: {type: number}", "", "",
		"statistic: mean, of: len, compare: {by: supp, of: [OJ, VC], as: difference}", "[percentile, basic]"},
	"plant-diff-mc": {"plantgrowth.csv", "group: {type: category}, weight: {type: number}", "", "",
		"statistic: mean, of: weight, compare: {by: group, of: [trt2, trt1], as: difference}", allMethods},
	"mouse-treatment-median": {"mouse.csv", "group: {type: category}, days: {type: number}", "", "",
		`where: 'group == "treatment"', statistic: median, of: days`, "percentile"},
	"mouse-control-median": {"mouse.csv", "group: {type: category}, days: {type: number}", "", "",
		`where: 'group == "control"', statistic: median, of: days`, "percentile"},
	"bod-median": {"bod.csv", "demand: {type: number}", "", "", "statistic: median, of: demand", "percentile"},
	"aircondit-median": {"aircondit.csv", "hours: {type: number}", "", "", "statistic: median, of: " +
		"hours", "percentile"},
	"rivers-median": {"rivers.csv", "miles: {type: number}", "", "", "statistic: median, of: miles", "percentile"},
	"chem-median":   {"chem.csv", "copper: {type: number}", "", "", "statistic: median, of: copper", "percentile"},
}

// prepared reads the plan of a setup and prepares it.
func (s setup) prepared(t testing.TB, resamples int, seed uint64) *Study {
	t.Helper()
	return s.preparedIn(t, filepath.Dir(reference.Path(t, s.file)), resamples, seed)
}

// preparedIn is prepared with the data file in another folder.
func (s setup) preparedIn(t testing.TB, dir string, resamples int, seed uint64) *Study {
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
	study, err := Prepare(plan, dir)
	if err != nil {
		t.Fatal(err)
	}
	return study
}

func (s setup) run(t testing.TB, resamples int, seed uint64) *record.Statistic {
	t.Helper()
	return only(t, s.prepared(t, resamples, seed))
}

// only runs a study of one statistic.
func only(t testing.TB, s *Study) *record.Statistic {
	t.Helper()
	r, err := s.Run(context.Background(), Options{})
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
