package runner

import (
	"context"
	"errors"
	"math"
	"sync"
	"sync/atomic"

	"lotproof/runner/draw"
	"lotproof/runner/statistic"
)

// blockSize is how many resamples one worker takes at a time. It has no influence on results.
const blockSize = 256

// A run holds the resample values of one analysis, one place a resample.
type values struct {
	value  []float64 // NaN where there is none
	reason []uint8   // 0, or 1 + place in statistic.Reasons
	own    []float64 // standard error on the resample, NaN where there is none; nil if not needed
}

// A batch is the set of analyses that share their resamples.
type batch struct {
	design   *draw.Design
	key      draw.Key
	analyses []*analysis
	values   []*values
	most     int // resamples of the analysis that wants most
}

// batches groups the analyses by design, in the order of the plan.
func (s *Study) batches() []*batch {
	var out []*batch
	index := map[[32]byte]*batch{}
	for _, a := range s.analyses {
		b := index[a.design.Digest]
		if b == nil {
			b = &batch{design: a.design, key: draw.NewKey(s.Plan.Seed.Value, a.design.Digest)}
			index[a.design.Digest] = b
			out = append(out, b)
		}
		n := a.plan.Resampling.Resamples
		v := &values{value: make([]float64, n), reason: make([]uint8, n)}
		for _, d := range a.intervals {
			if d.Pivots && v.own == nil {
				v.own = make([]float64, n)
			}
		}
		b.analyses = append(b.analyses, a)
		b.values = append(b.values, v)
		b.most = max(b.most, n)
	}
	return out
}

// resample fills the values of every analysis of the batch. Workers write only the places of their own resamples.
func (b *batch) resample(ctx context.Context, workers int, done func(resamples int)) error {
	var next atomic.Int64
	var group sync.WaitGroup
	for range max(1, workers) {
		group.Go(func() {
			w := newBench(b.design, b.analyses)
			for {
				first := int(next.Add(blockSize)) - blockSize
				if first >= b.most || ctx.Err() != nil {
					return
				}
				last := min(first+blockSize, b.most)
				for i := first; i < last; i++ {
					b.one(w, i)
				}
				done(last - first)
			}
		})
	}
	group.Wait()
	return ctx.Err()
}

// one computes resample i; resamples are numbered from 1 in the address of the stream.
func (b *batch) one(w *bench, i int) {
	stream := b.key.Stream(uint64(i) + 1)
	w.resample.Draw(&stream)
	w.take(w.resample)
	for j, a := range b.analyses {
		v := b.values[j]
		if i >= len(v.value) {
			continue
		}
		value, err := w.estimate(j)
		if err != nil {
			v.value[i], v.reason[i] = math.NaN(), reasonNumber(err)
		} else {
			v.value[i] = value
		}
		if v.own == nil {
			continue
		}
		v.own[i] = math.NaN()
		if err == nil {
			if own, err := w.standardError(j, a, value); err == nil {
				v.own[i] = own
			}
		}
	}
}

// reasonNumber returns 1 + the place of the error in statistic.Reasons.
func reasonNumber(err error) uint8 {
	for i, reason := range statistic.Reasons {
		if errors.Is(err, reason) {
			return uint8(i + 1)
		}
	}
	panic("runner: a statistic failed for a reason that is not listed: " + err.Error())
}

// A bench is where one worker lays out a resample for the statistics of a batch.
type bench struct {
	design   *draw.Design
	analyses []*analysis
	resample *draw.Resample // the worker's own
	taken    *draw.Resample // what the views hold
	views    []*view
	of       [][2]*view // for each analysis: its sample, or the two samples of its comparison

	influence []float64      // scratch: influence values of one sample
	perUnit   []float64      // scratch: their sums over drawn units
	short     *draw.Resample // scratch: a resample without one unit
	inner     *bench         // for the jackknife, so that it does not disturb this bench
}

