package statistic

import (
	"math"

	"lotproof/spec"
)

var repeatability = Definition{
	Name:    "repeatability standard deviation",
	Columns: 1,
	Parameters: []spec.Parameter{{Name: "factor", Kind: spec.KindCategory,
		Summary: "The column within whose levels the readings are repeats."}},
	MinN:    2,
	Summary: "The pooled standard deviation within the levels of one factor.",
	Formula: "s_r = √( ΣΣ(xᵢⱼ − x̄ᵢ)² / (N − k) )",
	Where:   "xᵢⱼ is reading j in level i, x̄ᵢ the mean of level i, N the number of readings, k that of levels",
	Assumptions: "Readings within a level differ by repeatability alone and with the same spread everywhere. Levels " +
		"with one reading tell nothing.",
	Sources: []string{"ISO 5725-2:2019, Accuracy (trueness and precision) of measurement methods and results — Part " +
		"2: Basic method for the determination of repeatability and reproducibility of a standard measurement method"},
	Unit:   sameUnit,
	Bounds: nonNegative,
	New:    func([]spec.Setting) Estimator { return repeatabilityOf{} },
}

type repeatabilityOf struct{}

func (repeatabilityOf) Estimate(s *Sample) (float64, error) {
	squares, df := within(s)
	if df < 1 {
		return 0, ErrTooFew
	}
	return number(math.Sqrt(squares / df))
}

// within returns the sum of squares within groups and its degrees of freedom. Means are taken about the first reading
// of each group, so that equal readings give exactly 0. The scratch holds, for each group, number, mean and first
// reading.
func within(s *Sample) (squares, df float64) {
	x := s.Column(0)
	codes, groups := s.Groups()
	work := s.Scratch(3 * groups)
	count, mean, first := work[:groups], work[groups:2*groups], work[2*groups:]
	clear(work)
	for i, g := range codes {
		if count[g] == 0 {
			first[g] = x[i]
		}
		count[g]++
		mean[g] += x[i] - first[g]
	}
	for g, n := range count {
		if n > 0 {
			mean[g] = first[g] + mean[g]/n
			df += n - 1
		}
	}
	for i, g := range codes {
		d := x[i] - mean[g]
		squares += float64(d * d)
	}
	return squares, df
}

// Influence is that of the pooled variance as the ratio of Σ(xᵢⱼ−x̄ᵢ)² to Σ(nᵢ−1), each reading of level i bringing
// (nᵢ−1)/nᵢ of a degree of freedom, divided by 2s.
func (repeatabilityOf) Influence(s *Sample, value float64, out []float64) error {
	if value == 0 {
		return ErrNoSpread
	}
	_, df := within(s)
	codes, groups := s.Groups()
	work := s.Scratch(3 * groups) // still holds what within left there
	count, mean := work[:groups], work[groups:2*groups]
	scale := float64(s.N()) / df
	square := float64(value * value)
	for i, v := range s.Column(0) {
		g := codes[i]
		d := v - mean[g]
		out[i] = float64(scale*(float64(d*d)-float64(square*((count[g]-1)/count[g])))) / (2 * value)
	}
	return nil
}
