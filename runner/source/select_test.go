package source

import (
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"lotproof/spec"
)

// ledger writes one row a line: its line in the file, its state, and what it lacks or belongs to.
func ledger(s *Selection) string {
	var b strings.Builder
	used := 0
	for i, row := range s.Table.Rows {
		state := []string{"used", "excluded", "missing", "outside"}[s.States[i]]
		fmt.Fprintf(&b, "%d %s", row.Line, state)
		switch s.States[i] {
		case Excluded:
			fmt.Fprintf(&b, " by %d", row.Excluded)
		case Missing:
			fmt.Fprintf(&b, " %s", s.Lacks[i])
		case Used:
			if s.Group != nil {
				fmt.Fprintf(&b, " in %s", []string{"first", "second"}[s.Group[used]])
			}
			used++
		}
		b.WriteString("\n")
	}
	return b.String()
}

// seals is a plan over pouches with a statistic of each kind; the data below are invented.
func seals() *spec.Plan {
	plan := pouches("peel.csv")
	s := &plan.Sources[0]
	s.Columns = append(s.Columns, spec.Column{Name: "seal width", Type: spec.TypeNumber, Unit: "mm", Decimals: 1})
	s.Exclude = []spec.Exclusion{
		{Where: `note == "void"`, Because: "Grip slipped."},
		{Where: `strength > 5 or note == "void again"`, Because: "Above the range of the instrument."},
	}
	s.Derive = []spec.Derived{{Name: "per width", Formula: "strength / seal_width", Unit: "N/mm2", Decimals: 3}}
	row := spec.Resampling{Unit: []string{spec.Row}, Resamples: 1000}
	plan.Statistics = []spec.Statistic{
		{ID: "all", Source: "peel", Name: "median", Of: []string{"strength"}, Resampling: row},
		{ID: "aged", Source: "peel", Name: "median", Of: []string{"strength"}, Where: `arm == "aged" and seal_width < 9`,
			Resampling: spec.Resampling{Unit: []string{"pouch", spec.Row}, Resamples: 1000}},
		{ID: "loss", Source: "peel", Name: "mean", Of: []string{"per width"}, Resampling: row,
			Compare: &spec.Compare{By: "pouch", Of: [2]string{"P2", "P1"}, As: "difference"}},
		{ID: "weak", Source: "peel", Name: "proportion", Resampling: spec.Resampling{Unit: []string{spec.Row},
			Strata: []string{"arm"}}, With: []spec.Setting{{Name: "condition", Text: `strength < 1.2 and note != "ok"`}}},
		{ID: "repeatability", Source: "peel", Name: "repeatability standard deviation", Of: []string{"strength"},
			With: []spec.Setting{{Name: "factor", Text: "pouch"}}, Resampling: row},
	}
	return plan
}

const sealData = `pouch,arm,strength,note,seal width
P1,fresh,1.30,,8
P1,aged,1.10,,8
P2,aged,1.20,void,8
P2,aged,6.00,,0
P2,fresh,,,8
P3,aged,1.00,,8
,aged,1.15,,9
P1,,1.25,ok,8
P2,aged,1.22,,
P2,aged,,void again,8
P2,fresh,-0.5,,10
`

