package report

// Margins of the type area, in millimetres.
const (
	leftEdge   = 22.0
	rightEdge  = sheetWidth - 20.0
	topEdge    = 26.0
	bottomEdge = sheetHeight - 22.0
	measure    = rightEdge - leftEdge
)

// An atom is a piece of the text that is never divided between pages: a line of a paragraph, a row of a table, a
// figure.
type atom struct {
	before float64 // white space above, dropped at the top of a page
	height float64
	keep   bool   // stays on the page of the next atom
	head   []atom // drawn again above this atom when it begins a page
	name   string // target of links; empty: none
	draw   func(p *page, y float64)
}

// A flow fills pages with atoms.
type flow struct {
	pages   []page
	y       float64
	fresh   bool   // nothing stands on the last page yet
	waiting []atom // that stay with what is added next
	targets map[string]target
}

func newFlow() *flow {
	f := &flow{targets: map[string]target{}}
	f.turn()
	return f
}

// turn begins a new page.
func (f *flow) turn() {
	f.pages = append(f.pages, page{})
	f.y, f.fresh = topEdge, true
}

// add places atoms. Those that belong together move to the next page together, unless they fill more than a page.
func (f *flow) add(atoms ...atom) {
	atoms = append(f.waiting, atoms...)
	f.waiting = nil
	for len(atoms) > 0 {
		n := 1
		for n < len(atoms) && atoms[n-1].keep {
			n++
		}
		if atoms[n-1].keep {
			f.waiting = atoms
			return
		}
		need := 0.0
		for i, a := range atoms[:n] {
			need += a.height
			if i > 0 || !f.fresh {
				need += a.before
			}
		}
		if f.y+need > bottomEdge && !f.fresh {
			f.turn()
		}
		for i := range atoms[:n] {
			f.place(&atoms[i])
		}
		atoms = atoms[n:]
	}
}

// end places what still waits for a successor.
func (f *flow) end() {
	if n := len(f.waiting); n > 0 {
		f.waiting[n-1].keep = false
		f.add()
	}
}

func (f *flow) place(a *atom) {
	before := a.before
	if f.fresh {
		before = 0
	}
	if f.y+before+a.height > bottomEdge && !f.fresh {
		f.turn()
		before = 0
	}
	if f.fresh {
		for i := range a.head {
			f.put(&a.head[i], 0)
		}
	}
	f.put(a, before)
}

func (f *flow) put(a *atom, before float64) {
	f.y += before
	if a.name != "" {
		if _, known := f.targets[a.name]; !known {
			f.targets[a.name] = target{len(f.pages) - 1, max(0, f.y-3)}
		}
	}
	if a.draw != nil {
		a.draw(&f.pages[len(f.pages)-1], f.y)
	}
	f.y += a.height
	f.fresh = false
}

// together marks all atoms but the last as staying with their successors.
func together(atoms []atom) []atom {
	for i := range len(atoms) - 1 {
		atoms[i].keep = true
	}
	return atoms
}

// height returns how much room atoms take in the middle of a page.
func height(atoms []atom) float64 {
	sum := 0.0
	for _, a := range atoms {
		sum += a.before + a.height
	}
	return sum
}

// leading returns the height of a line of text set at a size, in millimetres.
func leading(size float64) float64 { return float64(1.42 * size * point) }

// baseline returns how far below the upper edge of its line the baseline of text lies.
func baseline(size float64) float64 { return float64(1.07 * size * point) }

// paragraph sets runs in lines. The first two and the last two lines stay together.
func paragraph(runs []run, x, width, before float64) []atom {
	lines := wrap(runs, width)
	atoms := make([]atom, len(lines))
	size := 0.0
	for _, l := range lines {
		size = max(size, l.size())
	}
	for i, l := range lines {
		atoms[i] = atom{height: leading(size), draw: func(p *page, y float64) { l.draw(p, x, y+baseline(size)) }}
		atoms[i].keep = i < len(lines)-1 && (i == 0 || i == len(lines)-2)
	}
	atoms[0].before = before
	return atoms
}

// bullet sets runs with a dash before the first line.
func bullet(runs []run, before float64) []atom {
	const indent = 4.5
	atoms := paragraph(runs, leftEdge+indent, measure-indent, before)
	first, s := atoms[0].draw, runs[0].style
	s.face = sans
	atoms[0].draw = func(p *page, y float64) {
		p.text(leftEdge, y+baseline(s.size), s, "–")
		first(p, y)
	}
	return atoms
}
