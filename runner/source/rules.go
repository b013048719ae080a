package source

import (
	"fmt"
	"maps"
	"slices"
	"strings"

	"lotproof/spec"
)

// complete computes the derived columns and applies the exclusions.
//
// A derived value whose formula needs a missing number is missing. One that is not finite is a mistake, unless the row
// is excluded; then it is missing too.
//
// The first exclusion that applies takes the row out; one that takes out no row is no mistake. In a condition, a
// category or text without a value compares as the empty text. A condition that needs a missing number cannot be
// judged: the exclusion does not apply, and if a statistic uses the row all the same, Load reports that as a mistake.
func (t *Table) complete(plan *spec.Plan, bad *mistakes) spec.Errors {
	t.Columns = slices.Grow(t.Columns, len(t.Source.Derive)) // formulas point into it
	var planBad spec.Errors
	var derived []*formula
	for _, d := range t.Source.Derive {
		f, err := t.numeric(d.Formula)
		if err != nil {
			problem, fix := wording(err)
			planBad = append(planBad, plan.Mistake("sources."+t.Source.Name+".derive."+d.Name, problem, fix))
			continue
		}
		derived = append(derived, f)
	}
	if len(planBad) > 0 {
		return planBad
	}
	without := make([]map[int]error, len(derived)) // for each, the rows without a value, and why
	for i, d := range t.Source.Derive {
		c := Column{Name: d.Name, Type: spec.TypeNumber, Unit: d.Unit, Decimals: d.Decimals, Derived: true}
		c.grow(len(t.Rows))
		without[i] = map[int]error{}
		for row := range t.Rows {
			if derived[i].lacks(row) != "" {
				c.missing("")
				continue
			}
			v, err := derived[i].value(row)
			if err != nil {
				without[i][row] = err
				c.missing("")
				continue
			}
			c.Numbers = append(c.Numbers, v+0) // −0 becomes 0
			c.Texts = append(c.Texts, "")
			c.Missing = append(c.Missing, false)
		}
		t.Columns = append(t.Columns, c)
	}
	if planBad := t.exclude(plan, bad); len(planBad) > 0 {
		return planBad
	}
	for i, d := range t.Source.Derive {
		for _, row := range slices.Sorted(maps.Keys(without[i])) {
			if t.Rows[row].Excluded >= 0 {
				continue
			}
			e := t.place(row)
			e.Problem = fmt.Sprintf("derived column %s: %s has no value where %s: %v", d.Name, d.Formula,
				t.quoteRow(row, derived[i].columns), without[i][row])
			e.Fix = "exclude the row with a reason, or change the formula"
			bad.add(e)
		}
	}
	return nil
}

// exclude applies the exclusions to every row.
func (t *Table) exclude(plan *spec.Plan, bad *mistakes) spec.Errors {
	var planBad spec.Errors
	var rules []*formula
	for i, e := range t.Source.Exclude {
		f, err := t.condition(e.Where)
		if err != nil {
			problem, fix := wording(err)
			planBad = append(planBad, plan.Mistake(fmt.Sprintf("sources.%s.exclude[%d].where", t.Source.Name, i), problem, fix))
			continue
		}
		rules = append(rules, f)
	}
	if len(planBad) > 0 {
		return planBad
	}
	t.unjudged = map[int]doubt{}
	for row := range t.Rows {
		for i, rule := range rules {
			if column := rule.lacks(row); column != "" {
				if _, earlier := t.unjudged[row]; !earlier {
					t.unjudged[row] = doubt{i, column}
				}
				continue
			}
			holds, err := rule.holds(row)
			if err != nil {
				e := t.place(row)
				e.Problem = fmt.Sprintf("the exclusion %s cannot be judged where %s: %v", t.Source.Exclude[i].Where,
					t.quoteRow(row, rule.columns), err)
				e.Fix = "change the condition"
				bad.add(e)
				break
			}
			if holds {
				t.Rows[row].Excluded = i
				break
			}
		}
	}
	return nil
}

// A doubt is an exclusion that cannot be judged in a row, because a number column has no value there.
type doubt struct {
	rule   int
	column string
}

// doubtful returns the mistake that a statistic uses a row although an exclusion could not be judged there.
func (t *Table) doubtful(row int) spec.Error {
	d := t.unjudged[row]
	e := t.place(row)
	e.Problem = fmt.Sprintf("the exclusion %s cannot be judged, because %s has no value, and the row is used: %s",
		t.Source.Exclude[d.rule].Where, d.column, t.quoteRow(row, nil))
	e.Fix = "write the condition without " + d.column + ", or take the row out by another exclusion"
	return e
}

// place returns the place of a row.
func (t *Table) place(row int) spec.Error {
	line := t.Rows[row].Line
	if t.sheet != "" {
		return spec.Error{File: fmt.Sprintf("%s: sheet %s, row %d", t.Source.File, t.sheet, line)}
	}
	return spec.Error{File: t.Source.File, Line: line}
}

// quoteRow writes the cells of a row for a message, those of the given columns or the first few of all.
func (t *Table) quoteRow(row int, columns []*Column) string {
	if columns == nil {
		for i := range t.Columns {
			if !t.Columns[i].Derived {
				columns = append(columns, &t.Columns[i])
			}
		}
	}
	const most = 8
	var cells []string
	for i, c := range columns {
		if i == most {
			cells = append(cells, "…")
			break
		}
		switch {
		case c.Missing[row]:
			cells = append(cells, c.Name+" missing")
		case c.Type == spec.TypeNumber && !c.Derived:
			cells = append(cells, c.Name+" "+c.Texts[row])
		case c.Type == spec.TypeNumber:
			cells = append(cells, fmt.Sprintf("%s %v", c.Name, c.Numbers[row]))
		default:
			cells = append(cells, c.Name+" "+quote(c.Texts[row]))
		}
	}
	return strings.Join(cells, ", ")
}
