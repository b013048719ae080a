package spec

import (
	"fmt"
	"math/big"
	"slices"
	"strings"

	"lotproof/spec/expression"
)

var (
	resamplingKeys      = []string{"unit", "strata", "resamples", "draw"}
	laterResamplingKeys = []string{"time block"}
	laterDraws          = []string{"balanced", "smoothed", "parametric", "dirichlet", "exact", "residual", "wild"}
)

const (
	leastResamples = 100
	mostResamples  = 10_000_000
)

// resamplingFields is a resampling as written, with keys left out.
type resamplingFields struct {
	unit, strata   []named // nil: left out, or wrong
	strataGiven    bool
	unitGiven      bool
	resamples      int
	resamplesGiven bool
	resamplesAt    Position
	path           string
	used           bool // whether a statistic takes something from it
}

// named is a name in the plan with its place.
type named struct {
	name string
	at   Position
}

func names(list []named) []string {
	out := make([]string, len(list))
	for i, n := range list {
		out[i] = n.name
	}
	return out
}

func (r *reader) resampling(f field) *resamplingFields {
	f.name = "resampling"
	m := r.open(f, resamplingKeys, laterResamplingKeys)
	if m == nil {
		return nil
	}
	s := &resamplingFields{path: f.path}
	if f, given := m.has("unit"); given {
		s.unitGiven = true
		s.unit = r.names(f)
		for i, n := range s.unit {
			if n.name == Row && i < len(s.unit)-1 {
				r.wrongAt(n.at, "row stands before another unit",
					"write units from the outermost to the innermost; row, the single "+
						"row, can only be the last")
				s.unit = nil
				break
			}
		}
	}
	if f, given := m.has("strata"); given {
		s.strataGiven = true
		if f.node.Kind == scalarNode || len(f.node.Content) > 0 { // an empty list means none
			s.strata = r.names(f)
		}
		for _, n := range s.strata {
			if n.name == Row {
				r.wrongAt(n.at, "row cannot be a stratum", "name a category column")
				s.strata = nil
				break
			}
		}
	}
	if f, given := m.has("resamples"); given {
		s.resamplesGiven = true
		s.resamplesAt = f.at
		if f.is("auto") {
			r.wrongAt(f.at, `resamples "auto" is not available in this version`, "write a whole number, as in 20000")
		} else if n, ok := r.whole(f, leastResamples, mostResamples); ok {
			s.resamples = int(n)
		}
	}
	if f, given := m.has("draw"); given {
		r.choice(f, []string{"replacement"}, laterDraws...)
	}
	return s
}

// names reads one name or a list of different names.
func (r *reader) names(f field) []named {
	var out []named
	for _, item := range r.items(f, true) {
		text, ok := r.line(item, maxName)
		if !ok {
			continue
		}
		if slices.ContainsFunc(out, func(n named) bool { return n.name == text }) {
			r.wrongAt(item.at, fmt.Sprintf("%s %q is given twice", f.name, text), "keep one")
			continue
		}
		out = append(out, named{text, item.at})
	}
	return out
}

// merge takes from the plan's default what a statistic leaves out, and lets the paths of the statistic lead there.
func (r *reader) merge(own, byDefault *resamplingFields, path string) *resamplingFields {
	s := resamplingFields{path: path + ".resampling"}
	if own != nil {
		s = *own
	}
	if byDefault == nil {
		return &s
	}
	if own == nil {
		r.plan.positions[s.path] = r.plan.positions[byDefault.path]
	}
	inherit := func(key string) {
		byDefault.used = true
		for _, suffix := range []string{key, key + "[0]"} {
			if at, known := r.plan.positions[byDefault.path+"."+suffix]; known {
				r.plan.positions[s.path+"."+suffix] = at
			}
		}
		for i := 1; ; i++ {
			at, known := r.plan.positions[fmt.Sprintf("%s.%s[%d]", byDefault.path, key, i)]
			if !known {
				break
			}
			r.plan.positions[fmt.Sprintf("%s.%s[%d]", s.path, key, i)] = at
		}
	}
	if !s.unitGiven && byDefault.unitGiven {
		s.unit, s.unitGiven = byDefault.unit, true
		inherit("unit")
	}
	if !s.strataGiven && byDefault.strataGiven {
		s.strata, s.strataGiven = byDefault.strata, true
		inherit("strata")
	}
	if !s.resamplesGiven && byDefault.resamplesGiven {
		s.resamples, s.resamplesGiven, s.resamplesAt = byDefault.resamples, true, byDefault.resamplesAt
		inherit("resamples")
	}
	return &s
}

