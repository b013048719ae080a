// Package source reads the tables of a plan and says, for every row, whether and where it is used.
//
// A table holds the declared columns and the derived ones, typed, in rows as they stand in the file. No row is ever
// dropped: an excluded row keeps its place with the reason. Wrong cells are reported all together, with file, line and
// column, as spec.Errors.
//
// Blanks round headings and cells do not count. A number is an optional sign, digits, a point with digits, an exponent;
// nothing is guessed from other forms. A cell that is empty, or one of the missing marks of the source, holds no value.
// Values are finite, and −0 is 0. A condition takes a category or text without a value for the empty text, and is never
// judged where it needs a number that the row lacks.
package source

import "lotproof/spec"

// A Table is one source of the plan as read.
type Table struct {
	Source  spec.Source
	Bytes   int64
	SHA256  string   // digest of the file as read
	Ignored []string // headings in the file that the plan does not declare
	Columns []Column // declared columns in the order of the file, then derived columns by name
	Rows    []Row    // data rows in the order of the file

	sheet    string        // of a workbook, else empty
	unjudged map[int]doubt // rows in which an exclusion cannot be judged
}

// A Column holds the cells of one column, one a row of the table.
type Column struct {
	Name     string
	Type     spec.ColumnType
	Unit     string
	Decimals int // -1: not declared
	Derived  bool
	Numbers  []float64 // type number: the value, NaN where missing
	Texts    []string  // the cell as written (empty for derived columns)
	Missing  []bool
}

// A Row is one data row of a file.
type Row struct {
	Line     int // line in the file (workbook: row number) where the row starts, from 1
	Excluded int // index into Source.Exclude of the first rule that applies, or -1
}

// State says what becomes of a row in one statistic.
type State uint8

const (
	Used     State = iota // enters the estimate
	Excluded              // taken out by an exclusion of the source
	Missing               // a needed column has no value
	Outside               // the statistic's condition or comparison does not select it
)

// A Selection is the row ledger of one statistic: read = used + excluded + missing + outside.
type Selection struct {
	Table  *Table
	States []State  // one a row of the table
	Lacks  []string // for missing rows: the first needed column without a value; else ""
	Rows   []int    // indices of the used rows, ascending
	Group  []int    // with a comparison: for each used row, 0 or 1, the place in Compare.Of; else nil
}

// Counts are the totals of a ledger.
type Counts struct {
	Read     int `json:"read"`
	Used     int `json:"used"`
	Excluded int `json:"excluded"`
	Missing  int `json:"missing"`
	Outside  int `json:"outside"`
}

// Data is everything that was read for a plan: the tables in the order of Plan.Sources and one ledger a statistic, in
// the order of Plan.Statistics.
type Data struct {
	Tables     []*Table
	Selections []*Selection
}

// Column returns the column of that name, or nil.
func (t *Table) Column(name string) *Column {
	for i := range t.Columns {
		if t.Columns[i].Name == name {
			return &t.Columns[i]
		}
	}
	return nil
}

// Counts adds up the ledger.
func (s *Selection) Counts() Counts {
	c := Counts{Read: len(s.States)}
	for _, state := range s.States {
		switch state {
		case Used:
			c.Used++
		case Excluded:
			c.Excluded++
		case Missing:
			c.Missing++
		case Outside:
			c.Outside++
		}
	}
	return c
}
