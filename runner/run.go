package runner

import (
	"context"
	"encoding/hex"
	"math"
	"path"
	"runtime"
	"slices"
	"sort"

	"lotproof/runner/advisory"
	"lotproof/runner/draw"
	"lotproof/runner/interval"
	"lotproof/runner/record"
	"lotproof/runner/statistic"
	"lotproof/spec"
)

// Version is the version of the program, as records carry it.
const Version = "0.1.0"

// Options say how a run is carried out; none of them can change a result.
type Options struct {
	Workers  int                   // goroutines that draw; 0: one a processor
	Progress func(done, total int) // called now and then with resamples drawn so far, from any goroutine; may be nil
}

// Run draws the resamples, computes and judges. The only errors are those of the context.
func (s *Study) Run(ctx context.Context, o Options) (*record.Results, error) {
	workers := o.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	results := &record.Results{
		Plan: record.Plan{Study: s.Plan.Study.ID, File: path.Base(s.Plan.File), SHA256: s.Plan.SHA256, Text: s.Plan.Text,
			Resolved: *s.Plan},
		Program:    record.Program{Version: Version, PlanLanguage: s.Plan.Language, Generator: draw.Generator},
		Sources:    s.sources(),
		Statistics: make([]record.Statistic, len(s.analyses)),
	}
	batches := s.batches()
	counter := newCounter(batches, o.Progress)
	for _, b := range batches {
		if err := b.resample(ctx, workers, counter); err != nil {
			return nil, err
		}
		w := newBench(b.design, b.analyses)
		for j, a := range b.analyses {
			results.Statistics[a.index] = s.report(w, j, b.values[j])
		}
		b.values = nil // a study of many designs need not keep the values of all of them
	}
	results.Verdict = worst(results.Statistics)
	return results, nil
}

// newCounter adds up progress over all batches.
func newCounter(batches []*batch, progress func(done, total int)) func(int) {
	if progress == nil {
		return func(int) {}
	}
	total := 0
	for _, b := range batches {
		total += b.most
	}
	done := make(chan int, 1)
	done <- 0
	return func(n int) {
		sum := <-done + n
		progress(sum, total)
		done <- sum
	}
}

func (s *Study) sources() []record.Source {
	var out []record.Source
	for _, t := range s.Data.Tables {
		r := record.Source{Name: t.Source.Name, File: t.Source.File, Bytes: t.Bytes, SHA256: t.SHA256,
			Approved: "not stated", Ignored: append([]string{}, t.Ignored...), Exclusions: []record.Exclusion{}}
		if t.Source.SHA256 != "" {
			r.Approved = "agrees" // else source.Load would have refused the data
		}
		for _, e := range t.Source.Exclude {
			r.Exclusions = append(r.Exclusions, record.Exclusion{Where: e.Where, Because: e.Because, By: e.By, Lines: []int{}})
		}
		for _, row := range t.Rows {
			r.Rows.Read++
			if row.Excluded < 0 {
				r.Rows.Used++
				continue
			}
			r.Rows.Excluded++
			e := &r.Exclusions[row.Excluded]
			e.Lines = append(e.Lines, row.Line)
		}
		out = append(out, r)
	}
	return out
}

