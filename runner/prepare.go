package runner

import (
	"fmt"
	"math"
	"math/big"
	"slices"
	"strings"

	"lotproof/runner/draw"
	"lotproof/runner/interval"
	"lotproof/runner/source"
	"lotproof/runner/statistic"
	"lotproof/spec"
)

// A Study is a plan with its data read and everything settled that needs no random draw.
type Study struct {
	Plan *spec.Plan
	Data *source.Data

	analyses []*analysis
}

// An analysis is one statistic of the plan on its rows. Rows are numbered in the order of the selection.
type analysis struct {
	index      int // in the plan
	plan       *spec.Statistic
	definition *statistic.Definition
	estimator  statistic.Estimator
	selection  *source.Selection
	unit       string // of measurement
	columns    [][]float64
	key        string // names the columns, so that statistics on the same ones share sorted samples

	factor []int32 // group code of each row, nil without a factor
	groups int
	level  int     // the innermost level whose drawn units each start new groups; −1: none
	local  []int32 // with level ≥ 0: group code within the unit of that level
	locals int     // number of local codes

	design    *draw.Design
	intervals []*interval.Definition
	companion *interval.Definition // nil if none applies
	sample    *interval.Sample     // for classical methods; nil where rows are not independent
}

// Prepare reads the sources of a plan, relative to dir, and settles rows, units, strata and methods. Mistakes in the
// data, or in what the plan says of them, come back together as spec.Errors.
func Prepare(plan *spec.Plan, dir string) (*Study, error) {
	data, err := source.Load(plan, dir)
	if err != nil {
		return nil, err
	}
	s := &Study{Plan: plan, Data: data}
	var mistakes spec.Errors
	for i := range plan.Statistics {
		a, err := prepare(plan, i, data.Selections[i])
		if err != nil {
			mistakes = append(mistakes, *err)
			continue
		}
		s.analyses = append(s.analyses, a)
	}
	if len(mistakes) > 0 {
		return nil, mistakes
	}
	return s, nil
}

func prepare(plan *spec.Plan, i int, selection *source.Selection) (*analysis, *spec.Error) {
	p := &plan.Statistics[i]
	path := fmt.Sprintf("statistics[%d]", i)
	mistake := func(at, problem, fix string) (*analysis, *spec.Error) {
		e := plan.Mistake(path+at, problem, fix)
		return nil, &e
	}
	definition := statistic.Lookup(p.Name)
	a := &analysis{index: i, plan: p, definition: definition, estimator: definition.New(p.With),
		selection: selection, level: -1}
	table, rows := selection.Table, selection.Rows
	if len(rows) == 0 {
		return mistake("", fmt.Sprintf("statistic %q has no row to use", p.ID),
			"see that its condition and its columns select rows of the source")
	}

	var units []string
	a.key = p.Source
	for _, name := range p.Of {
		column := table.Column(name)
		values := make([]float64, len(rows))
		for j, row := range rows {
			values[j] = column.Numbers[row]
		}
		a.columns = append(a.columns, values)
		units = append(units, column.Unit)
		a.key += "\x00" + name
	}
	a.unit = definition.Unit(units)
	if p.Compare != nil && p.Compare.As == "ratio" {
		a.unit = ""
	}
	for k, parameter := range definition.Parameters {
		setting := p.With[k]
		switch parameter.Kind {
		case spec.KindCondition:
			values, err := table.Condition(setting.Text, rows)
			if err != nil {
				return mistake(".with."+parameter.Name, err.Error(), "")
			}
			a.columns = append(a.columns, values)
			a.key += "\x00\x00" + setting.Text
		case spec.KindCategory:
			a.factor, a.groups = codes(table.Column(setting.Text), rows)
		}
	}

	layout := draw.Layout{Source: p.Source, Rows: rows, Unit: p.Resampling.Unit, By: p.Resampling.Strata,
		Group: selection.Group}
	for _, name := range p.Resampling.Unit {
		if name != spec.Row {
			layout.Levels = append(layout.Levels, texts(table.Column(name), rows))
		}
	}
	for _, name := range p.Resampling.Strata {
		layout.Strata = append(layout.Strata, texts(table.Column(name), rows))
	}
	if c := p.Compare; c != nil {
		layout.Compare = strings.Join([]string{c.By, c.Of[0], c.Of[1]}, "\x00")
		for g, level := range c.Of {
			if !slices.Contains(selection.Group, g) {
				return mistake(fmt.Sprintf(".compare.of[%d]", g), fmt.Sprintf("no used row has %s %q", c.By, level),
					"write a level that the data hold")
			}
		}
	}
	design, err := draw.New(layout)
	if err != nil {
		return mistake(".resampling", err.Error(), "a drawn unit must lie in one stratum: take the stratifying "+
			"column out, "+
			"or nest the units, outer column first")
	}
	a.design = design
	if a.factor != nil {
		a.nestFactor()
	}

	for k, name := range p.Intervals {
		d := interval.Lookup(name)
		if d.Classical && p.Compare != nil && p.Compare.As == "ratio" {
			return mistake(fmt.Sprintf(".interval[%d]", k), fmt.Sprintf("interval %s has no form for the ratio of "+
				"two groups", name),
				"name an interval made of resample values, or compare as: difference")
		}
		a.intervals = append(a.intervals, d)
	}
	least, most := a.space()
	for _, c := range []struct {
		key   string
		limit *spec.Number
	}{{"lower_at_least", p.Accept.LowerAtLeast}, {"upper_at_most", p.Accept.UpperAtMost}} {
		if c.limit == nil || c.limit.Value >= least && c.limit.Value <= most {
			continue
		}
		fix := "write a limit that the statistic can take"
		if most == 1 && c.limit.Value > 1 && c.limit.Value <= 100 {
			fix = "write 0.98 for 98 %"
		}
		return mistake(".accept."+c.key, fmt.Sprintf("%s %s is not a possible value of the "+
			"statistic", c.key, c.limit.Text), fix)
	}
	a.classical()
	if p.Companion == "decides" && a.companion == nil {
		return mistake(".companion", fmt.Sprintf("statistic %q has no companion that could decide", p.ID),
			"write companion: shown, or draw single rows of a statistic with a classical or exact interval")
	}
	return a, nil
}

