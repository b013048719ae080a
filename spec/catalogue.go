package spec

// A Catalogue tells Read which statistics and intervals exist, so that names and parameters can be checked where they
// are written. The runner supplies it; spec knows no statistic by itself.
type Catalogue struct {
	Statistics []StatisticEntry
	Intervals  []IntervalEntry
}

// A StatisticEntry describes one statistic to the reader of a plan.
type StatisticEntry struct {
	Name       string // trade name as printed; matched without regard to case
	Columns    int    // how many number columns "of" must name: 0, 1 or 2
	Parameters []Parameter
}

// ParameterKind says what a parameter of a statistic holds.
type ParameterKind string

const (
	KindNumber    ParameterKind = "number"    // Min < value < Max, or Min ≤ value < Max with MinIncluded
	KindWhole     ParameterKind = "whole"     // Min ≤ value ≤ Max
	KindCondition ParameterKind = "condition" // a condition over the columns of the source
	KindCategory  ParameterKind = "category"  // the name of a category column
)

// A Parameter is one entry that "with" may hold.
type Parameter struct {
	Name        string
	Kind        ParameterKind
	Min, Max    float64
	MinIncluded bool
	Default     string // empty: the parameter is required
	Summary     string // what it means, one sentence
}

// An IntervalEntry describes one interval method to the reader of a plan.
type IntervalEntry struct {
	Name       string
	Statistics []string // the statistics that it applies to; empty: all
	Compare    bool     // whether it applies to a comparison of two groups
}