// units checks the columns of a resampling against the source of a statistic.
func (r *reader) units(s *resamplingFields, source *Source) {
	for _, n := range s.unit {
		if n.name == Row {
			if findColumn(source, Row) != nil {
				r.wrongAt(n.at, fmt.Sprintf("unit row means the single row, and source %s has a column of that name", source.Name),
					"rename the column in the data and in the plan")
			}
			continue
		}
		r.columnOf(n, source, "unit", TypeCategory, TypeText)
	}
	for _, n := range s.strata {
		if slices.ContainsFunc(s.unit, func(u named) bool { return u.name == n.name }) {
			r.wrongAt(n.at, fmt.Sprintf("column %s is both stratum and unit", n.name),
				"take it out of strata: a stratum must hold "+
					"several units")
			continue
		}
		r.columnOf(n, source, "stratum", TypeCategory)
	}
}

// enough refuses fewer resamples than a level needs: with B resamples, the outermost limit that the resample values can
// give leaves 1/(B+1) outside on its side, so (B+1)(1−c) must reach 1 for one limit, 2 for two. Computed in decimals as
// written.
func (r *reader) enough(resamples int, at Position, levels []Number, bound Bound) {
	for _, level := range levels {
		exact, known := new(big.Rat).SetString(level.Text)
		if !known {
			continue
		}
		outside := new(big.Rat).Sub(big.NewRat(1, 1), exact)
		tails, sides := big.NewRat(1, 1), "one-sided"
		if bound == TwoSided {
			tails, sides = big.NewRat(2, 1), "two-sided"
		}
		ratio := tails.Quo(tails, outside) // least B+1
		least := new(big.Int).Quo(new(big.Int).Add(ratio.Num(), new(big.Int).Sub(ratio.Denom(), big.NewInt(1))),
			ratio.Denom())
		if big.NewInt(int64(resamples)+1).Cmp(least) < 0 {
			r.wrongAt(at, fmt.Sprintf("%d resamples are too few for confidence %s, %s", resamples, level.Text, sides),
				fmt.Sprintf("write at least %d, better ten times as many", new(big.Int).Sub(least, big.NewInt(1))))
		}
	}
}

// findColumn returns the declared column of that name, or nil.
func findColumn(s *Source, name string) *Column {
	for i := range s.Columns {
		if s.Columns[i].Name == name {
			return &s.Columns[i]
		}
	}
	return nil
}

// columnOf checks that a source has a column of that name and of one of the types. use is what it is wanted for.
func (r *reader) columnOf(n named, s *Source, use string, types ...ColumnType) {
	if r.broken[s.Name] {
		return
	}
	var kind ColumnType
	if c := findColumn(s, n.name); c != nil {
		kind = c.Type
	} else if slices.ContainsFunc(s.Derive, func(d Derived) bool { return d.Name == n.name }) {
		kind = TypeNumber
	} else {
		r.noColumn(n, s, types)
		return
	}
	if slices.Contains(types, kind) {
		return
	}
	wanted := make([]string, len(types))
	for i, t := range types {
		wanted[i] = string(t)
	}
	fix := "name a column of type " + choices(wanted)
	if kind == TypeNumber && !slices.Contains(types, TypeNumber) {
		fix += ", or declare this one so if its numbers are only names"
	}
	r.wrongAt(n.at, fmt.Sprintf("column %s is of type %s and cannot be a %s", n.name, kind, use), fix)
}

func (r *reader) noColumn(n named, s *Source, types []ColumnType) {
	var fitting []string
	for _, c := range s.Columns {
		if slices.Contains(types, c.Type) {
			fitting = append(fitting, c.Name)
		}
	}
	if slices.Contains(types, TypeNumber) {
		for _, d := range s.Derive {
			fitting = append(fitting, d.Name)
		}
	}
	fix := "declare it in columns"
	if len(fitting) > 0 {
		fix = "columns of a fitting type: " + expression.List(fitting)
		if near := expression.Nearest(n.name, fitting); near != "" {
			fix = fmt.Sprintf("did you mean %q? ", near) + fix
		}
	}
	r.wrongAt(n.at, fmt.Sprintf("source %s declares no column %q", s.Name, quotable(n.name)), strings.TrimSpace(fix))
}