// texts returns the cells of a column on the given rows.
func texts(column *source.Column, rows []int) []string {
	out := make([]string, len(rows))
	for i, row := range rows {
		out[i] = column.Texts[row]
	}
	return out
}

// codes numbers the different texts of a column on the given rows, in the order of their first row.
func codes(column *source.Column, rows []int) ([]int32, int) {
	out := make([]int32, len(rows))
	index := map[string]int32{}
	for i, row := range rows {
		code, seen := index[column.Texts[row]]
		if !seen {
			code = int32(len(index))
			index[column.Texts[row]] = code
		}
		out[i] = code
	}
	return out, len(index)
}

// nestFactor finds the innermost level whose units hold whole groups of the factor. A unit of that level that is drawn
// twice brings its groups twice, and they must not melt into one; groups that reach over several units stay one.
func (a *analysis) nestFactor() {
	for level := a.design.Levels() - 1; level >= 0; level-- {
		unitOf := a.design.UnitOf(level)
		home := make([]int32, a.groups)
		for g := range home {
			home[g] = -1
		}
		whole := true
		for row, g := range a.factor {
			if home[g] >= 0 && home[g] != unitOf[row] {
				whole = false
				break
			}
			home[g] = unitOf[row]
		}
		if !whole {
			continue
		}
		a.level = level
		a.local = make([]int32, len(a.factor))
		count := map[int32]int32{}
		code := make([]int32, a.groups)
		for g, u := range home {
			code[g] = count[u]
			count[u]++
			a.locals = max(a.locals, int(count[u]))
		}
		for row, g := range a.factor {
			a.local[row] = code[g]
		}
		return
	}
}

// independent says whether every outermost unit is a single row.
func (a *analysis) independent() bool { return a.design.Units == a.design.N() }

// classical settles what the classical methods may use and which companion applies.
func (a *analysis) classical() {
	if !a.independent() || a.design.Paired {
		return
	}
	s := &interval.Sample{}
	if len(a.columns) == 1 {
		s.Sorted = slices.Clone(a.columns[0])
		slices.Sort(s.Sorted)
		if a.plan.Compare != nil {
			s.As = a.plan.Compare.As
			for row, g := range a.selection.Group {
				s.Groups[g] = append(s.Groups[g], a.columns[0][row])
			}
		}
	}
	if a.plan.Name == "median" {
		s.P = big.NewRat(1, 2)
	}
	for k, parameter := range a.definition.Parameters {
		if parameter.Name == "p" {
			s.P, _ = new(big.Rat).SetString(a.plan.With[k].Text)
		}
	}
	a.sample = s
	for _, d := range interval.All() {
		applies := slices.Contains(d.Statistics, a.plan.Name) && (a.plan.Compare == nil || d.Compare)
		if d.Classical && applies && !slices.Contains(a.intervals, d) && (s.As != "ratio") {
			a.companion = d
			return
		}
	}
}

// space returns the least and the most possible value of the statistic, infinite where there is none. A difference of
// two values from a bounded range is bounded too.
func (a *analysis) space() (least, most float64) {
	least, most = a.definition.Space()
	if c := a.plan.Compare; c != nil {
		if c.As == "difference" {
			return least - most, most - least
		}
		if least >= 0 {
			return 0, math.Inf(1)
		}
		return math.Inf(-1), math.Inf(1)
	}
	return least, most
}
