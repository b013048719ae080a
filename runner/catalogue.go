// Package runner executes a study plan: it reads the data, draws the resamples, computes the statistics and their
// limits, judges the criteria and says when the results should not be trusted.
//
// Prepare does everything that needs no random draw, so that a plan can be checked without running it; Run does the
// rest. Results do not depend on the number of workers, on their timing, or on the machine.
package runner

import (
	"lotproof/runner/interval"
	"lotproof/runner/statistic"
	"lotproof/spec"
)

// Catalogue lists the statistics and intervals that a plan may name.
func Catalogue() spec.Catalogue {
	return spec.Catalogue{Statistics: statistic.Catalogue(), Intervals: interval.Catalogue()}
}
