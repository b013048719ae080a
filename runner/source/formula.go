package source

import (
	"errors"
	"maps"
	"math"
	"slices"
	"strconv"
	"strings"

	"lotproof/runner/numeric"
	"lotproof/spec"
	"lotproof/spec/expression"
)

// A formula is an expression of the plan bound to the columns of a table. It is for use by one goroutine.
type formula struct {
	program *expression.Program
	columns []*Column      // those that it names
	cells   expression.Row // of the row at hand, one a column
}

// condition binds a condition over all columns.
func (t *Table) condition(text string) (*formula, error) {
	return t.bind(text, expression.Condition, func(*Column) bool { return true })
}

// numeric binds a formula over the number columns of the file.
func (t *Table) numeric(text string) (*formula, error) {
	return t.bind(text, expression.Number, func(c *Column) bool { return c.Type == spec.TypeNumber && !c.Derived })
}

func (t *Table) bind(text string, want expression.Type, usable func(*Column) bool) (*formula, error) {
	var columns []expression.Column
	for i := range t.Columns {
		c := &t.Columns[i]
		if !usable(c) {
			continue
		}
		e := expression.Column{Name: c.Name, Type: expression.Text}
		if c.Type == spec.TypeNumber {
			e.Type = expression.Number
		}
		if c.Type == spec.TypeCategory {
			e.Levels = t.levels(c) // where the plan declares none, a misspelt level would hold for no row and pass unseen
		}
		columns = append(columns, e)
	}
	program, err := expression.Compile(text, columns, want,
		expression.Functions{Exp: numeric.Exp, Log: numeric.Log, Log10: log10})
	if err != nil {
		var e *expression.Error
		if errors.As(err, &e) && strings.Contains(e.Problem, "is not a level of column") {
			e.Fix += "; if it can occur though no row has it, declare the levels of the column"
		}
		return nil, err
	}
	f := &formula{program: program}
	for _, name := range program.Columns() {
		f.columns = append(f.columns, t.Column(name))
	}
	f.cells = expression.Row{Numbers: make([]float64, len(f.columns)), Texts: make([]string, len(f.columns))}
	return f, nil
}

// levels returns the declared levels of a category column, or else the texts that the file has, in order.
func (t *Table) levels(c *Column) []string {
	for _, declared := range t.Source.Columns {
		if declared.Name == c.Name && len(declared.Levels) > 0 {
			return declared.Levels
		}
	}
	seen := map[string]bool{}
	for i, text := range c.Texts {
		if c.Missing[i] {
			text = ""
		}
		seen[text] = true
	}
	return slices.Sorted(maps.Keys(seen))
}

// log10 returns the decimal logarithm of x > 0 within two units in the last place; a power of ten gives a whole number.
func log10(x float64) float64 {
	v := numeric.Log(x) / math.Ln10
	whole := math.Round(v)
	if power, err := strconv.ParseFloat("1e"+strconv.Itoa(int(whole)), 64); err == nil && power == x {
		return whole
	}
	return v
}

// wording returns what a mistake in the plan says of the error of bind.
func wording(err error) (problem, fix string) {
	var e *expression.Error
	if errors.As(err, &e) {
		return e.Problem, e.Fix
	}
	return err.Error(), ""
}

// lacks returns the first number column that the formula needs and that has no value in the row, or "".
func (f *formula) lacks(row int) string {
	for _, c := range f.columns {
		if c.Type == spec.TypeNumber && c.Missing[row] {
			return c.Name
		}
	}
	return ""
}

// load sets the cells of a row that lacks no number. A category or text without a value is the empty text.
func (f *formula) load(row int) {
	for i, c := range f.columns {
		switch {
		case c.Type == spec.TypeNumber:
			f.cells.Numbers[i] = c.Numbers[row]
		case c.Missing[row]:
			f.cells.Texts[i] = ""
		default:
			f.cells.Texts[i] = c.Texts[row]
		}
	}
}

// holds judges a condition in a row that lacks no number.
func (f *formula) holds(row int) (bool, error) {
	f.load(row)
	return f.program.Condition(f.cells)
}

// value computes a formula in a row that lacks no number.
func (f *formula) value(row int) (float64, error) {
	f.load(row)
	return f.program.Number(f.cells)
}
