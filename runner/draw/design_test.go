package draw

import (
	"errors"
	"fmt"
	"slices"
	"testing"
)

func rowsOf(n int) []int {
	rows := make([]int, n)
	for i := range rows {
		rows[i] = i
	}
	return rows
}

func resampleOf(t *testing.T, l Layout, number uint64) (*Design, *Resample) {
	t.Helper()
	d, err := New(l)
	if err != nil {
		t.Fatal(err)
	}
	r := d.NewResample()
	s := NewKey(1, d.Digest).Stream(number)
	r.Draw(&s)
	return d, r
}

// Whole pouches: every drawn pouch brings all of its strips, and only those.
func TestUnitsStayWhole(t *testing.T) {
	pouch := []string{"a", "a", "a", "b", "b", "c", "c", "c", "c"}
	l := Layout{Source: "s", Rows: rowsOf(9), Unit: []string{"pouch"}, Levels: [][]string{pouch}}
	held := map[string]string{"a": "[0 1 2]", "b": "[3 4]", "c": "[5 6 7 8]"}
	for number := range uint64(200) {
		_, r := resampleOf(t, l, number+1)
		drawn := 0
		for i := 0; i < len(r.Rows); {
			j := i
			for j < len(r.Rows) && r.Unit[0][j] == r.Unit[0][i] {
				j++
			}
			name := pouch[r.Rows[i]]
			if got := fmt.Sprint(r.Rows[i:j]); got != held[name] {
				t.Fatalf("resample %d: pouch %s came with rows %s", number, name, got)
			}
			if int(r.Unit[0][i]) != drawn {
				t.Fatalf("resample %d: drawn unit is numbered %d, want %d", number, r.Unit[0][i], drawn)
			}
			drawn++
			i = j
		}
		if drawn != 3 {
			t.Fatalf("resample %d: %d pouches drawn, want 3", number, drawn)
		}
	}
}

// Strata keep their numbers of units; the drawn units of a stratum stand together, where Parts says.
func TestStrataKeepSizes(t *testing.T) {
	lot := []string{"x", "y", "x", "y", "y", "x", "y"}
	l := Layout{Source: "s", Rows: rowsOf(7), Unit: []string{"row"}, By: []string{"lot"}, Strata: [][]string{lot}}
	for number := range uint64(100) {
		d, r := resampleOf(t, l, number+1)
		for h, stratum := range d.Strata {
			for i := d.Parts()[h]; i < d.Parts()[h+1]; i++ {
				if lot[r.Rows[i]] != stratum.Name {
					t.Fatalf("row %d of stratum %s drawn for %s", r.Rows[i], lot[r.Rows[i]], stratum.Name)
				}
			}
		}
		if len(r.Rows) != 7 || d.Strata[0].Units != 3 || d.Strata[1].Units != 4 {
			t.Fatalf("%d rows from strata %v", len(r.Rows), d.Strata)
		}
	}
}

func TestUnitInTwoStrata(t *testing.T) {
	_, err := New(Layout{Rows: rowsOf(2), Unit: []string{"pouch"}, Levels: [][]string{{"a", "a"}},
		By: []string{"lot"}, Strata: [][]string{{"x", "y"}}})
	if !errors.Is(err, ErrUnitSplit) {
		t.Errorf("error %v, want one that wraps ErrUnitSplit", err)
	}
}

// Nested draws: inside each drawn laboratory its own days are drawn, as many as it has, and rows inside days likewise.
// Day 1 of two laboratories are two units.
func TestNested(t *testing.T) {
	lab := []string{"A", "A", "A", "A", "B", "B", "B"}
	day := []string{"1", "1", "2", "2", "1", "1", "1"}
	l := Layout{Source: "s", Rows: rowsOf(7), Unit: []string{"lab", "day", "row"}, Levels: [][]string{lab, day}}
	seen := map[string]bool{}
	for number := range uint64(500) {
		d, r := resampleOf(t, l, number+1)
		if d.Units != 2 {
			t.Fatalf("%d outermost units, want 2", d.Units)
		}
		for i, row := range r.Rows {
			for j, other := range r.Rows[:i] {
				if r.Unit[0][i] == r.Unit[0][j] && lab[row] != lab[other] {
					t.Fatal("one drawn laboratory holds rows of two")
				}
				if r.Unit[1][i] == r.Unit[1][j] && (lab[row] != lab[other] || day[row] != day[other]) {
					t.Fatal("one drawn day holds rows of two")
				}
				if r.Unit[2][i] == r.Unit[2][j] {
					t.Fatal("two drawn rows have one number")
				}
			}
		}
		labs := map[int32]int{}
		for i := range r.Rows {
			labs[r.Unit[0][i]]++
		}
		if len(labs) != 2 {
			t.Fatalf("%d laboratories drawn, want 2", len(labs))
		}
		for i, n := range labs {
			at := slices.Index(r.Unit[0], i)
			if want := map[string]int{"A": 4, "B": 3}[lab[r.Rows[at]]]; n != want {
				t.Fatalf("laboratory %s came with %d rows, want %d", lab[r.Rows[at]], n, want)
			}
		}
		sorted := slices.Clone(r.Rows)
		slices.Sort(sorted)
		seen[fmt.Sprint(sorted)] = true
	}
	if len(seen) < 50 {
		t.Errorf("only %d different resamples in 500", len(seen))
	}
}

