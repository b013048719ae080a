// Package expression compiles the conditions and formulas of a study plan.
//
// The language is small, so that a plan means the same for ever: columns by name (blanks written as _), decimal
// numbers, texts between quotation marks, + - * /, == != < <= > >=, in [ … ], and, or, not, parentheses, and the
// functions abs, sqrt, min, max, exp, log (natural) and log10. Every number is a 64-bit binary floating-point number.
// Nothing has a side effect, reads a clock or draws at random; length and depth are bounded.
//
// A general-purpose library reads the text into a tree (its lexer and its parser are all that is used of it, in this
// package only); this package refuses everything else that the library knows, checks the types, and computes.
package expression

import "fmt"

// Type says what an expression, or a column in it, yields.
type Type string

const (
	Number    Type = "number"
	Text      Type = "text"
	Condition Type = "condition" // true or false; no column is of this type
)

// A Column is a name that an expression may use.
type Column struct {
	Name   string   // as in the plan; Identifier says how an expression writes it
	Type   Type     // Number or Text
	Levels []string // the texts that can occur; empty: any
}

// Functions computes what this package leaves to its caller: natural exponential, natural and decimal logarithm.
// Compile needs no functions to check an expression; a Program compiled without them must not be evaluated if it calls
// one.
type Functions struct {
	Exp, Log, Log10 func(float64) float64
}

// An Error is a mistake in the text of an expression.
type Error struct {
	Line, Column int // place within the text, from 1, Column in characters
	Problem      string
	Fix          string // may be empty
}

func (e *Error) Error() string {
	s := fmt.Sprintf("%d:%d: %s", e.Line, e.Column, e.Problem)
	if e.Fix != "" {
		s += "; " + e.Fix
	}
	return s
}

// A Program is a compiled expression. It may be used by several goroutines at once.
type Program struct {
	columns []string
	number  func(*run) float64
	truth   func(*run) bool
}

// A Row gives the cells of one row: for each of Columns, the number in Numbers or the text in Texts, at the same place.
// The other of the two is not looked at. Numbers must be finite; a cell without a value is for the caller to see to.
type Row struct {
	Numbers []float64
	Texts   []string
}

// Columns returns the names, as in the plan, of the columns that the expression uses, sorted; not to be modified.
func (p *Program) Columns() []string { return p.columns }

// Number computes a formula, one compiled as Number. The error says in plain words why there is no finite value.
func (p *Program) Number(row Row) (float64, error) {
	r := run{row: row}
	v := p.number(&r)
	return v, r.err
}

// Condition judges a condition, one compiled as Condition. The error says in plain words why it cannot be judged.
func (p *Program) Condition(row Row) (bool, error) {
	r := run{row: row}
	v := p.truth(&r)
	return v, r.err
}

// A run is the evaluation of one row. The first error stays; what is computed after it is not used.
type run struct {
	row Row
	err error
}

func (r *run) fail(err error) {
	if r.err == nil {
		r.err = err
	}
}
