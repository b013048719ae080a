package statistic

import "slices"

// A Sample is one sample, original or drawn, as a statistic sees it: n observations of up to two number columns, and
// group codes where the statistic has a factor.
type Sample struct {
	n       int
	columns [][]float64
	codes   []int32 // group of each observation, 0 … groups−1; nil without a factor
	groups  int

	base   *Base       // where the observations come from; nil for a plain sample
	rows   []int32     // for each observation, its place in base
	counts []int32     // scratch for Sorted
	sorted [][]float64 // scratch: columns in ascending order
	ready  []bool      // whether sorted[i] belongs to this sample
	work   []float64   // scratch for one estimator call
}

// NewSample returns a sample over columns, all of one length, without copying them. codes may be nil.
func NewSample(columns [][]float64, n int, codes []int32, groups int) *Sample {
	return &Sample{n: n, columns: columns, codes: codes, groups: groups,
		sorted: make([][]float64, len(columns)), ready: make([]bool, len(columns))}
}

// N returns the number of observations.
func (s *Sample) N() int { return s.n }

// Column returns the values of column i in the order of the observations; not to be modified.
func (s *Sample) Column(i int) []float64 { return s.columns[i] }

// Groups returns the group code of each observation and the number of groups (some may be empty).
func (s *Sample) Groups() ([]int32, int) { return s.codes, s.groups }

// Scratch returns a slice of n numbers that the caller may overwrite until the next call.
func (s *Sample) Scratch(n int) []float64 {
	if cap(s.work) < n {
		s.work = make([]float64, n)
	}
	return s.work[:n]
}

// Sorted returns column i in ascending order; not to be modified. On a drawn sample it costs O(n): the order of the
// original column is known, so counting how often each place was drawn is enough.
func (s *Sample) Sorted(i int) []float64 {
	if s.ready[i] {
		return s.sorted[i]
	}
	if cap(s.sorted[i]) < s.n {
		s.sorted[i] = make([]float64, s.n)
	}
	out := s.sorted[i][:s.n]
	if s.base == nil {
		copy(out, s.columns[i])
		slices.Sort(out)
	} else {
		s.countSort(i, out)
	}
	s.sorted[i] = out
	s.ready[i] = true
	return out
}

func (s *Sample) countSort(i int, out []float64) {
	order, rank := s.base.order[i], s.base.rank[i]
	if cap(s.counts) < len(order) {
		s.counts = make([]int32, len(order))
	}
	counts := s.counts[:len(order)]
	clear(counts)
	for _, row := range s.rows {
		counts[rank[row]]++
	}
	k := 0
	for j, c := range counts {
		for ; c > 0; c-- {
			out[k] = order[j]
			k++
		}
	}
}

// A Base is the original observations of a design, from which samples are drawn.
type Base struct {
	columns [][]float64
	order   [][]float64 // each column in ascending order
	rank    [][]int32   // place of each observation in order; ties share the place of the first
}

// NewBase prepares columns, all of one length, for drawing. Values must be finite.
func NewBase(columns [][]float64) *Base {
	b := &Base{columns: columns, order: make([][]float64, len(columns)), rank: make([][]int32, len(columns))}
	for i, column := range columns {
		order := slices.Clone(column)
		slices.Sort(order)
		rank := make([]int32, len(column))
		for j, v := range column {
			at, _ := slices.BinarySearch(order, v)
			rank[j] = int32(at)
		}
		b.order[i], b.rank[i] = order, rank
	}
	return b
}

// NewSample returns an empty sample to be filled by Draw, for use by one goroutine.
func (b *Base) NewSample() *Sample {
	s := NewSample(make([][]float64, len(b.columns)), 0, nil, 0)
	s.base = b
	return s
}

// Draw makes s the sample of the given rows of its base, with group codes if the statistic has a factor. rows and codes
// are kept, not copied.
func (s *Sample) Draw(rows []int32, codes []int32, groups int) {
	s.n, s.rows, s.codes, s.groups = len(rows), rows, codes, groups
	for i, column := range s.base.columns {
		if cap(s.columns[i]) < len(rows) {
			s.columns[i] = make([]float64, len(rows))
		}
		out := s.columns[i][:len(rows)]
		for j, row := range rows {
			out[j] = column[row]
		}
		s.columns[i] = out
		s.ready[i] = false
	}
}