func TestLedger(t *testing.T) {
	data, err := loadText(t, seals(), sealData)
	must(t, err)
	want := []string{
		// all: needs strength. The row on line 6 has no strength, so the second exclusion cannot be judged there, and
		// neither on line 11; but no statistic uses them.
		"2 used\n3 used\n4 excluded by 0\n5 excluded by 1\n6 missing strength\n7 used\n8 used\n9 used\n10 used\n" +
			"11 missing strength\n12 used\n",
		// aged: needs strength and pouch; its condition needs the seal width.
		"2 outside\n3 used\n4 excluded by 0\n5 excluded by 1\n6 outside\n7 used\n8 outside\n9 outside\n" +
			"10 missing seal width\n11 missing strength\n12 outside\n",
		// loss: needs the derived column, which is missing where one of its columns is, and the pouch.
		"2 used in second\n3 used in second\n4 excluded by 0\n5 excluded by 1\n6 missing per width\n7 outside\n" +
			"8 missing pouch\n9 used in second\n10 missing per width\n11 missing per width\n12 used in first\n",
		// weak: needs strength and arm; a note without a value compares as the empty text.
		"2 used\n3 used\n4 excluded by 0\n5 excluded by 1\n6 missing strength\n7 used\n8 used\n9 missing arm\n10 " +
			"used\n" +
			"11 missing strength\n12 used\n",
		// repeatability: needs strength and pouch.
		"2 used\n3 used\n4 excluded by 0\n5 excluded by 1\n6 missing strength\n7 used\n8 missing pouch\n9 used\n10 " +
			"used\n" +
			"11 missing strength\n12 used\n",
	}
	for i, s := range data.Selections {
		if got := ledger(s); got != want[i] {
			t.Errorf("statistic %d: got\n%swant\n%s", i, got, want[i])
		}
	}
	if got, want := data.Selections[0].Counts(), (Counts{Read: 11, Used: 7, Excluded: 2, Missing: 2}); got != want {
		t.Errorf("counts %+v, want %+v", got, want)
	}

	perWidth := data.Tables[0].Column("per width")
	if perWidth.Numbers[0] != 1.30/8 || !perWidth.Derived || perWidth.Unit != "N/mm2" || perWidth.Decimals != 3 {
		t.Errorf("derived column %+v", perWidth)
	}
	if !perWidth.Missing[3] { // strength / 0 in an excluded row is no mistake
		t.Errorf("the derived value on line 5 is %v", perWidth.Numbers[3])
	}

	weak, err := data.Tables[0].Condition(`strength < 1.2 and note != "ok"`, data.Selections[3].Rows)
	must(t, err)
	if want := []float64{0, 1, 1, 1, 0, 1}; !slices.Equal(weak, want) {
		t.Errorf("condition %v, want %v", weak, want)
	}
	if _, err := data.Tables[0].Condition("strength < 1", []int{4}); err == nil ||
		err.Error() != "the condition needs column strength, which has no value on line 6" {
		t.Errorf("condition on a row without the number: %v", err)
	}
	if _, err := data.Tables[0].Condition("strength", nil); err == nil {
		t.Error("a number was taken for a condition")
	}
}

func TestRuleMistakes(t *testing.T) {
	tests := []struct {
		name   string
		change func(p *spec.Plan)
		data   string
		want   []string
	}{
		{"derived value that does not exist", nil, sealData + "P9,fresh,1.5,,0\n", []string{
			"peel.csv:13: derived column per width: strength / seal_width has no value where seal width 0, " +
				"strength 1.5: " +
				"division by zero; exclude the row with a reason, or change the formula"}},
		{"exclusion in doubt on a used row", func(p *spec.Plan) {
			p.Sources[0].Exclude[1].Where = "seal_width > 20"
		}, sealData, []string{
			"peel.csv:5: derived column per width: strength / seal_width has no value where seal width 0, strength " +
				"6.00: " +
				"division by zero; exclude the row with a reason, or change the formula"}},
		{"the same for every statistic", func(p *spec.Plan) {
			p.Sources[0].Exclude[1].Where = "seal_width < 1"
		}, sealData, []string{
			"peel.csv:10: the exclusion seal_width < 1 cannot be judged, because seal width has no value, and the " +
				"row is " +
				"used: pouch \"P2\", arm \"aged\", strength 1.22, note missing, seal width missing; write the " +
				"condition without " +
				"seal width, or take the row out by another exclusion"}},
		{"conditions and formulas", func(p *spec.Plan) {
			p.Sources[0].Exclude[0].Where = `nota == "void"`
			p.Statistics[1].Where = "strength + 1"
		}, sealData, []string{
			`plan.yaml:1:1: there is no column "nota" to be used here; did you mean "note"? columns here: pouch, arm, strength, ` +
				`note, seal_width, per_width`}},
		{"formula over a text", func(p *spec.Plan) { p.Sources[0].Derive[0].Formula = "note * 2" }, sealData, []string{
			`plan.yaml:1:1: there is no column "note" to be used here; columns here: strength, seal_width`}},
		{"condition of a statistic", func(p *spec.Plan) {
			p.Statistics[1].Where = "strength + 1"
			p.Statistics[3].With[0].Text = "arm < 2"
		}, sealData, []string{
			"plan.yaml:1:1: a condition is wanted, and this is a number; compare it with something, as in x > 1",
			"plan.yaml:1:1: < compares a text with a number; write the value between quotation marks, as it stands " +
				"in the data"}},
		{"condition without a value", func(p *spec.Plan) { p.Statistics[0].Where = "1 / seal_width > 0" },
			strings.Replace(sealData, "P2,aged,6.00,,0", "P2,aged,6.00,void,1", 1) + "P9,fresh,0,void,0\n" + "P9,fresh,,,0\n",
			[]string{"peel.csv:14: the condition 1 / seal_width > 0 of statistic \"all\" cannot be judged where " +
				"seal width 0: " +
				"division by zero; change the condition"}},
		{"exclusion without a value", func(p *spec.Plan) {
			p.Sources[0].Exclude[1].Where = "log(seal_width) < 0"
			p.Sources[0].Derive = nil
			p.Statistics = p.Statistics[:1]
		}, strings.Replace(sealData, "P2,aged,1.22,,\n", "", 1), []string{
			"peel.csv:5: the exclusion log(seal_width) < 0 cannot be judged where seal width 0: logarithm of a " +
				"number that " +
				"is not positive; change the condition"}},
		{"columns of a statistic", func(p *spec.Plan) {
			p.Statistics[0].Of = []string{"strenth"}
			p.Statistics[0].Resampling.Unit = []string{"seal width"}
			p.Statistics[1].Of = []string{"arm"}
		}, sealData, []string{
			`plan.yaml:1:1: source peel has no column "strenth"; did you mean "strength"? columns there: "pouch", "arm", ` +
				`"strength", "note", "seal width", "per width"`,
			"plan.yaml:1:1: column seal width has the type number; name a column of the type category",
			"plan.yaml:1:1: column arm has the type category; name a column of the type number"}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			plan := seals()
			if tt.change != nil {
				tt.change(plan)
			}
			_, err := loadText(t, plan, tt.data)
			compare(t, err, tt.want)
		})
	}
}

