package report

import (
	"fmt"
	"math"
	"strings"
	"testing"
)

func numbersTable(rows int) table {
	t := table{columns: []column{{title: "Name"}, {title: "Value", align: decimal}, {title: "Note"}}, size: small.size}
	for i := range rows {
		value := []string{"1.25", "−10.5", "130", "none", "0.00041"}[i%5]
		name := fmt.Sprintf("row %d", i)
		t.rows = append(t.rows, []cell{cellText(small, name), cellText(small, value), cellText(small, "–")})
	}
	return t
}

func TestTableRepeatsItsHead(t *testing.T) {
	f := newFlow()
	table := numbersTable(200)
	f.add(table.atoms()...)
	f.end()
	if len(f.pages) < 3 {
		t.Fatalf("200 rows on %d pages", len(f.pages))
	}
	rows := 0
	for i := range f.pages {
		lines := f.pages[i].lines()
		if lines[0] != "Name | Value | Note" {
			t.Errorf("page %d begins with %q", i+1, lines[0])
		}
		if len(lines) < 3 {
			t.Errorf("page %d holds a single row", i+1)
		}
		rows += len(lines) - 1
	}
	if rows != 200 {
		t.Errorf("%d rows are shown", rows)
	}
}

// Units stand below units: the end of a whole number and the points of decimals have the same place.
func TestTableAlignsDecimalPoints(t *testing.T) {
	f := newFlow()
	table := numbersTable(5)
	f.add(table.atoms()...)
	f.end()
	at := math.NaN()
	found := 0
	for _, m := range f.pages[0].marks {
		whole, _, _ := strings.Cut(m.text, ".")
		if m.kind != markText || !isFigure(m.text) || m.text == "–" {
			continue
		}
		x := m.x + small.face.width(whole, small.size)
		if found++; found == 1 {
			at = x
		}
		if math.Abs(x-at) > 1e-9 {
			t.Errorf("%q has its point at %.3f, others at %.3f", m.text, x, at)
		}
	}
	if found != 4 {
		t.Errorf("%d numbers found", found)
	}
}

// Whatever the contents, the columns of a table fill no more than the measure.
func TestTableFitsTheMeasure(t *testing.T) {
	word := strings.Repeat("W", 80)
	for _, rows := range [][]cell{
		{cellText(small, word), cellText(small, word), cellText(small, word)},
		{cellText(small, strings.Repeat("several words ", 40)), cellText(small, "1.5"), cellText(small, word)},
		{{}, {}, {}},
	} {
		table := numbersTable(2)
		table.rows = append(table.rows, rows)
		widths := table.widths([]cell{cellText(small, word), cellText(small, "x"), cellText(small, "y z")})
		if sum := total(widths) + cellGap*2; sum > measure+1e-6 {
			t.Errorf("%d columns are %.3f wide, the measure is %.3f", len(widths), sum, measure)
		}
		for _, w := range widths {
			if w <= 0 {
				t.Errorf("a column is %.3f wide", w)
			}
		}
	}
}

func TestFlowKeepsAtomsTogether(t *testing.T) {
	f := newFlow()
	const full = bottomEdge - topEdge
	at := map[string]int{}
	piece := func(name string, height float64, keep bool) atom {
		return atom{height: height, keep: keep, draw: func(*page, float64) { at[name] = len(f.pages) }}
	}
	f.add(piece("first", full-20, false))
	f.add(piece("heading", 10, true))
	f.add(piece("figure", 15, false))
	f.add(piece("tall", full+50, false)) // taller than a page: placed all the same
	f.add(piece("waiting", 10, true))
	f.end()
	for name, want := range map[string]int{"first": 1, "heading": 2, "figure": 2, "tall": 3, "waiting": 4} {
		if at[name] != want {
			t.Errorf("%s stands on page %d, want %d", name, at[name], want)
		}
	}
}
