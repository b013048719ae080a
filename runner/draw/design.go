package draw

import (
	"crypto/sha256"
	"encoding/binary"
	"errors"
	"fmt"
	"strings"
)

// A Layout is what a design is made of: for each used row, in the order of the table, where it belongs.
type Layout struct {
	Source  string     // name of the table
	Rows    []int      // index of each used row in the table
	Unit    []string   // names of the levels, outermost first; "row" last or not at all
	Levels  [][]string // for each level but "row": the level's name on each used row
	By      []string   // names of the stratifying columns
	Strata  [][]string // for each of By: its value on each used row
	Group   []int      // with a comparison: 0 or 1 for each used row; else nil
	Compare string     // with a comparison: column and levels, for the digest
}

// A Design draws resamples of the rows of a layout. Rows are numbered 0 … n−1 in the order of Layout.Rows.
type Design struct {
	Digest [32]byte
	Paired bool // units span both groups of the comparison and are drawn jointly
	Partly bool // some, not all, outermost units span both groups
	Units  int  // outermost units
	Strata []Stratum

	n      int
	levels int       // levels of drawing
	parts  []part    // drawn one after the other
	unitOf [][]int32 // for each level: the unit of each row, numbered through the design
	names  []string  // of the outermost units, in the order of their numbers
	first  []int     // number of the first outermost unit of each part; one more entry closes the list
}

// Stratum is one part of a design that is drawn by itself.
type Stratum struct {
	Name  string
	Units int
	Rows  int
	Group int // 0 or 1 where the groups of a comparison are drawn separately, else −1
}

// A part is a set of units drawn among themselves: single rows, or units that hold more.
type part struct {
	rows  []int32
	units []unit
	chain chain
}

// A unit is drawn as a whole, or holds parts that are drawn anew each time.
type unit struct {
	rows  []int32
	parts []part
}

// ErrUnitSplit says that a unit lies in several strata. It is wrapped with names.
var ErrUnitSplit = errors.New("unit in several strata")

// New builds the design. The error wraps ErrUnitSplit; every other mistake is the caller's and panics by index.
func New(l Layout) (*Design, error) {
	n := len(l.Rows)
	d := &Design{n: n, levels: len(l.Unit)}
	if len(l.Unit) == 0 {
		return nil, errors.New("a design needs a resampling unit")
	}
	rowLast := l.Unit[len(l.Unit)-1] == "row"

	// Number the units of every level; an inner unit is identified by its path, so that day 1 of two laboratories differ.
	path := make([]string, n)
	var unitNames [][]string
	for level := range l.Unit {
		codes := make([]int32, n)
		index := map[string]int32{}
		var names []string
		for i := range path {
			if rowLast && level == len(l.Unit)-1 {
				path[i] += fmt.Sprintf("\x00%d", i)
			} else {
				path[i] += "\x00" + l.Levels[level][i]
			}
			code, seen := index[path[i]]
			if !seen {
				code = int32(len(names))
				index[path[i]] = code
				names = append(names, path[i][strings.LastIndexByte(path[i], 0)+1:])
			}
			codes[i] = code
		}
		d.unitOf = append(d.unitOf, codes)
		unitNames = append(unitNames, names)
	}
	d.names = unitNames[0]
	d.Units = len(d.names)

	// Strata, in the order of their first row, then the groups of the comparison where no unit spans both.
	stratum := make([]int32, n)
	var strata []string
	index := map[string]int32{}
	for i := range n {
		var name []string
		for j := range l.By {
			name = append(name, l.Strata[j][i])
		}
		key := strings.Join(name, "\x00")
		code, seen := index[key]
		if !seen {
			code = int32(len(strata))
			index[key] = code
			strata = append(strata, strings.Join(name, ", "))
		}
		stratum[i] = code
	}
	of := make([]int32, d.Units)
	for u := range of {
		of[u] = -1
	}
	for i, u := range d.unitOf[0] {
		if of[u] >= 0 && of[u] != stratum[i] {
			return nil, fmt.Errorf("%w: %s %q lies in %s %q and %q", ErrUnitSplit, l.Unit[0], d.names[u],
				strings.Join(l.By, ", "), strata[of[u]], strata[stratum[i]])
		}
		of[u] = stratum[i]
	}
	spans := make([]bool, len(l.Unit)) // per level: whether some unit holds rows of both groups
	if l.Group != nil {
		for level := range l.Unit {
			has := make([][2]bool, len(unitNames[level]))
			for i, u := range d.unitOf[level] {
				has[u][l.Group[i]] = true
			}
			both := 0
			for _, h := range has {
				if h[0] && h[1] {
					both++
				}
			}
			spans[level] = both > 0
			if level == 0 {
				d.Paired, d.Partly = both > 0, both > 0 && both < len(has)
			}
		}
	}
	d.Digest = digest(l, d.unitOf, stratum)

	all := make([]int32, n)
	for i := range all {
		all[i] = int32(i)
	}
	top := func(row int32) int32 { return stratum[row] }
	d.parts = d.build(all, 0, top, len(strata), l.Group, spans)

	d.first = []int{0}
	for i := range d.parts {
		p := &d.parts[i]
		row := p.firstRow()
		group, name := -1, strata[stratum[row]]
		if l.Group != nil && !spans[0] {
			group = l.Group[row]
		}
		rows := 0
		d.eachRow(p, func(int32) { rows++ })
		d.Strata = append(d.Strata, Stratum{Name: name, Units: p.size(), Rows: rows, Group: group})
		d.first = append(d.first, d.first[i]+p.size())
	}
	return d, nil
}

