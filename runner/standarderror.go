package runner

import (
	"math"
	"slices"

	"lotproof/runner/draw"
	"lotproof/runner/statistic"
)

// standardError returns the standard error of analysis j on the resample taken last, where value is its estimate there.
//
// With influence values L of the statistic the unit u of stratum h contributes ψ = Σ L/n over its rows, and
//
//	s² = Σ_h m_h/(m_h − 1) · Σ_u (ψ − ψ̄_h)²
//
// with m_h units in stratum h; for single rows and a mean this is the usual s/√n. A stratum of one unit contributes
// nothing. Groups of a comparison enter by the chain rule. Davison and Hinkley 1997, sections 2.7.2 and 3.2.1.
//
// A statistic without influence values has its own formula for independent rows, or else the jackknife.
func (w *bench) standardError(j int, a *analysis, value float64) (float64, error) {
	switch estimator := a.estimator.(type) {
	case statistic.Influencer:
		return w.influenceError(j, a, estimator)
	case statistic.StandardErrorer:
		if a.independent() && !a.design.Paired && len(a.plan.Resampling.Strata) == 0 {
			return w.ownError(j, a, estimator)
		}
	}
	left, err := w.leaveOut(j)
	if err != nil {
		return 0, err
	}
	variance := 0.0
	for h := range len(w.design.Parts()) - 1 {
		part := left[w.design.Parts()[h]:w.design.Parts()[h+1]]
		m := float64(len(part))
		variance += float64((m - 1) / m * squares(part))
	}
	return math.Sqrt(variance), nil
}

func (w *bench) influenceError(j int, a *analysis, estimator statistic.Influencer) (float64, error) {
	units := w.design.Units
	if cap(w.perUnit) < units {
		w.perUnit = make([]float64, units)
	}
	sums := w.perUnit[:units]
	clear(sums)
	drawn := w.taken.Unit[0]
	err := w.eachInfluence(j, a, estimator, func(at int32, psi float64) { sums[drawn[at]] += psi })
	if err != nil {
		return 0, err
	}
	variance := 0.0
	for h := range len(w.design.Parts()) - 1 {
		part := sums[w.design.Parts()[h]:w.design.Parts()[h+1]]
		if m := float64(len(part)); m > 1 {
			variance += float64(m / (m - 1) * squares(part))
		}
	}
	return finite(math.Sqrt(variance))
}

// eachInfluence calls do with the place of each row in the resample taken last and its influence value divided by the
// number of rows, of both groups of a comparison by the chain rule.
func (w *bench) eachInfluence(j int, a *analysis, estimator statistic.Influencer, do func(at int32, psi float64)) error {
	weights := [2]float64{1, 0}
	var of [2]float64
	sides := 1
	if a.plan.Compare != nil {
		sides = 2
	}
	for side := range sides {
		var err error
		if of[side], err = estimator.Estimate(w.of[j][side].sample); err != nil {
			return err
		}
	}
	if sides == 2 {
		weights = [2]float64{1, -1}
		if a.plan.Compare.As == "ratio" {
			weights = [2]float64{1 / of[1], -of[0] / float64(of[1]*of[1])}
		}
	}
	for side := range sides {
		v := w.of[j][side]
		n := v.sample.N()
		if cap(w.influence) < n {
			w.influence = make([]float64, n)
		}
		out := w.influence[:n]
		if err := estimator.Influence(v.sample, of[side], out); err != nil {
			return err
		}
		scale := weights[side] / float64(n)
		for i, l := range out {
			do(v.place(i), float64(l*scale))
		}
	}
	return nil
}

