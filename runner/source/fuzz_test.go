package source

import (
	"bytes"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"unicode/utf8"

	"lotproof/spec"
)

// Any bytes give either mistakes, each at a place inside the file, or a table whose columns are as long as its rows,
// whose rows stand in ascending lines of the file, and in whose number columns every value is finite or missing.
func FuzzCSV(f *testing.F) {
	for _, seed := range []string{
		goodFile, "", "\ufeff" + goodFile, strings.ReplaceAll(goodFile, "\n", "\r\n"), "a;b\n1,2;3\n",
		"pouch,arm,strength,note\n\"a\nb\",fresh,\"1\",\"\"\"\"\n\n,,,\nP1,aged,<1,x\n",
		"strength\n\n1\n\"\"\n", "strength\n1e400\n",
		"pouch,arm,strength,note\nP1,aged,1,\"open\n", "pouch,arm,strength,note\nP1,aged,1,o\"pen\n\"a\"b,,,\n",
		"\xff\xfea\x00", "a\rb", "pouch,arm,strength,note\nP1 ,aged,1,\np1,aged,1,\n",
	} {
		f.Add([]byte(seed), false)
		f.Add([]byte(strings.ReplaceAll(seed, ",", "\t")), true)
	}
	f.Fuzz(func(t *testing.T, in []byte, tabs bool) {
		separator := ','
		if tabs {
			separator = '\t'
		}
		plan := pouches("peel.csv")
		if bytes.HasPrefix(bytes.TrimPrefix(in, byteOrderMark), []byte("strength\n")) { // a table of one column
			plan.Sources[0].Columns = plan.Sources[0].Columns[3:]
		}
		table := &Table{Source: plan.Sources[0]}
		b := &builder{plan: plan, table: table, bad: &mistakes{file: "peel.csv"}}
		separated(in, separator, b)
		if all := append(b.planBad, b.bad.all()...); len(all) > 0 {
			for _, e := range all {
				inside(t, in, e)
			}
			return
		}
		lines := bytes.Count(in, []byte("\n")) + 1
		if len(table.Rows) == 0 || len(table.Rows) >= lines {
			t.Errorf("%d rows in %d lines", len(table.Rows), lines)
		}
		last := 1
		for _, row := range table.Rows {
			if row.Line <= last || row.Line > lines {
				t.Fatalf("a row on line %d follows one on line %d of %d", row.Line, last, lines)
			}
			last = row.Line
		}
		for _, c := range table.Columns {
			checkColumn(t, &c, len(table.Rows))
		}
	})
}

func inside(t *testing.T, in []byte, e spec.Error) {
	t.Helper()
	if e.Problem == "" || !utf8.ValidString(e.Error()) || strings.ContainsAny(e.Error(), "\n\r\x00") {
		t.Errorf("message %q", e.Error())
	}
	if e.Line == 0 {
		return // the file as a whole
	}
	all := bytes.Split(bytes.TrimPrefix(in, byteOrderMark), []byte("\n"))
	if e.Line > len(all) {
		t.Fatalf("%v is not in a file of %d lines", e, len(all))
	}
	if width := utf8.RuneCount(all[e.Line-1]); e.Column < 1 || e.Column > width+1 {
		t.Fatalf("%v is not in a line of %d characters", e, width)
	}
}

func checkColumn(t *testing.T, c *Column, n int) {
	t.Helper()
	if len(c.Texts) != n || len(c.Missing) != n || c.Type == spec.TypeNumber && len(c.Numbers) != n {
		t.Fatalf("column %s holds %d texts, %d marks and %d numbers; rows are %d", c.Name, len(c.Texts), len(c.Missing),
			len(c.Numbers), n)
	}
	for i, v := range c.Numbers {
		if (v-v == 0) == c.Missing[i] {
			t.Errorf("column %s, row %d: %v, missing %v", c.Name, i, v, c.Missing[i])
		}
	}
}

// bigFile makes n rows of five columns.
func bigFile(n int) []byte {
	var b bytes.Buffer
	b.WriteString("pouch,arm,strength,lead,note\n")
	for i := range n {
		arm := "fresh"
		if i%3 == 0 {
			arm = "aged"
		}
		fmt.Fprintf(&b, "P%d,%s,%d.%04d,%de-3,\n", i/4, arm, i%7, i%10000, i)
	}
	return b.Bytes()
}

// bigPlan is a plan over bigFile with conditions of each kind.
func bigPlan() *spec.Plan {
	plan := pouches("peel.csv")
	s := &plan.Sources[0]
	s.Columns = append(s.Columns, spec.Column{Name: "lead", Type: spec.TypeNumber})
	s.Exclude = []spec.Exclusion{{Where: `note == "void" or strength > 6.9`}}
	s.Derive = []spec.Derived{{Name: "excess", Formula: "strength - 1.2"}}
	plan.Statistics = []spec.Statistic{{ID: "aged", Source: "peel", Where: `arm == "aged"`, Of: []string{"excess"}}}
	return plan
}

const bigRows = 1_000_000

func BenchmarkCSV(b *testing.B) {
	content, plan := bigFile(bigRows), bigPlan()
	b.SetBytes(int64(len(content)))
	b.ReportAllocs()
	for b.Loop() {
		table := &Table{Source: plan.Sources[0]}
		to := &builder{plan: plan, table: table, bad: &mistakes{file: "peel.csv"}}
		separated(content, ',', to)
		if len(to.bad.list) > 0 || len(table.Rows) != bigRows {
			b.Fatal(to.bad.all())
		}
	}
}

// With digest, derived column, exclusion and one ledger.
func BenchmarkLoad(b *testing.B) {
	dir := b.TempDir()
	must(b, os.WriteFile(filepath.Join(dir, "peel.csv"), bigFile(bigRows), 0o666))
	plan := bigPlan()
	b.ReportAllocs()
	for b.Loop() {
		_, err := Load(plan, dir)
		must(b, err)
	}
}