// build arranges rows into parts at the given level: by stratum (outermost level only), then by group of the comparison
// where no unit of this level spans both.
func (d *Design) build(rows []int32, level int, class func(int32) int32, classes int, group []int, spans []bool) []part {
	separate := group != nil && !spans[level]
	width := classes
	if separate {
		width *= 2
	}
	lists := make([][]int32, width)
	for _, row := range rows {
		c := class(row)
		if separate {
			c += int32(classes * group[row]) // all strata of the first group, then all of the second
		}
		lists[c] = append(lists[c], row)
	}
	var parts []part
	for _, list := range lists {
		if len(list) == 0 {
			continue
		}
		var p part
		place := map[int32]int{}
		var held [][]int32
		for _, row := range list {
			u := d.unitOf[level][row]
			at, seen := place[u]
			if !seen {
				at = len(held)
				place[u] = at
				held = append(held, nil)
			}
			held[at] = append(held[at], row)
		}
		last := level == d.levels-1
		if last && len(held) == len(list) {
			p.rows = list
		} else {
			for _, h := range held {
				if last {
					p.units = append(p.units, unit{rows: h})
				} else {
					inner := d.build(h, level+1, func(int32) int32 { return 0 }, 1, group, spans)
					p.units = append(p.units, unit{parts: inner})
				}
			}
		}
		p.chain = newChain(len(held))
		parts = append(parts, p)
	}
	return parts
}

func (p *part) size() int { return max(len(p.rows), len(p.units)) }

func (p *part) firstRow() int32 {
	for p.rows == nil {
		u := &p.units[0]
		if u.rows != nil {
			return u.rows[0]
		}
		p = &u.parts[0]
	}
	return p.rows[0]
}

func (d *Design) eachRow(p *part, do func(int32)) {
	for _, row := range p.rows {
		do(row)
	}
	for i := range p.units {
		for _, row := range p.units[i].rows {
			do(row)
		}
		for j := range p.units[i].parts {
			d.eachRow(&p.units[i].parts[j], do)
		}
	}
}

// digest is the SHA-256 of the text "lotproof design 1" and of everything that decides what is drawn, each list with
// its length before it, numbers as eight big-endian bytes, texts as UTF-8.
func digest(l Layout, unitOf [][]int32, stratum []int32) [32]byte {
	h := sha256.New()
	number := func(v int) {
		var b [8]byte
		binary.BigEndian.PutUint64(b[:], uint64(v))
		h.Write(b[:])
	}
	text := func(s string) {
		number(len(s))
		h.Write([]byte(s))
	}
	text("lotproof design 1")
	text(l.Source)
	number(len(l.Unit))
	for _, name := range l.Unit {
		text(name)
	}
	number(len(l.By))
	for _, name := range l.By {
		text(name)
	}
	text(l.Compare)
	number(len(l.Rows))
	for i, row := range l.Rows {
		number(row)
		number(int(stratum[i]))
		if l.Group != nil {
			number(l.Group[i])
		}
		for _, codes := range unitOf {
			number(int(codes[i]))
		}
	}
	var out [32]byte
	h.Sum(out[:0])
	return out
}