// A row of a workbook is named by sheet and number; a long row is quoted in part.
func TestRuleMistakeInWorkbook(t *testing.T) {
	plan := seals()
	plan.Sources[0].File = "peel.xlsx"
	plan.Sources[0].Exclude[1].Where = "seal_width < 1"
	for i := range 6 {
		plan.Sources[0].Columns = append(plan.Sources[0].Columns, spec.Column{Name: fmt.Sprint("x", i), Type: spec.TypeText})
	}
	content := book(t, func(f *excelize.File) {
		set(t, f, "E1", "seal width")
		for i := range 6 {
			set(t, f, fmt.Sprintf("%c1", 'F'+i), fmt.Sprint("x", i))
		}
		set(t, f, "A2", "P1")
		set(t, f, "C2", 1.5)
		set(t, f, "A3", "P1")
		set(t, f, "C3", 1.5)
		set(t, f, "E3", 0.0+1)
		set(t, f, "A4", "P1")
		set(t, f, "D4", "void")
		set(t, f, "E4", 0.0)
	})
	_, err := loadBook(t, plan, content)
	compare(t, err, []string{
		"peel.xlsx: sheet Data, row 2: the exclusion seal_width < 1 cannot be judged, because seal width has no " +
			"value, and " +
			"the row is used: pouch \"P1\", arm missing, strength 1.5, note missing, seal width missing, x0 " +
			"missing, x1 " +
			"missing, x2 missing, …; write the condition without seal width, or take the row out by another exclusion"})
}

// A text column may make the resampling units; then its spellings are looked at like those of a category.
func TestTextUnits(t *testing.T) {
	plan := pouches("peel.csv")
	const data = "pouch,arm,strength,note\nP1,aged,1.3,S1\nP1,aged,1.3,s1\nP1,aged,1.3,S1 \n"
	plan.Statistics = []spec.Statistic{{ID: "aged", Source: "peel", Of: []string{"strength"},
		Resampling: spec.Resampling{Unit: []string{"pouch", spec.Row}}}}
	_, err := loadText(t, plan, data)
	must(t, err)
	plan.Statistics[0].Resampling.Unit = []string{"note"}
	_, err = loadText(t, plan, data)
	compare(t, err, []string{
		`peel.csv:3:13: column note: levels "S1" (line 2) and "s1" differ only in letter case; write them alike`,
		`peel.csv:4:13: column note: levels "S1" (line 2) and "S1 " differ only in the blanks round them; write them alike`})
}

// Checked against the general-purpose library of the language, which is within one unit in the last place itself.
func TestLog10(t *testing.T) {
	random := rand.New(rand.NewPCG(7, 8))
	for range 10000 {
		x := math.Exp(random.Float64()*1400 - 700)
		got, want := log10(x), math.Log10(x)
		if !(math.Abs(got-want) <= 3*0x1p-52*math.Abs(want)) {
			t.Errorf("log10(%v) = %.17g, want %.17g", x, got, want)
		}
	}
	for k := -307; k <= 308; k++ {
		x, err := strconv.ParseFloat(fmt.Sprint("1e", k), 64)
		must(t, err)
		if got := log10(x); got != float64(k) {
			t.Errorf("log10(1e%d) = %v", k, got)
		}
	}
}