// Groups of a comparison are drawn separately when no unit spans both, jointly when units do.
func TestComparedGroups(t *testing.T) {
	group := []int{0, 0, 0, 1, 1, 0, 1}
	l := Layout{Source: "s", Rows: rowsOf(7), Unit: []string{"row"}, Group: group, Compare: "arm"}
	d, r := resampleOf(t, l, 3)
	if d.Paired || len(d.Strata) != 2 || d.Strata[0].Units != 4 || d.Strata[1].Units != 3 {
		t.Errorf("separate groups: paired %v, strata %v", d.Paired, d.Strata)
	}
	for i, row := range r.Rows {
		if want := map[bool]int{true: 0, false: 1}[i < 4]; group[row] != want {
			t.Errorf("place %d has a row of group %d", i, group[row])
		}
	}

	item := []string{"p", "q", "r", "p", "q", "s", "r"}
	l.Unit, l.Levels = []string{"item"}, [][]string{item}
	d, r = resampleOf(t, l, 3)
	if !d.Paired || !d.Partly || len(d.Strata) != 1 || d.Units != 4 {
		t.Errorf("paired groups: paired %v partly %v strata %v units %d", d.Paired, d.Partly, d.Strata, d.Units)
	}
	_ = r

	// Outer units span both groups, inner ones do not: inner units are drawn within each group, so the number of
	// inner units of a group in a drawn outer unit does not change.
	lot := []string{"1", "1", "1", "1", "2", "2", "2", "2"}
	bag := []string{"a", "b", "c", "d", "a", "b", "c", "d"}
	group = []int{0, 0, 0, 1, 0, 0, 0, 1}
	l = Layout{Source: "s", Rows: rowsOf(8), Unit: []string{"lot", "bag"}, Levels: [][]string{lot, bag}, Group: group}
	for number := range uint64(50) {
		_, r = resampleOf(t, l, number+1)
		count := [2]int{}
		for _, row := range r.Rows {
			count[group[row]]++
		}
		if count != [2]int{6, 2} {
			t.Fatalf("groups of %v rows drawn, want 6 and 2", count)
		}
	}
}

// The whole sample is every row once.
func TestWhole(t *testing.T) {
	lab := []string{"A", "B", "A", "B"}
	d, err := New(Layout{Rows: rowsOf(4), Unit: []string{"lab", "row"}, Levels: [][]string{lab}})
	if err != nil {
		t.Fatal(err)
	}
	r := d.NewResample()
	r.Whole()
	if got := fmt.Sprint(r.Rows, r.Unit); got != "[0 2 1 3] [[0 0 1 1] [0 1 2 3]]" {
		t.Errorf("whole sample %s", got)
	}
}

// What decides the draw changes the digest; nothing else does.
func TestDigest(t *testing.T) {
	base := func() Layout {
		return Layout{Source: "s", Rows: rowsOf(4), Unit: []string{"u"}, Levels: [][]string{{"a", "b", "c", "c"}},
			By: []string{"lot"}, Strata: [][]string{{"x", "x", "y", "y"}}}
	}
	of := func(change func(*Layout)) [32]byte {
		l := base()
		change(&l)
		d, err := New(l)
		if err != nil {
			t.Fatal(err)
		}
		return d.Digest
	}
	seen := map[[32]byte]string{of(func(*Layout) {}): "unchanged"}
	for name, change := range map[string]func(*Layout){
		"source": func(l *Layout) { l.Source = "other" },
		"row":    func(l *Layout) { l.Rows[3] = 9 },
		"unit":   func(l *Layout) { l.Levels[0][1] = "a" },
		"strata": func(l *Layout) { l.By, l.Strata = nil, nil },
		"level":  func(l *Layout) { l.Unit = []string{"u", "row"} },
	} {
		digest := of(change)
		if other, dup := seen[digest]; dup {
			t.Errorf("%s has the digest of %s", name, other)
		}
		seen[digest] = name
	}
	if of(func(l *Layout) { l.Levels[0] = []string{"p", "q", "r", "r"} }) != of(func(*Layout) {}) {
		t.Error("renaming units without changing who belongs together changed the digest")
	}
}
