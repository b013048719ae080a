// Package spec reads a study plan and checks it.
//
// A plan is one YAML document. Read returns a Plan in which every field has been checked and every default written
// out, so no later package decides what an absent key means. If the file holds mistakes, Read reports all of them at
// once, in file order, as Errors.
//
// Numbers are parsed here, from the scalar text: a seed is a decimal integer in [0, 2⁶⁴), and 010 or 1_000 is a
// mistake, not eight or a thousand.
//
// The package opens no file but the plan, and does no arithmetic on data.
package spec

// A Plan is a study plan, checked and complete. Sources, columns and derived columns are sorted by name, because the
// order of keys in a YAML mapping carries no meaning; statistics, exclusions and amendments keep the order of the file.
type Plan struct {
	File       string      `json:"-"` // as named by the caller, for messages only
	Text       string      `json:"-"` // the plan, byte for byte
	SHA256     string      `json:"-"` // digest of the canonical content, hexadecimal
	Language   int         `json:"lotproof"`
	Study      Study       `json:"study"`
	Sources    []Source    `json:"sources"`
	Seed       Seed        `json:"seed"`
	Confidence []Number    `json:"confidence"`
	Resampling *Resampling `json:"resampling"` // the default for every statistic; nil if each states its own
	Rounding   *Rounding   `json:"rounding"`   // nil when no statistic has a criterion
	Statistics []Statistic `json:"statistics"`
	Amendments []Amendment `json:"amendments"`

	positions map[string]Position // path such as statistics[2].of[0] → place in the file
}

// A Position is a place in a file; both numbers count from 1, Column in characters. The zero value means "not known".
type Position struct{ Line, Column int }

// Study identifies the study. Empty texts mean that the plan does not state them.
type Study struct {
	ID          string   `json:"id"` // letters, digits, . _ - ; names the output folder
	Title       string   `json:"title"`
	Purpose     string   `json:"purpose"`
	Protocol    string   `json:"protocol"`
	Author      string   `json:"author"`
	Status      string   `json:"status"` // draft | approved
	Disclaimers []string `json:"disclaimers"`
}

// Seed is the start value of every random stream of the plan.
type Seed struct {
	Value   uint64 `json:"value,string"`
	Derived bool   `json:"derived"` // taken from the digest of the canonical plan without its seed line
}

// A Number is a decimal number as the plan writes it. Text keeps the digits, so that 1.20 has two decimals.
type Number struct {
	Text  string
	Value float64
}

// A Source is one table of rows.
type Source struct {
	Name    string      `json:"name"`
	File    string      `json:"file"`  // relative to the plan, with forward slashes
	Sheet   string      `json:"sheet"` // workbook only; empty means the only sheet
	SHA256  string      `json:"sha256"`
	Missing []string    `json:"missing"` // cell texts that mean "no value"; the empty cell is always one of them
	Columns []Column    `json:"columns"`
	Exclude []Exclusion `json:"exclude"`
	Derive  []Derived   `json:"derive"`
}

// ColumnType says how the cells of a column are read.
type ColumnType string

const (
	TypeNumber   ColumnType = "number"   // a decimal number
	TypeCategory ColumnType = "category" // one of few texts
	TypeText     ColumnType = "text"     // any text, carried to the ledger
)

// A Column is one declared column of a source.
type Column struct {
	Name     string     `json:"name"` // the heading in the file; in expressions, blanks are written _
	Type     ColumnType `json:"type"`
	Unit     string     `json:"unit"`
	Decimals int        `json:"decimals"` // decimals shown; -1: not declared
	Levels   []string   `json:"levels"`   // category only; empty: any
	Shape    string     `json:"shape"`    // normal | symmetric | skewed | lognormal | unknown
}

// An Exclusion takes rows out of every analysis, for a stated reason.
type Exclusion struct {
	Where   string `json:"where"` // a condition
	Because string `json:"because"`
	By      string `json:"by"`
}

// A Derived column is computed row by row from number columns of the file.
type Derived struct {
	Name     string `json:"name"`
	Formula  string `json:"formula"`
	Unit     string `json:"unit"`
	Decimals int    `json:"decimals"` // -1: not declared
}

// Resampling says what is drawn, and how often. Unit holds the levels from the outermost to the innermost: column
// names, and "row" for the single row.
type Resampling struct {
	Unit      []string `json:"unit"`
	Strata    []string `json:"strata"` // columns; drawn separately within each combination
	Resamples int      `json:"resamples"`
}

// Row is the name of the innermost resampling unit, the single row.
const Row = "row"

// Rounding is the comparison rule of ASTM E29: the absolute method or the rounding method.
type Rounding struct {
	Rule string `json:"rule"` // absolute | rounded
	Ties string `json:"ties"` // even | away; used by rounded only
}

// Bound names which limits a statistic asks for.
type Bound string

const (
	TwoSided Bound = "two-sided"
	Lower    Bound = "lower"
	Upper    Bound = "upper"
)

// A Statistic is one estimate that the plan asks for.
type Statistic struct {
	ID         string     `json:"id"`
	Label      string     `json:"label"`
	Role       string     `json:"role"` // primary | supporting
	Source     string     `json:"source"`
	Where      string     `json:"where"`     // a condition; empty: every row
	Name       string     `json:"statistic"` // as in the catalogue
	Of         []string   `json:"of"`        // columns
	With       []Setting  `json:"with"`      // every parameter of the statistic, in catalogue order
	Compare    *Compare   `json:"compare"`
	Bound      Bound      `json:"bound"`
	Confidence []Number   `json:"confidence"` // the first decides; the others are shown
	Intervals  []string   `json:"interval"`   // as in the catalogue; the first decides, the others are shown
	Companion  string     `json:"companion"`  // shown | decides
	Accept     Accept     `json:"accept"`
	Decimals   int        `json:"decimals"` // decimals shown at most; -1: not declared
	Resampling Resampling `json:"resampling"`
}

// A Setting is the value of one parameter of a statistic.
type Setting struct {
	Name   string  `json:"name"`
	Text   string  `json:"text"` // as written: the condition, the column name, or the digits of the number
	Number float64 `json:"-"`    // for parameters that are numbers
}

// Compare asks for the statistic in two groups and their difference or ratio, first over or minus second.
type Compare struct {
	By string    `json:"by"` // a category column
	Of [2]string `json:"of"` // two of its levels
	As string    `json:"as"` // difference | ratio
}

// Accept holds the acceptance criteria; nil means none.
type Accept struct {
	LowerAtLeast *Number `json:"lower_at_least"`
	UpperAtMost  *Number `json:"upper_at_most"`
}

// An Amendment is one approved change of the plan.
type Amendment struct {
	Number      int    `json:"number"`
	Date        string `json:"date"` // YYYY-MM-DD
	What        string `json:"what"`
	Why         string `json:"why"`
	ResultsSeen bool   `json:"results_seen"`
}