// report makes the record of one statistic from its resample values.
func (s *Study) report(w *bench, j int, v *values) record.Statistic {
	a := w.analyses[j]
	p := a.plan
	out := a.outline()
	w.resample.Whole()
	w.take(w.resample)
	estimate, err := w.estimate(j)
	if p.Compare != nil {
		for side := range 2 {
			if of, err := a.estimator.Estimate(w.of[j][side].sample); err == nil {
				out.Compare.Estimates[side] = &of
			}
		}
	}
	if err != nil {
		out.EstimateReason = err.Error()
		accept(p, s.Plan.Rounding, &out)
		return out
	}
	out.Estimate = &estimate
	own := math.NaN()
	if v.own != nil {
		if e, err := w.standardError(j, a, estimate); err == nil {
			own = e
		}
	}
	accelerate := math.NaN()
	if slices.ContainsFunc(a.intervals, func(d *interval.Definition) bool { return d.Skewness }) {
		if left, err := w.leaveOut(j); err == nil {
			accelerate = acceleration(w.design, left)
		}
	}

	good, pivots := a.split(v, estimate)
	out.Resamples = len(v.value)
	out.FailedResamples = len(v.value) - good.N()
	out.Failures = failures(v)
	if good.N() >= 2 {
		sd, bias := good.SD(), good.Mean()-estimate
		out.StandardError, out.Bias = number(sd), number(bias)
		out.Distribution = distribution(good)
	}
	least, most := a.space()
	base := interval.Input{Bound: p.Bound, Estimate: estimate, Values: good, Pivots: pivots, OwnError: own,
		Acceleration: accelerate, Least: least, Most: most, Sample: a.sample}
	var cut []string
	for _, level := range p.Confidence {
		in := base
		in.Confidence = level
		for _, d := range a.methods() {
			r := d.Find(&in)
			companion := d == a.companion
			out.Intervals = append(out.Intervals, recordInterval(d, companion, &in, r))
			if r.Cut && !companion {
				cut = append(cut, d.Name)
			}
		}
	}
	out.Advisories = advisory.Check(&advisory.Input{
		Plan: p, Table: a.selection.Table, Selection: a.selection, Record: &out, Values: good.Sorted(),
		Contribution: w.contributions(j, a), PivotsFailed: failedPivots(v), Cut: cut, Columns: a.columns, Independent: a.independent(),
		UnitOf: a.design.UnitOf(0), Partly: a.design.Partly,
	})
	accept(p, s.Plan.Rounding, &out)
	out.Advisories = append(out.Advisories, advisory.Margin(&out)...)
	return out
}

// outline is the record of the statistic before anything is drawn.
func (a *analysis) outline() record.Statistic {
	p := a.plan
	out := record.Statistic{
		ID: p.ID, Label: p.Label, Role: p.Role, Source: p.Source, Where: p.Where, Statistic: p.Name,
		Of: append([]string{}, p.Of...), With: append([]spec.Setting{}, p.With...), Unit: a.unit, Decimals: a.decimals(),
		Rows: a.selection.Counts(), N: len(a.selection.Rows), Design: a.record(), Failures: []record.Failure{},
		Intervals: []record.Interval{}, Accept: []record.Accept{}, Advisories: []record.Advisory{},
	}
	if p.Compare != nil {
		out.Compare = a.recordCompare()
	}
	return out
}

// methods returns the intervals that the plan names and then the companion, if one applies.
func (a *analysis) methods() []*interval.Definition {
	if a.companion == nil {
		return a.intervals
	}
	return append(slices.Clone(a.intervals), a.companion)
}

// decimals returns how many decimals of the figures are shown at most: as the plan says, else one more than the column
// has where the statistic has its unit, else −1, no statement.
func (a *analysis) decimals() int {
	if a.plan.Decimals >= 0 {
		return a.plan.Decimals
	}
	if len(a.plan.Of) == 1 && a.plan.Compare == nil || a.plan.Compare != nil && a.plan.Compare.As == "difference" {
		if d := a.selection.Table.Column(a.plan.Of[0]).Decimals; d >= 0 && a.unit != "" {
			return d + 1
		}
	}
	return -1
}

func (a *analysis) record() record.Design {
	d := a.design
	out := record.Design{Unit: append([]string{}, a.plan.Resampling.Unit...), By: append([]string{}, a.plan.Resampling.Strata...),
		Units: d.Units, SHA256: hex.EncodeToString(d.Digest[:])}
	for _, st := range d.Strata {
		name := st.Name
		if st.Group >= 0 {
			group := a.plan.Compare.Of[st.Group]
			if name != "" {
				group += ", " + name
			}
			name = group
		}
		out.Strata = append(out.Strata, record.Stratum{Name: name, Units: st.Units, Rows: st.Rows})
	}
	return out
}

func (a *analysis) recordCompare() *record.Compare {
	c := a.plan.Compare
	out := &record.Compare{By: c.By, Of: c.Of, As: c.As, Paired: a.design.Paired}
	seen := [2]map[int32]bool{{}, {}}
	for row, g := range a.selection.Group {
		out.N[g]++
		seen[g][a.design.UnitOf(0)[row]] = true
	}
	for g := range seen {
		out.Units[g] = len(seen[g])
	}
	return out
}

