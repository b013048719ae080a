package report

import "slices"

// A pennant is a label on a staff that rises from a value on the horizontal axis.
type pennant struct {
	x       float64 // of the staff
	label   string
	style   style
	staff   pen
	width   float64 // of the label
	left    bool    // the label stands on the left of its staff
	lane    int     // 0 is next to the panel
	offside bool    // the value lies beyond the panel; the staff stands at its edge
}

const (
	flagGap   = 0.9 // between staff and label
	flagSpace = 1.6 // least space between two labels
	laneStep  = 4.3
)

// span returns from where to where the label reaches.
func (f *pennant) span() (from, to float64) {
	if f.left {
		return f.x - flagGap - f.width, f.x - flagGap
	}
	return f.x + flagGap, f.x + flagGap + f.width
}

// arrange chooses for every flag a side and a lane such that no label covers another label or a staff, all labels stand
// between the edges, and few lanes are used. It returns the number of lanes. There are at most a handful of flags, so
// all sides are tried; of equally good choices the first counts, labels on the right being tried first.
func arrange(flags []pennant, from, to float64) int {
	slices.SortStableFunc(flags, func(a, b pennant) int {
		switch {
		case a.x < b.x:
			return -1
		case a.x > b.x:
			return 1
		}
		return 0
	})
	best, bestLanes := []pennant(nil), len(flags)+1
	for sides := range 1 << len(flags) {
		try := slices.Clone(flags)
		inside := true
		for i := range try {
			try[i].left = sides>>i&1 == 1
			a, b := try[i].span()
			inside = inside && a >= from && b <= to
		}
		if !inside {
			continue
		}
		if n := stack(try); n > 0 && n < bestLanes {
			best, bestLanes = try, n
		}
	}
	if best == nil { // labels too wide: one lane each, in the order of the staffs, which pass behind them
		for i := range flags {
			flags[i].lane = i
			flags[i].left = false
			if a, b := flags[i].span(); b > to && a-flags[i].width-2*flagGap >= from {
				flags[i].left = true
			}
		}
		return len(flags)
	}
	copy(flags, best)
	return bestLanes
}

// stack gives every flag a lane and returns the number of lanes, or 0 if the sides allow none. Flags take the lowest
// lane they can, one after the other; all orders are tried, because the order decides how many lanes are used.
func stack(flags []pennant) int {
	lanes, best := make([]int, len(flags)), []int(nil)
	most := len(flags) + 1 // one lane more than are allowed
	placed := make([]int, 0, len(flags))
	var place func(used int)
	place = func(used int) {
		if used >= most {
			return
		}
		if len(placed) == len(flags) {
			best, most = slices.Clone(lanes), used
			return
		}
		for i := range flags {
			if slices.Contains(placed, i) {
				continue
			}
			lane := 0
			for lane < most && !free(flags, placed, lanes, i, lane) {
				lane++
			}
			if lane == most {
				continue
			}
			lanes[i] = lane
			placed = append(placed, i)
			place(max(used, lane+1))
			placed = placed[:len(placed)-1]
		}
	}
	place(0)
	for i := range best {
		flags[i].lane = best[i]
	}
	if best == nil {
		return 0
	}
	return most
}

// free says whether flag i may stand in a lane beside those placed: no staff crosses a label, no labels overlap.
func free(flags []pennant, placed, lanes []int, i, lane int) bool {
	p := &flags[i]
	from, to := p.span()
	for _, j := range placed {
		q := &flags[j]
		a, b := q.span()
		switch {
		case lanes[j] >= lane && q.x > from-flagGap/2 && q.x < to+flagGap/2, // its staff crosses this label
			lanes[j] <= lane && p.x > a-flagGap/2 && p.x < b+flagGap/2, // this staff crosses its label
			lanes[j] == lane && from < b+flagSpace && a < to+flagSpace:
			return false
		}
	}
	return true
}