// A view is one sample as some analyses of the batch see it: certain columns of certain rows, with group codes.
type view struct {
	a      *analysis // any of those that share the view
	side   int       // 0 or 1: the group of the comparison; −1: all rows
	sample *statistic.Sample
	rows   []int32
	at     []int32 // place in the resample of each row; nil with side −1, where it is the same
	codes  []int32
}

type viewKey struct {
	columns string
	factor  *analysis // views with a factor are not shared
	side    int
}

func newBench(design *draw.Design, analyses []*analysis) *bench {
	w := &bench{design: design, analyses: analyses, resample: design.NewResample(), short: &draw.Resample{}}
	bases := map[string]*statistic.Base{}
	index := map[viewKey]*view{}
	for _, a := range analyses {
		var of [2]*view
		sides := []int{-1}
		if a.plan.Compare != nil {
			sides = []int{0, 1}
		}
		for i, side := range sides {
			key := viewKey{columns: a.key, side: side}
			if a.factor != nil {
				key.factor = a
			}
			if index[key] == nil {
				if bases[a.key] == nil {
					bases[a.key] = statistic.NewBase(a.columns)
				}
				index[key] = &view{a: a, side: side, sample: bases[a.key].NewSample()}
				w.views = append(w.views, index[key])
			}
			of[i] = index[key]
		}
		w.of = append(w.of, of)
	}
	return w
}

// take lays out a resample in every view.
func (w *bench) take(r *draw.Resample) {
	w.taken = r
	for _, v := range w.views {
		v.take(r)
	}
}

// takeOnly lays out a resample for analysis j alone.
func (w *bench) takeOnly(j int, r *draw.Resample) {
	w.taken = r
	for _, v := range w.of[j] {
		if v != nil {
			v.take(r)
		}
	}
}

func (v *view) take(r *draw.Resample) {
	rows := r.Rows
	if v.side >= 0 {
		v.rows, v.at = v.rows[:0], v.at[:0]
		for i, row := range r.Rows {
			if v.a.selection.Group[row] == v.side {
				v.rows = append(v.rows, row)
				v.at = append(v.at, int32(i))
			}
		}
		rows = v.rows
	}
	if v.a.factor == nil {
		v.sample.Draw(rows, nil, 0)
		return
	}
	v.codes = v.codes[:0]
	groups := v.a.groups
	if v.a.level < 0 {
		for _, row := range rows {
			v.codes = append(v.codes, v.a.factor[row])
		}
	} else {
		drawn, locals := r.Unit[v.a.level], int32(v.a.locals)
		for i, row := range rows {
			v.codes = append(v.codes, drawn[v.place(i)]*locals+v.a.local[row])
		}
		groups = 0
		if len(drawn) > 0 {
			groups = int((drawn[len(drawn)-1] + 1) * locals)
		}
	}
	v.sample.Draw(rows, v.codes, groups)
}

// place returns where row i of the view stands in the resample.
func (v *view) place(i int) int32 {
	if v.at == nil {
		return int32(i)
	}
	return v.at[i]
}

// estimate returns the value of analysis j on what was taken.
func (w *bench) estimate(j int) (float64, error) {
	a := w.analyses[j]
	first, err := a.estimator.Estimate(w.of[j][0].sample)
	if err != nil || a.plan.Compare == nil {
		return first, err
	}
	second, err := a.estimator.Estimate(w.of[j][1].sample)
	if err != nil {
		return 0, err
	}
	return a.combine(first, second)
}

// combine returns the difference or the ratio of the values of two groups.
func (a *analysis) combine(first, second float64) (float64, error) {
	value := first - second
	if a.plan.Compare.As == "ratio" {
		if second == 0 {
			return 0, statistic.ErrZeroDivisor
		}
		value = first / second
	}
	if math.IsInf(value, 0) || math.IsNaN(value) {
		return 0, statistic.ErrNotFinite
	}
	return value, nil
}
