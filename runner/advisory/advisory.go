// Package advisory holds the duty of care: checks on a sample and its resamples that say when an interval should not be
// trusted.
//
// Each check is one entry of the registry with a code that does not change, and returns at most one advisory with its
// evidence as numbers. A "stop" withholds the verdict of the interval, never the estimate. That no advisory is given
// does not show that all is well; only what is listed is checked.
package advisory

import (
	"fmt"
	"math"
	"slices"

	"lotproof/runner/interval"
	"lotproof/runner/record"
	"lotproof/runner/source"
	"lotproof/spec"
)

// The severities.
const (
	Note    = "note"
	Caution = "caution"
	Stop    = "stop"
)

// A Definition is one entry of the catalogue of advisories.
type Definition struct {
	Code    string // stable words
	Summary string // what is checked and the thresholds
	Action  string // what the analyst should do
	Source  string // where the rule comes from
	Every   bool   // a stop concerns every method on these rows, companions too
	check   func(in *Input) *finding
}

// A finding is what a check found.
type finding struct {
	severity string
	text     string
	evidence []record.Value
}

// An Input is what the checks may look at.
type Input struct {
	Plan         *spec.Statistic
	Table        *source.Table
	Selection    *source.Selection
	Columns      [][]float64       // the columns of the statistic on the used rows
	Contribution []float64         // what each used row contributes to the statistic, on any scale; nil: not known
	UnitOf       []int32           // outermost resampling unit of each used row
	Independent  bool              // every outermost unit is a single row
	Partly       bool              // some, not all, units span both groups of a comparison
	Values       []float64         // resample values in ascending order
	PivotsFailed int               // resamples with a value but without a standard error
	Cut          []string          // methods whose limit was cut at the edge of the possible values
	Record       *record.Statistic // estimate, design, intervals so far
}

var registry = []*Definition{
	&fewUnits, &quantileOutOfReach, &pseudoReplication, &spreadFromFewUnits, &skewedMean, &narrowInterval, &smallStratum,
	&failedResamples, &pivotsWithoutError, &biased, &tiedValues, &unstableCorrection, &beyondRange, &partlyPaired, &seedMargin,
}

// All returns the checks in the order of the catalogue.
func All() []*Definition { return slices.Clone(registry) }

// Check runs every check that needs no verdict and returns the advisories, the gravest first, else in catalogue order.
func Check(in *Input) []record.Advisory {
	out := []record.Advisory{}
	for _, d := range registry {
		if d.check == nil {
			continue
		}
		f := d.check(in)
		if f == nil {
			continue
		}
		if f.severity == Stop && !d.Every && !resampling(in.Plan.Intervals[0]) {
			f.severity = Caution // an exact or classical interval decides; the doubt is about the others
		}
		out = append(out, d.advisory(f))
	}
	order := map[string]int{Stop: 0, Caution: 1, Note: 2}
	slices.SortStableFunc(out, func(a, b record.Advisory) int { return order[a.Severity] - order[b.Severity] })
	return out
}

// StopsEvery says whether a stop with this code leaves no method to decide, not even a companion.
func StopsEvery(code string) bool {
	return slices.ContainsFunc(registry, func(d *Definition) bool { return d.Code == code && d.Every })
}

func (d *Definition) advisory(f *finding) record.Advisory {
	evidence := f.evidence
	if evidence == nil {
		evidence = []record.Value{}
	}
	return record.Advisory{Code: d.Code, Severity: f.severity, Text: f.text, Evidence: evidence, Action: d.Action,
		Source: d.Source}
}

// value is one figure of evidence; a figure that is not finite is left null.
func value(name string, v float64) record.Value {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return record.Value{Name: name}
	}
	return record.Value{Name: name, Value: &v}
}

// resampled says whether the plan asks for an interval made of resample values. The others need no advice about them.
func (in *Input) resampled() bool { return slices.ContainsFunc(in.Plan.Intervals, resampling) }

// resampling says whether a method is made of resample values.
func resampling(method string) bool {
	d := interval.Lookup(method)
	return d != nil && !d.Classical
}

// count writes a number with the singular or the plural of a noun.
func count(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}

// decides says whether the interval that carries the verdict, the first, is one of the methods.
func (in *Input) decides(methods ...string) bool {
	return slices.Contains(methods, in.Plan.Intervals[0])
}

// units returns the number of outermost units, of the smaller group in a comparison.
func (in *Input) units() int {
	if c := in.Record.Compare; c != nil {
		return min(c.Units[0], c.Units[1])
	}
	return in.Record.Design.Units
}

func percent(p float64) string { return fmt.Sprintf("%.3g %%", 100*p) }
