// Package reference reads the reference cases and open data of testdata/reference for the tests of the runner, and
// compares figures with them by the tolerance that each case states.
package reference

import (
	"encoding/csv"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"testing"
)

// A Case is one published or independently computed result.
type Case struct {
	ID            string
	Packages      []string // of the runner, whose tests check it
	Kind          string
	Data          string // file name
	Columns       []string
	Quantity      string
	Parameters    map[string]any
	Expected      Figures
	Tolerance     float64
	ToleranceKind string `json:"tolerance_kind"` // relative | absolute | monte-carlo
	Source        string
	MonteCarlo    *MonteCarlo `json:"monte_carlo"`
}

// MonteCarlo says how exact a simulated figure can be.
type MonteCarlo struct {
	ReferenceError Figures               `json:"reference_standard_error"`
	SD             Figures               `json:"sd_per_root_replicate"` // times √B
	Resamples      int                   `json:"tolerance_at_replicates"`
	Accept         map[string][2]float64 `json:"accept_range_at_tolerance_replicates"`
}

// Figures are named numbers. A bare number in the file has the name Value.
type Figures map[string]float64

// Value is the name of the only figure of a case.
const Value = "value"

// UnmarshalJSON reads an object of numbers or one number.
func (f *Figures) UnmarshalJSON(b []byte) error {
	var one float64
	if json.Unmarshal(b, &one) == nil {
		*f = Figures{Value: one}
		return nil
	}
	return json.Unmarshal(b, (*map[string]float64)(f))
}

// Load returns all cases, or, with a package of the runner named, the cases that its tests check.
func Load(t testing.TB, pkg string) []Case {
	t.Helper()
	b, err := os.ReadFile(Path(t, "cases.json"))
	if err != nil {
		t.Fatal(err)
	}
	var all, out []Case
	if err := json.Unmarshal(b, &all); err != nil {
		t.Fatal(err)
	}
	for _, c := range all {
		if pkg == "" || slices.Contains(c.Packages, pkg) {
			out = append(out, c)
		}
	}
	if len(out) == 0 {
		t.Fatalf("no case for package %q", pkg)
	}
	return out
}

// Find returns one case.
func Find(t testing.TB, id string) Case {
	t.Helper()
	for _, c := range Load(t, "") {
		if c.ID == id {
			return c
		}
	}
	t.Fatalf("no case %q", id)
	return Case{}
}

// Path returns the path of a file of testdata/reference. The root of the repository is where go.mod is.
func Path(t testing.TB, name string) string {
	t.Helper()
	dir, err := os.Getwd()
	if err != nil {
		t.Fatal(err)
	}
	for {
		if _, err := os.Stat(filepath.Join(dir, "go.mod")); err == nil {
			return filepath.Join(dir, "testdata", "reference", name)
		}
		up := filepath.Dir(dir)
		if up == dir {
			t.Fatal("no go.mod above the working folder")
		}
		dir = up
	}
}

// A Table is a data file.
type Table struct {
	t      testing.TB
	name   string
	header []string
	rows   [][]string
}

// Data reads a data file.
func Data(t testing.TB, name string) *Table {
	t.Helper()
	file, err := os.Open(Path(t, name))
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	rows, err := csv.NewReader(file).ReadAll()
	if err != nil || len(rows) < 2 {
		t.Fatalf("%s: %d lines, %v", name, len(rows), err)
	}
	return &Table{t, name, rows[0], rows[1:]}
}

// Texts returns a column.
func (d *Table) Texts(column string) []string {
	d.t.Helper()
	at := slices.Index(d.header, column)
	if at < 0 {
		d.t.Fatalf("%s has no column %q", d.name, column)
	}
	out := make([]string, len(d.rows))
	for i, row := range d.rows {
		out[i] = row[at]
	}
	return out
}

// Numbers returns a column of numbers.
func (d *Table) Numbers(column string) []float64 {
	d.t.Helper()
	var out []float64
	for _, text := range d.Texts(column) {
		v, err := strconv.ParseFloat(text, 64)
		if err != nil {
			d.t.Fatalf("%s, column %q: %v", d.name, column, err)
		}
		out = append(out, v)
	}
	return out
}

