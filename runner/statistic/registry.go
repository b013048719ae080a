package statistic

import (
	"slices"
	"strings"

	"lotproof/spec"
)

var registry = []*Definition{
	&mean, &median, &trimmedMean, &geometricMean, &quantile, &standardDeviation, &variance, &coefficientOfVariation,
	&interquartileRange, &medianAbsoluteDeviation, &proportion, &pearson, &spearman, &slope, &intercept, &repeatability,
}

// All returns the statistics in the order of the catalogue.
func All() []*Definition { return slices.Clone(registry) }

// Lookup returns the statistic of that name, matched without regard to case, or nil.
func Lookup(name string) *Definition {
	for _, d := range registry {
		if strings.EqualFold(d.Name, name) {
			return d
		}
	}
	return nil
}

// Catalogue describes the statistics to the reader of a plan.
func Catalogue() []spec.StatisticEntry {
	var out []spec.StatisticEntry
	for _, d := range registry {
		out = append(out, spec.StatisticEntry{Name: d.Name, Columns: d.Columns, Parameters: d.Parameters})
	}
	return out
}
