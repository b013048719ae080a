package source

import (
	"math/big"
	"testing"

	"lotproof/spec"
)

// published loads a file of published data, all of whose columns are numbers, but for the factor.
func published(t *testing.T, file string, factor string, numbers ...string) *Table {
	t.Helper()
	plan := &spec.Plan{File: "plan.yaml", Sources: []spec.Source{{Name: "data", File: file}}}
	s := &plan.Sources[0]
	if factor != "" {
		s.Columns = append(s.Columns, spec.Column{Name: factor, Type: spec.TypeCategory})
	}
	for _, name := range numbers {
		s.Columns = append(s.Columns, spec.Column{Name: name, Type: spec.TypeNumber})
	}
	data, err := Load(plan, "../../testdata/source")
	must(t, err)
	return data.Tables[0]
}

// rational returns the exact decimals of a column, and checks that each number is the double next to its decimal.
func rational(t *testing.T, c *Column) []*big.Rat {
	t.Helper()
	var out []*big.Rat
	for i, text := range c.Texts {
		r, ok := new(big.Rat).SetString(text)
		if !ok {
			t.Fatalf("cell %d: %q", i, text)
		}
		if next, _ := r.Float64(); next != c.Numbers[i] { // Float64 rounds to nearest, by exact integers
			t.Errorf("cell %d: %v, want %v", i, c.Numbers[i], next)
		}
		out = append(out, r)
	}
	return out
}

func meanOf(x []*big.Rat) *big.Rat {
	sum := new(big.Rat)
	for _, v := range x {
		sum.Add(sum, v)
	}
	return sum.Quo(sum, big.NewRat(int64(len(x)), 1))
}

// products returns Σ(xᵢ − x̄)(yᵢ − ȳ).
func products(x, y []*big.Rat) *big.Rat {
	mx, my, sum := meanOf(x), meanOf(y), new(big.Rat)
	for i := range x {
		p := new(big.Rat).Mul(new(big.Rat).Sub(x[i], mx), new(big.Rat).Sub(y[i], my))
		sum.Add(sum, p)
	}
	return sum
}

// digits compares r with a printed decimal, to its last digit.
func digits(t *testing.T, what string, r *big.Rat, decimals int, want string) {
	t.Helper()
	if got := r.FloatString(decimals); got != want {
		t.Errorf("%s = %s, want %s", what, got, want)
	}
}

// The files are read to the number of observations that NIST StRD prints, and the decimals that were read give its
// certified values in exact arithmetic (univariate summary statistics: NumAcc1, NumAcc3, Michelso).
func TestReadUnivariate(t *testing.T) {
	for _, tt := range []struct {
		file     string
		n        int
		mean, sd string // certified
		decimals [2]int
	}{
		{"nist_numacc1.csv", 3, "10000002", "1", [2]int{0, 0}},
		{"nist_numacc3.csv", 1001, "1000000.2", "0.1", [2]int{1, 1}},
		{"nist_michelso.csv", 100, "299.852400000000", "0.0790105478190518", [2]int{12, 16}},
	} {
		t.Run(tt.file, func(t *testing.T) {
			table := published(t, tt.file, "", "y")
			if len(table.Rows) != tt.n {
				t.Fatalf("%d observations, want %d", len(table.Rows), tt.n)
			}
			y := rational(t, table.Column("y"))
			digits(t, "mean", meanOf(y), tt.decimals[0], tt.mean)
			variance := products(y, y)
			variance.Quo(variance, big.NewRat(int64(tt.n-1), 1))
			root := new(big.Float).SetPrec(200).SetRat(variance)
			sd, _ := root.Sqrt(root).Rat(nil)
			digits(t, "standard deviation", sd, tt.decimals[1], tt.sd)
		})
	}
}

// NIST StRD, linear regression, Norris: certified coefficients.
func TestReadNorris(t *testing.T) {
	table := published(t, "nist_norris.csv", "", "x", "y")
	if len(table.Rows) != 36 {
		t.Fatalf("%d observations, want 36", len(table.Rows))
	}
	x, y := rational(t, table.Column("x")), rational(t, table.Column("y"))
	slope := products(x, y)
	slope.Quo(slope, products(x, x))
	digits(t, "slope", slope, 14, "1.00211681802045")
	intercept := new(big.Rat).Sub(meanOf(y), new(big.Rat).Mul(slope, meanOf(x)))
	digits(t, "intercept", intercept, 15, "-0.262323073774029")
}

// NIST StRD, analysis of variance, SiRstv: 5 instruments with 5 measurements each, certified mean square between them
// 0.0127865654 (printed as 1.27865654000E-02).
func TestReadSiRstv(t *testing.T) {
	table := published(t, "nist_sirstv.csv", "group", "y")
	y := rational(t, table.Column("y"))
	groups := map[string][]*big.Rat{}
	for i, group := range table.Column("group").Texts {
		groups[group] = append(groups[group], y[i])
	}
	if len(y) != 25 || len(groups) != 5 {
		t.Fatalf("%d observations in %d groups, want 25 in 5", len(y), len(groups))
	}
	between := new(big.Rat)
	for _, of := range groups {
		if len(of) != 5 {
			t.Fatalf("a group of %d", len(of))
		}
		d := new(big.Rat).Sub(meanOf(of), meanOf(y))
		between.Add(between, d.Mul(d, d).Mul(d, big.NewRat(5, 4)))
	}
	digits(t, "mean square between", between, 10, "0.0127865654")
}

// Analytical Methods Committee 1989: 24 determinations of copper, whose mean the report gives as 4.28 and whose median
// as 3.385 µg/g (figures from memory).
func TestReadChem(t *testing.T) {
	table := published(t, "chem.csv", "", "copper")
	if len(table.Rows) != 24 {
		t.Fatalf("%d determinations, want 24", len(table.Rows))
	}
	copper := rational(t, table.Column("copper"))
	digits(t, "mean", meanOf(copper), 2, "4.28")
	middle := new(big.Rat)
	for _, v := range copper { // the median: half the values on either side of 3.385
		middle.Add(middle, big.NewRat(int64(v.Cmp(big.NewRat(3385, 1000))), 1))
	}
	if middle.Sign() != 0 {
		t.Errorf("3.385 does not divide the values in halves")
	}
}

// The workbook was written by LibreOffice.
func TestReadOfficeWorkbook(t *testing.T) {
	plan := pouches("office.xlsx")
	data, err := Load(plan, "../../testdata/source")
	must(t, err)
	want := `2: pouch="P1" arm="fresh" strength=1.3 note="two words, one comma"
3: pouch="P2" arm="aged" strength=0.123456789012345 note=()
4: pouch="P3" arm="aged" strength=() note="Müller & <co>"
5: pouch="P4" arm="fresh" strength=1e-07 note="2"
`
	if got := show(data.Tables[0]); got != want {
		t.Errorf("got\n%swant\n%s", got, want)
	}
}