// Where returns the table of the rows with the given text in a column.
func (d *Table) Where(column, text string) *Table {
	d.t.Helper()
	out := &Table{d.t, d.name, d.header, nil}
	for i, v := range d.Texts(column) {
		if v == text {
			out.rows = append(out.rows, d.rows[i])
		}
	}
	if len(out.rows) == 0 {
		d.t.Fatalf("%s has no row with %s %q", d.name, column, text)
	}
	return out
}

// Codes numbers the different texts of a column in the order of their first row.
func (d *Table) Codes(column string) (codes []int32, groups int) {
	d.t.Helper()
	seen := map[string]int32{}
	for _, text := range d.Texts(column) {
		code, ok := seen[text]
		if !ok {
			code = int32(len(seen))
			seen[text] = code
		}
		codes = append(codes, code)
	}
	return codes, len(seen)
}

// Compare checks every figure of the case; resamples is the number that was drawn, 0 where nothing was. Figures that
// the program does not compute are named in without. Unknown names on either side are failures.
func (c Case) Compare(t testing.TB, got Figures, resamples int, without ...string) {
	t.Helper()
	for name := range got {
		if _, ok := c.Expected[name]; !ok {
			t.Errorf("%s has no figure %q", c.ID, name)
		}
	}
	for name, want := range c.Expected {
		v, ok := got[name]
		if skipped := slices.Contains(without, name); ok == skipped {
			t.Errorf("%s: figure %q computed: %t, left out: %t", c.ID, name, ok, skipped)
		} else if ok {
			low, high := c.Range(t, name, want, resamples)
			if !(v >= low && v <= high) {
				t.Errorf("%s: %s = %.17g, want %.17g, allowed %.17g to %.17g\n%s\nsource: "+
					"%s", c.ID, name, v, want, low, high,
					c.Quantity, c.Source)
			}
		}
	}
}

// Range returns the figures that the tolerance of the case allows around want.
func (c Case) Range(t testing.TB, name string, want float64, resamples int) (low, high float64) {
	t.Helper()
	switch c.ToleranceKind {
	case "relative":
		return want - c.Tolerance*math.Abs(want), want + c.Tolerance*math.Abs(want)
	case "absolute":
		return want - c.Tolerance, want + c.Tolerance
	case "monte-carlo":
		last := 1e-12 * math.Abs(want) // sums in another order differ in the last bits
		if r, ok := c.MonteCarlo.Accept[name]; ok && resamples == c.MonteCarlo.Resamples {
			shift := want - c.Expected[name] // sharper than the general rule
			return r[0] + shift - last, r[1] + shift + last
		}
		sd, ok := c.MonteCarlo.SD[name]
		if !ok || resamples <= 0 {
			t.Fatalf("%s: no simulation error for %q with %d resamples", c.ID, name, resamples)
		}
		reference, ok := c.MonteCarlo.ReferenceError[name]
		if !ok {
			reference = c.MonteCarlo.ReferenceError[Value]
		}
		reach := 5*math.Sqrt(sd*sd/float64(resamples)+reference*reference) + last
		return want - reach, want + reach
	}
	t.Fatalf("%s: unknown kind of tolerance %q", c.ID, c.ToleranceKind)
	return 0, 0
}

// Number returns a parameter of the case.
func (c Case) Number(t testing.TB, name string) float64 {
	t.Helper()
	v, ok := c.Parameters[name].(float64)
	if !ok {
		t.Fatalf("%s has no number %q among its parameters", c.ID, name)
	}
	return v
}

// Run carries out the check of every case of a package as a subtest. A case without a check and a check without a case
// are failures, so that nothing in the file goes untested.
func Run(t *testing.T, pkg string, checks map[string]func(t *testing.T, c Case)) {
	t.Helper()
	known := map[string]bool{}
	for _, c := range Load(t, pkg) {
		known[c.ID] = true
		check, ok := checks[c.ID]
		if !ok {
			t.Errorf("no check of case %s: %s", c.ID, c.Quantity)
			continue
		}
		t.Run(c.ID, func(t *testing.T) { check(t, c) })
	}
	for id := range checks {
		if !known[id] {
			t.Errorf("the file has no case %q for package %s", id, pkg)
		}
	}
}