// A derived −0 is stored as 0.
func TestDerivedZero(t *testing.T) {
	plan := seals()
	plan.Sources[0].Derive = []spec.Derived{{Name: "zero", Formula: "0 * strength"}}
	plan.Statistics = nil
	data, err := loadText(t, plan, sealData)
	must(t, err)
	if v := data.Tables[0].Column("zero").Numbers[10]; v != 0 || math.Signbit(v) {
		t.Errorf("0 * -0.5 is stored as %v", v)
	}
}

// randomData makes a file for seals with every kind of row.
func randomData(random *rand.Rand) []string {
	pick := func(of ...string) string { return of[random.IntN(len(of))] }
	rows := make([]string, 1+random.IntN(40))
	for i := range rows {
		rows[i] = strings.Join([]string{pick("P1", "P2", "P3", "", "NA"), pick("fresh", "aged", ""),
			pick("1.1", "1.25", "6", "", "n/a", "0.3"), pick("", "void", "void again", "ok"), pick("8", "9.5", "NA")}, ",")
	}
	return rows
}

// Read = used + excluded + missing + outside; the used rows stand in ascending order and hold every needed value; and
// the order of the rows in the file changes no set of used values.
func TestLedgerLaws(t *testing.T) {
	random := rand.New(rand.NewPCG(5, 6))
	const head = "pouch,arm,strength,note,seal width\n"
	load := func(rows []string) *Data {
		data, err := loadText(t, seals(), head+strings.Join(rows, "\n")+"\n")
		must(t, err)
		return data
	}
	for range 200 {
		rows := randomData(random)
		data := load(rows)
		random.Shuffle(len(rows), func(i, j int) { rows[i], rows[j] = rows[j], rows[i] })
		other := load(rows)
		for i, s := range data.Selections {
			c := s.Counts()
			if c.Read != len(rows) || c.Read != c.Used+c.Excluded+c.Missing+c.Outside || c.Used != len(s.Rows) {
				t.Fatalf("statistic %d: %+v, %d used of %d rows", i, c, len(s.Rows), len(rows))
			}
			if !slices.IsSorted(s.Rows) || s.Group != nil && len(s.Group) != len(s.Rows) {
				t.Fatalf("statistic %d: rows %v, groups %v", i, s.Rows, s.Group)
			}
			for _, row := range s.Rows {
				if s.States[row] != Used || s.Lacks[row] != "" || s.Table.Rows[row].Excluded >= 0 {
					t.Fatalf("statistic %d: row %d is used", i, row)
				}
			}
			for row, state := range s.States {
				if (state == Missing) != (s.Lacks[row] != "") || (state == Excluded) != (s.Table.Rows[row].Excluded >= 0) {
					t.Fatalf("statistic %d: row %d has the state %d and lacks %q", i, row, state, s.Lacks[row])
				}
			}
			if c != other.Selections[i].Counts() || !slices.Equal(usedValues(s), usedValues(other.Selections[i])) {
				t.Fatalf("statistic %d: another order of rows gives other values", i)
			}
		}
	}
}

// usedValues returns the used rows as text, with their groups, in ascending order.
func usedValues(s *Selection) []string {
	var out []string
	for i, row := range s.Rows {
		text := s.Table.quoteRow(row, nil)
		if s.Group != nil {
			text += fmt.Sprint(" group ", s.Group[i])
		}
		out = append(out, text)
	}
	slices.Sort(out)
	return out
}

// A misspelt level of a category without declared levels would hold for no row; it is a mistake with the levels of the file.
func TestMisspeltLevelIsFound(t *testing.T) {
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "t.csv"), []byte("result\ngood\nnonconforming\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	plan := &spec.Plan{File: "plan.yaml", Sources: []spec.Source{{Name: "t", File: "t.csv",
		Columns: []spec.Column{{Name: "result", Type: spec.TypeCategory, Decimals: -1}}}},
		Statistics: []spec.Statistic{{ID: "s", Source: "t", Name: "proportion", Resampling: spec.Resampling{Unit: []string{"row"}},
			With: []spec.Setting{{Name: "condition", Text: `result == "nonconfroming"`}}}}}
	_, err := Load(plan, dir)
	want := `"nonconfroming" is not a level of column result; did you mean "nonconforming"? levels: good, nonconforming; ` +
		"if it can occur though no row has it, declare the levels of the column"
	if err == nil || !strings.Contains(err.Error(), want) {
		t.Errorf("got %v\nwant %s", err, want)
	}
	plan.Statistics[0].With[0].Text = `result == "nonconforming"`
	if _, err := Load(plan, dir); err != nil {
		t.Error(err)
	}
}
