package source

import (
	"fmt"

	"lotproof/spec"
)

// Select makes the ledger of statistic i of the plan on its table.
//
// A row is, in this order: excluded, if an exclusion of the source applies; missing, if the condition of the statistic
// needs a number that the row lacks; outside, if that condition does not hold or the row belongs to neither group of
// the comparison; missing, if it lacks a needed value; else used. Needed are the columns that the statistic is taken
// of, its factor, the number and category columns in the condition of a proportion, the resampling units, the strata,
// and the column that makes the groups. Mistakes are located in the plan, or at a row of the file.
func Select(plan *spec.Plan, i int, t *Table) (*Selection, spec.Errors) {
	p := &plan.Statistics[i]
	n := &needs{plan: plan, path: fmt.Sprintf("statistics[%d]", i), table: t}
	var where *formula
	if p.Where != "" {
		where = n.condition(".where", p.Where)
	}
	for k, name := range p.Of {
		n.add(fmt.Sprintf(".of[%d]", k), name, spec.TypeNumber)
	}
	n.parameters(p)
	for k, name := range p.Resampling.Unit {
		if name != spec.Row {
			n.add(fmt.Sprintf(".resampling.unit[%d]", k), name, spec.TypeCategory)
		}
	}
	for k, name := range p.Resampling.Strata {
		n.add(fmt.Sprintf(".resampling.strata[%d]", k), name, spec.TypeCategory)
	}
	var by *Column
	if p.Compare != nil {
		by = n.add(".compare.by", p.Compare.By, spec.TypeCategory)
	}
	if len(n.bad) > 0 {
		return nil, n.bad
	}

	s := &Selection{Table: t, States: make([]State, len(t.Rows)), Lacks: make([]string, len(t.Rows))}
	bad := &mistakes{file: t.Source.File}
	for row := range t.Rows {
		state, lacks, err := judge(t, row, where, p.Compare, by, n.columns)
		if err != nil {
			e := t.place(row)
			e.Problem = fmt.Sprintf("the condition %s of statistic %q cannot be judged where %s: %v", p.Where, p.ID,
				t.quoteRow(row, where.columns), err)
			e.Fix = "change the condition"
			bad.add(e)
			continue
		}
		s.States[row], s.Lacks[row] = state, lacks
		if state != Used {
			continue
		}
		if _, is := t.unjudged[row]; is {
			bad.add(t.doubtful(row))
		}
		s.Rows = append(s.Rows, row)
		if by != nil {
			group := 0
			if by.Texts[row] == p.Compare.Of[1] {
				group = 1
			}
			s.Group = append(s.Group, group)
		}
	}
	return s, bad.all()
}

// judge returns the state of one row and, if it is missing, the column without a value.
func judge(t *Table, row int, where *formula, compare *spec.Compare, by *Column, needed []*Column) (
	state State, lacks string, err error) {
	if t.Rows[row].Excluded >= 0 {
		return Excluded, "", nil
	}
	if where != nil {
		if column := where.lacks(row); column != "" {
			return Missing, column, nil
		}
		holds, err := where.holds(row)
		if err != nil || !holds {
			return Outside, "", err
		}
	}
	if by != nil && !by.Missing[row] && by.Texts[row] != compare.Of[0] && by.Texts[row] != compare.Of[1] {
		return Outside, "", nil
	}
	for _, c := range needed {
		if c.Missing[row] {
			return Missing, c.Name, nil
		}
	}
	return Used, "", nil
}

// needs collects the columns that a statistic cannot do without, in the order in which a missing one is named.
type needs struct {
	plan    *spec.Plan
	path    string // of the statistic
	table   *Table
	columns []*Column
	bad     spec.Errors
}

func (n *needs) mistake(at, problem, fix string) {
	n.bad = append(n.bad, n.plan.Mistake(n.path+at, problem, fix))
}

// add takes a column by name. want is number, or category for every column whose texts tell rows apart.
func (n *needs) add(at, name string, want spec.ColumnType) *Column {
	c := n.table.Column(name)
	switch {
	case c == nil:
		var there []string
		for _, c := range n.table.Columns {
			there = append(there, c.Name)
		}
		n.mistake(at, fmt.Sprintf("source %s has no column %s", n.table.Source.Name, quote(name)),
			suggestion(name, there, "columns there"))
		return nil
	case (c.Type == spec.TypeNumber) != (want == spec.TypeNumber):
		// Numbers cannot make groups: 1 and 1.0 would be two of them.
		n.mistake(at, fmt.Sprintf("column %s has the type %s", c.Name, c.Type),
			fmt.Sprintf("name a column of the type %s", want))
		return nil
	}
	n.columns = append(n.columns, c)
	return c
}

// parameters takes the columns that the parameters of a statistic name: a factor by its name, a condition by those in
// it. A text column in the condition may be empty: remarks mostly are.
func (n *needs) parameters(p *spec.Statistic) {
	for _, setting := range p.With {
		at := ".with." + setting.Name
		switch setting.Name {
		case "condition":
			f := n.condition(at, setting.Text)
			if f == nil {
				continue
			}
			for _, c := range f.columns {
				if c.Type != spec.TypeText {
					n.columns = append(n.columns, c)
				}
			}
		case "factor":
			n.add(at, setting.Text, spec.TypeCategory)
		}
	}
}

func (n *needs) condition(at, text string) *formula {
	f, err := n.table.condition(text)
	if err != nil {
		problem, fix := wording(err)
		n.mistake(at, problem, fix)
		return nil
	}
	return f
}

// Condition returns, for each of the given rows, 1 where the condition holds and 0 where it does not. A category or
// text without a value compares as the empty text. The error says what is wrong with the condition, or which number it
// needs in which row.
func (t *Table) Condition(text string, rows []int) ([]float64, error) {
	f, err := t.condition(text)
	if err != nil {
		return nil, err
	}
	out := make([]float64, len(rows))
	for i, row := range rows {
		if column := f.lacks(row); column != "" {
			return nil, fmt.Errorf("the condition needs column %s, which has no value on line "+
				"%d", column, t.Rows[row].Line)
		}
		holds, err := f.holds(row)
		if err != nil {
			return nil, fmt.Errorf("the condition cannot be judged on line %d: %w", t.Rows[row].Line, err)
		}
		if holds {
			out[i] = 1
		}
	}
	return out, nil
}