// split returns the resample values that exist and, if they were asked for, the studentized ratios that exist.
func (a *analysis) split(v *values, estimate float64) (good, pivots *interval.Values) {
	kept := make([]float64, 0, len(v.value))
	var ratios []float64
	for i, value := range v.value {
		if math.IsNaN(value) {
			continue
		}
		kept = append(kept, value)
		if v.own != nil && v.own[i] > 0 {
			if ratio := (value - estimate) / v.own[i]; !math.IsInf(ratio, 0) {
				ratios = append(ratios, ratio)
			}
		}
	}
	if v.own != nil {
		pivots = interval.NewValues(ratios)
	}
	return interval.NewValues(kept), pivots
}

// failedPivots counts the resamples that have a value but no standard error above 0.
func failedPivots(v *values) int {
	failed := 0
	for i, own := range v.own {
		if !math.IsNaN(v.value[i]) && !(own > 0) {
			failed++
		}
	}
	return failed
}

func failures(v *values) []record.Failure {
	counts := make([]int, len(statistic.Reasons)+1)
	for _, r := range v.reason {
		counts[r]++
	}
	out := []record.Failure{}
	for i, reason := range statistic.Reasons {
		if n := counts[i+1]; n > 0 {
			out = append(out, record.Failure{Reason: reason.Error(), Count: n})
		}
	}
	return out
}

// number returns a pointer to a finite figure, nil otherwise.
func number(v float64) *float64 {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return nil
	}
	return &v
}

func recordInterval(d *interval.Definition, companion bool, in *interval.Input, r interval.Result) record.Interval {
	out := record.Interval{Method: d.Name, Requested: d.Name, Confidence: in.Confidence.Text, Bound: in.Bound,
		Lower: number(r.Lower), Upper: number(r.Upper), Reason: r.Reason,
		MonteCarloError: record.Limits{Lower: number(r.LowerError), Upper: number(r.UpperError)},
		Attained:        number(r.Attained), Companion: companion, Parameters: []record.Value{}}
	if companion {
		out.Requested = "companion"
	}
	for _, p := range r.Parameters {
		out.Parameters = append(out.Parameters, record.Value{Name: p.Name, Value: number(p.Value)})
	}
	return out
}

// bins is how many bins the histogram of the resample values has.
const bins = 40

// quantiles are the probabilities at which the distribution of the resample values is recorded.
var quantiles = []float64{0, 0.001, 0.005, 0.01, 0.025, 0.05, 0.1, 0.25, 0.5, 0.75, 0.9, 0.95, 0.975, 0.99, 0.995, 0.999, 1}

func distribution(v *interval.Values) *record.Distribution {
	sorted := v.Sorted()
	low, high := sorted[0], sorted[len(sorted)-1]
	out := &record.Distribution{}
	step := (high - low) / bins
	if low == high || step == 0 || math.IsInf(step, 0) {
		out.Edges, out.Counts = []float64{low, high}, []int{len(sorted)}
	} else {
		for i := range bins {
			out.Edges = append(out.Edges, low+float64(float64(i)*step))
		}
		out.Edges = append(out.Edges, high)
		at := 0
		for _, edge := range out.Edges[1:bins] {
			next := sort.SearchFloat64s(sorted, edge-float64(1e-9*step)) // a value on the edge but for rounding is in
			out.Counts = append(out.Counts, next-at)
			at = next
		}
		out.Counts = append(out.Counts, len(sorted)-at)
	}
	for _, p := range quantiles {
		k := min(max(int(math.Ceil(float64(p*float64(len(sorted))))), 1), len(sorted))
		out.Quantiles = append(out.Quantiles, record.Point{P: p, Value: sorted[k-1]})
	}
	return out
}

// Outline returns what a run would compute, without any figure: sources, rows, designs, methods and companions.
func (s *Study) Outline() *record.Results {
	out := &record.Results{Plan: record.Plan{Study: s.Plan.Study.ID, File: path.Base(s.Plan.File), SHA256: s.Plan.SHA256,
		Text: s.Plan.Text, Resolved: *s.Plan}, Sources: s.sources(),
		Program: record.Program{Version: Version, PlanLanguage: s.Plan.Language, Generator: draw.Generator}}
	for _, a := range s.analyses {
		one := a.outline()
		for _, level := range a.plan.Confidence {
			for _, d := range a.methods() {
				in := record.Interval{Method: d.Name, Confidence: level.Text, Bound: a.plan.Bound, Companion: d == a.companion}
				one.Intervals = append(one.Intervals, in)
			}
		}
		out.Statistics = append(out.Statistics, one)
	}
	return out
}
