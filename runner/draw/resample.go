package draw

// A Resample holds the rows of one resample and remembers which drawn unit each row came with. It is reused from draw
// to draw and belongs to one goroutine.
type Resample struct {
	Rows []int32   // rows of the design, 0 … n−1, in the order drawn
	Unit [][]int32 // for each level: the number of the drawn unit, counted through the resample, of each entry of Rows

	design *Design
	count  []int32   // drawn units so far, for each level
	index  [][]int32 // scratch for indices, for each level
}

// NewResample returns a Resample for the design.
func (d *Design) NewResample() *Resample {
	r := &Resample{design: d, Unit: make([][]int32, d.levels), count: make([]int32, d.levels)}
	r.index = make([][]int32, d.levels)
	return r
}

// Levels returns the number of levels at which units are drawn.
func (d *Design) Levels() int { return d.levels }

// N returns the number of rows of the design.
func (d *Design) N() int { return d.n }

// UnitOf returns the unit of each row at a level, numbered from 0 in the order of first rows.
func (d *Design) UnitOf(level int) []int32 { return d.unitOf[level] }

// Names returns the names of the outermost units; for single rows, their places.
func (d *Design) Names() []string { return d.names }

// Parts returns where the outermost drawn units of each stratum begin in a resample: those of Strata[h] have numbers
// from Parts()[h] up to, not including, Parts()[h+1].
func (d *Design) Parts() []int { return d.first }

// Whole makes r the sample itself: every unit once, in order.
func (r *Resample) Whole() {
	r.reset()
	for i := range r.design.parts {
		r.take(&r.design.parts[i], 0, nil)
	}
}

// Draw makes r the resample that the stream gives.
func (r *Resample) Draw(s *Stream) {
	r.reset()
	for i := range r.design.parts {
		r.take(&r.design.parts[i], 0, s)
	}
}

func (r *Resample) reset() {
	r.Rows = r.Rows[:0]
	for level := range r.Unit {
		r.Unit[level] = r.Unit[level][:0]
		r.count[level] = 0
	}
}

// take draws as many units of the part as it has, with replacement, and what they hold. Without a stream it takes every
// unit once.
func (r *Resample) take(p *part, level int, s *Stream) {
	size := p.size()
	if cap(r.index[level]) < size {
		r.index[level] = make([]int32, size)
	}
	index := r.index[level][:size]
	if s != nil {
		p.chain.fill(s, index)
	} else {
		for i := range index {
			index[i] = int32(i)
		}
	}
	if p.rows != nil {
		for _, i := range index {
			r.Rows = append(r.Rows, p.rows[i])
		}
		r.mark(level, size, true)
		return
	}
	for _, i := range index {
		u := &p.units[i]
		if u.rows != nil {
			r.Rows = append(r.Rows, u.rows...)
			r.mark(level, len(u.rows), false)
			continue
		}
		for j := range u.parts {
			r.take(&u.parts[j], level+1, s)
		}
		r.count[level]++
	}
}

// mark notes for the last n rows the numbers of the drawn units they came with. At the level where they were drawn they
// are one unit, or, with single set, one unit each; the outer levels have the unit that is being drawn.
func (r *Resample) mark(level, n int, single bool) {
	for l := range level {
		number := r.count[l]
		for range n {
			r.Unit[l] = append(r.Unit[l], number)
		}
	}
	number := r.count[level]
	for range n {
		r.Unit[level] = append(r.Unit[level], number)
		if single {
			number++
		}
	}
	if !single {
		number++
	}
	r.count[level] = number
}