// contributions returns what each row of the design contributes to the statistic on the whole sample, which must be the
// resample taken last: its influence value, or, for the quantiles, which have none, the observation or its distance from
// the median. It is nil for other statistics.
func (w *bench) contributions(j int, a *analysis) []float64 {
	out := make([]float64, w.design.N())
	if estimator, ok := a.estimator.(statistic.Influencer); ok {
		if w.eachInfluence(j, a, estimator, func(at int32, psi float64) { out[w.taken.Rows[at]] = psi }) != nil {
			return nil
		}
		return out
	}
	if len(a.columns) != 1 {
		return nil
	}
	copy(out, a.columns[0])
	if a.definition.Bounds != nil { // a measure of spread
		sorted := slices.Clone(out)
		slices.Sort(sorted)
		centre := sorted[len(sorted)/2]
		for i, v := range out {
			out[i] = math.Abs(v - centre)
		}
	}
	return out
}

func (w *bench) ownError(j int, a *analysis, estimator statistic.StandardErrorer) (float64, error) {
	var of, own [2]float64
	sides := 1
	if a.plan.Compare != nil {
		sides = 2
	}
	for side := range sides {
		var err error
		if of[side], err = estimator.Estimate(w.of[j][side].sample); err != nil {
			return 0, err
		}
		if own[side], err = estimator.StandardError(w.of[j][side].sample, of[side]); err != nil {
			return 0, err
		}
	}
	if sides == 1 {
		return own[0], nil
	}
	if a.plan.Compare.As == "ratio" {
		own[0] /= of[1]
		own[1] *= of[0] / float64(of[1]*of[1])
	}
	return finite(math.Sqrt(float64(own[0]*own[0]) + float64(own[1]*own[1])))
}

func finite(v float64) (float64, error) {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return 0, statistic.ErrNotFinite
	}
	return v, nil
}

// squares returns the sum of squared deviations from the mean.
func squares(x []float64) float64 {
	sum := 0.0
	for _, v := range x {
		sum += v
	}
	mean := sum / float64(len(x))
	total := 0.0
	for _, v := range x {
		d := v - mean
		total += float64(d * d)
	}
	return total
}

// leaveOut returns the value of analysis j on the resample taken last without each of its outermost drawn units, in
// their order; the first failure ends it.
func (w *bench) leaveOut(j int) ([]float64, error) {
	if w.inner == nil {
		w.inner = newBench(w.design, w.analyses)
	}
	r := w.taken
	out := make([]float64, w.design.Units)
	drawn := r.Unit[0]
	for start := 0; start < len(drawn); {
		end := start
		for end < len(drawn) && drawn[end] == drawn[start] {
			end++
		}
		cut := w.short
		cut.Rows = append(append(cut.Rows[:0], r.Rows[:start]...), r.Rows[end:]...)
		if cut.Unit == nil {
			cut.Unit = make([][]int32, len(r.Unit))
		}
		for level, numbers := range r.Unit {
			cut.Unit[level] = append(append(cut.Unit[level][:0], numbers[:start]...), numbers[end:]...)
		}
		w.inner.takeOnly(j, cut)
		value, err := w.inner.estimate(j)
		if err != nil {
			return nil, err
		}
		out[drawn[start]] = value
		start = end
	}
	return out, nil
}

// acceleration returns the acceleration of the BCa method from the values of the sample without each unit; NaN if it is
// not defined. With d = (m_h − 1)(t̄_h − t₍ᵤ₎) in stratum h,
//
//	a = ⅙ Σ_h Σ d³/m_h³ / ( Σ_h Σ d²/m_h² )^(3/2)
//
// Davison and Hinkley 1997, equation (5.27) and its form for several samples in section 5.3.2.
func acceleration(design *draw.Design, left []float64) float64 {
	var cubes, sum float64
	for h := range len(design.Parts()) - 1 {
		part := left[design.Parts()[h]:design.Parts()[h+1]]
		m := float64(len(part))
		total := 0.0
		for _, v := range part {
			total += v
		}
		mean := total / m
		for _, v := range part {
			d := float64((m-1)*(mean-v)) / m
			square := float64(d * d)
			sum += square
			cubes += float64(square * d)
		}
	}
	if sum == 0 {
		return math.NaN()
	}
	return cubes / (6 * float64(sum*math.Sqrt(sum)))
}
