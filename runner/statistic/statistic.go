// Package statistic holds the estimators: for each its definition in words, its formula and source, its value on a
// sample, and its empirical influence values where they have a closed form.
//
// One statistic is one file and one line in the registry. Nothing here knows how rows are drawn or limits are formed.
// Every product that feeds a sum is wrapped in float64(...), so that no compiler fuses it, and exp and log come from
// package numeric: the same bits on every machine.
package statistic

import (
	"errors"
	"math"
	"strings"

	"lotproof/spec"
)

// Reasons why a statistic has no value on a sample. They are counted for resamples and printed for the sample.
var (
	ErrTooFew      = errors.New("too few observations")
	ErrNoSpread    = errors.New("no spread in the observations")
	ErrNotPositive = errors.New("a value or a mean that must be positive is not")
	ErrZeroDivisor = errors.New("division by zero")
	ErrNotFinite   = errors.New("the value is too large to be represented")
)

// Reasons lists the reasons, in the order in which records count them.
var Reasons = []error{ErrTooFew, ErrNoSpread, ErrNotPositive, ErrZeroDivisor, ErrNotFinite}

// An Estimator computes one statistic, with its parameters bound. It holds no state that changes: one Estimator serves
// several goroutines at once.
type Estimator interface {
	// Estimate returns the value on the sample, finite, or one of the reasons above. It does not modify the sample.
	Estimate(s *Sample) (float64, error)
}

// An Influencer also knows its empirical influence values.
type Influencer interface {
	Estimator
	// Influence sets out[i] to the empirical influence value of observation i, in the unit of the statistic:
	// the derivative of the statistic, as a functional of the weights, at the sample (Efron 1982, chapter 6). The
	// values sum to 0 within rounding, and sqrt(Σ out[i]²)/n is the delta-method standard error for independent
	// observations. value is what Estimate returned for s. out has length s.N().
	Influence(s *Sample, value float64, out []float64) error
}

// A StandardErrorer has a standard error of its own, for independent observations, that is not made of influence
// values.
type StandardErrorer interface {
	Estimator
	StandardError(s *Sample, value float64) (float64, error)
}

// A Definition is one entry of the catalogue.
type Definition struct {
	Name        string           // trade name as printed; matched without regard to case
	Columns     int              // how many number columns it takes: 0, 1 or 2
	Parameters  []spec.Parameter // what "with" may hold
	MinN        int              // fewest observations with a value
	Summary     string           // what it estimates, one sentence
	Formula     string           // in plain Unicode, one line; symbols as in Where
	Where       string           // what the symbols mean
	Assumptions string           // one or two sentences
	Sources     []string         // literature, as printed in the reference list
	Bounds      *[2]float64      // least and most possible value; nil: any number
	// Unit returns the unit of the statistic from the units of its columns.
	Unit func(units []string) string
	// New binds the parameters; with holds one setting for each of Parameters, checked by spec.
	New func(with []spec.Setting) Estimator
}

// Space returns the least and the most possible value of the statistic, infinite where there is none.
func (d *Definition) Space() (least, most float64) {
	if d.Bounds == nil {
		return math.Inf(-1), math.Inf(1)
	}
	return d.Bounds[0], d.Bounds[1]
}

var (
	nonNegative      = &[2]float64{0, math.Inf(1)}
	fraction         = &[2]float64{0, 1}
	correlationRange = &[2]float64{-1, 1}
)

// sameUnit, squaredUnit and noUnit are the usual rules for the unit of a statistic; no unit is written as empty text.
func sameUnit(units []string) string {
	if len(units) == 0 {
		return ""
	}
	return units[0]
}

func squaredUnit(units []string) string {
	if units[0] == "" {
		return ""
	}
	if strings.ContainsAny(units[0], " /*·") {
		return "(" + units[0] + ")²"
	}
	return units[0] + "²"
}

func noUnit([]string) string { return "" }

// number returns a value, or the reason why it cannot be represented.
func number(v float64) (float64, error) {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return 0, ErrNotFinite
	}
	return v, nil
}
