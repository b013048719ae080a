// Package interval turns resample values into confidence limits.
//
// Each method is one file and one line in the registry: its definition in words, its formula, its limits of validity,
// its source, and the limits themselves. Ranks among the resample values are found in exact integers from the decimal
// text of the confidence, so that no last bit decides which value is taken. A limit that cannot be had comes back as a
// reason; no method ever stands in for another.
package interval

import (
	"math"
	"math/big"
	"slices"
	"strings"

	"lotproof/spec"
)

// A Definition is one entry of the catalogue of intervals.
type Definition struct {
	Name       string
	Statistics []string // the statistics it applies to; empty: all
	Compare    bool     // whether it applies to a comparison of two groups
	Classical  bool     // needs no resample values: a companion
	Pivots     bool     // needs a standard error on every resample
	Skewness   bool     // needs the acceleration
	Summary    string   // how the limits come about, one or two sentences
	Formula    string   // in plain Unicode
	Where      string   // what the symbols mean
	Limits     string   // when it should not be trusted
	Sources    []string // literature, as printed in the reference list

	limits func(in *Input) Result
}

// An Input is what a method may use.
type Input struct {
	Bound      spec.Bound
	Confidence spec.Number
	Estimate   float64

	Values   *Values // resample values; nil for classical methods
	Pivots   *Values // (resample value − estimate) ÷ its own standard error
	OwnError float64 // standard error of the estimate by the same formula, for the pivots
	// Acceleration is that of the BCa method; NaN if it is not defined for this sample.
	Acceleration float64
	// Least and Most bound the possible values of the statistic; infinite where there is no bound.
	Least, Most float64

	Sample *Sample // for classical methods; nil where the rows are not independent
}

// A Sample holds what the classical methods need of independent observations.
type Sample struct {
	Sorted []float64    // the observations in ascending order
	Groups [2][]float64 // with a comparison: the two groups
	P      *big.Rat     // for quantiles: the probability, exactly
	As     string       // with a comparison: difference | ratio
}

// A Result is what a method found. A limit that was not asked for is NaN; so is one that cannot be had, and then Reason
// says why.
type Result struct {
	Lower, Upper           float64
	LowerError, UpperError float64 // Monte-Carlo standard errors; NaN where there is none
	Attained               float64 // confidence of exact methods on ranks; NaN for others
	Reason                 string
	Parameters             []Parameter
	Cut                    bool // a limit was outside the possible values and was cut at their edge
}

// A Parameter is an intermediate figure that a reviewer may want to check.
type Parameter struct {
	Name  string
	Value float64
}

var registry = []*Definition{
	&percentile, &basic, &normal, &studentized, &bca, &orderStatistic, &student, &chiSquare, &clopperPearson,
}

// All returns the methods in the order of the catalogue.
func All() []*Definition { return slices.Clone(registry) }

// Lookup returns the method of that name, matched without regard to case, or nil.
func Lookup(name string) *Definition {
	for _, d := range registry {
		if strings.EqualFold(d.Name, name) {
			return d
		}
	}
	return nil
}

// Catalogue describes the methods to the reader of a plan.
func Catalogue() []spec.IntervalEntry {
	var out []spec.IntervalEntry
	for _, d := range registry {
		out = append(out, spec.IntervalEntry{Name: d.Name, Statistics: d.Statistics, Compare: d.Compare})
	}
	return out
}

// Find returns the limits of the method. Limits of a statistic outside its possible values are cut at their edge.
func (d *Definition) Find(in *Input) Result {
	r := d.limits(in)
	if r.Reason == "" && (in.lower() && math.IsNaN(r.Lower) || in.upper() && math.IsNaN(r.Upper)) {
		return refuse("the limit is too large to be represented")
	}
	if !in.lower() {
		r.Lower, r.LowerError = math.NaN(), math.NaN()
	}
	if !in.upper() {
		r.Upper, r.UpperError = math.NaN(), math.NaN()
	}
	for _, v := range []float64{r.Lower, r.Upper} {
		if math.IsInf(v, 0) {
			return refuse("the limit is too large to be represented")
		}
	}
	if r.Lower < in.Least {
		r.Lower, r.Cut = in.Least, true
	}
	if r.Upper > in.Most {
		r.Upper, r.Cut = in.Most, true
	}
	if r.Lower > in.Most || r.Upper < in.Least {
		return refuse("the limit lies outside the possible values of the statistic")
	}
	return r
}

// refuse is the result of a method that cannot be had.
func refuse(reason string) Result {
	nan := math.NaN()
	return Result{Lower: nan, Upper: nan, LowerError: nan, UpperError: nan, Attained: nan, Reason: reason}
}

// found is a result with limits and their Monte-Carlo errors.
func found(lower, upper, lowerError, upperError float64) Result {
	return Result{Lower: lower, Upper: upper, LowerError: lowerError, UpperError: upperError, Attained: math.NaN()}
}

// exactly is a result without Monte-Carlo error.
func exactly(lower, upper float64) Result { return found(lower, upper, math.NaN(), math.NaN()) }

func (in *Input) lower() bool { return in.Bound != spec.Upper }
func (in *Input) upper() bool { return in.Bound != spec.Lower }

// tail returns the probability beyond each limit that is asked for, exactly: (1 − confidence)/2, or 1 − confidence for
// a one-sided bound.
func (in *Input) tail() *big.Rat {
	level, ok := new(big.Rat).SetString(in.Confidence.Text)
	if !ok {
		panic("interval: confidence is not a decimal: " + in.Confidence.Text) // spec checks every number
	}
	tail := new(big.Rat).Sub(big.NewRat(1, 1), level)
	if in.Bound == spec.TwoSided {
		tail.Mul(tail, big.NewRat(1, 2))
	}
	return tail
}
