package source

import (
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"lotproof/spec"
)

func must(tb testing.TB, err error) {
	tb.Helper()
	if err != nil {
		tb.Fatal(err)
	}
}

// pouches is a source with a column of each type; the data of the tests are invented.
func pouches(file string) *spec.Plan {
	return &spec.Plan{File: "plan.yaml", Sources: []spec.Source{{
		Name: "peel", File: file, Missing: []string{"NA", "n/a"},
		Columns: []spec.Column{
			{Name: "arm", Type: spec.TypeCategory, Levels: []string{"fresh", "aged"}, Decimals: -1},
			{Name: "note", Type: spec.TypeText, Decimals: -1},
			{Name: "pouch", Type: spec.TypeCategory, Decimals: -1},
			{Name: "strength", Type: spec.TypeNumber, Unit: "N/15mm", Decimals: 2},
		},
	}}}
}

// loadText writes content as the file of the first source and loads the plan.
func loadText(tb testing.TB, plan *spec.Plan, content string) (*Data, error) {
	tb.Helper()
	dir := tb.TempDir()
	must(tb, os.WriteFile(filepath.Join(dir, plan.Sources[0].File), []byte(content), 0o666))
	return Load(plan, dir)
}

// show writes a table cell by cell, one row a line.
func show(t *Table) string {
	var b strings.Builder
	for i, row := range t.Rows {
		fmt.Fprintf(&b, "%d:", row.Line)
		for _, c := range t.Columns {
			switch {
			case c.Missing[i]:
				fmt.Fprintf(&b, " %s=(%s)", c.Name, c.Texts[i])
			case c.Type == spec.TypeNumber:
				fmt.Fprintf(&b, " %s=%v", c.Name, c.Numbers[i])
			default:
				fmt.Fprintf(&b, " %s=%q", c.Name, c.Texts[i])
			}
		}
		b.WriteString("\n")
	}
	return b.String()
}

func TestReadSeparated(t *testing.T) {
	tests := []struct {
		name, file, content, want string
		ignored                   []string
	}{
		{"plain", "peel.csv", "pouch,arm,strength,note\nP1,fresh,1.30,\nP2,aged,1.20,void\n",
			"2: pouch=\"P1\" arm=\"fresh\" strength=1.3 note=()\n" +
				"3: pouch=\"P2\" arm=\"aged\" strength=1.2 note=\"void\"\n", nil},
		{"other order, undeclared columns, no line end at the end", "peel.csv",
			"lot,strength,arm,note,pouch,shift\nL1,1.30,fresh,,P1,2",
			"2: strength=1.3 arm=\"fresh\" note=() pouch=\"P1\"\n", []string{"lot", "shift"}},
		{"byte order mark, CR LF, blank lines at the end", "peel.csv",
			"\ufeffpouch,arm,strength,note\r\nP1,fresh,1.30,\r\n\r\n,,,\r\n  \r\n",
			"2: pouch=\"P1\" arm=\"fresh\" strength=1.3 note=()\n", nil},
		{"tabs", "peel.tsv", "pouch\tarm\tstrength\tnote\nP1\tfresh\t1.30\ta, b\n\tfresh\t\t\n",
			"2: pouch=\"P1\" arm=\"fresh\" strength=1.3 note=\"a, b\"\n3: pouch=() arm=\"fresh\" strength=() " +
				"note=()\n", nil},
		{"quoted cells over several lines", "peel.csv",
			"pouch,arm,strength,\"note\"\n\"P1\",fresh,\"1.30\",\"first\r\n\r\nthird \"\"line\"\"\"\nP2,aged,1.2,\n",
			"2: pouch=\"P1\" arm=\"fresh\" strength=1.3 note=\"first\\n\\nthird \\\"line\\\"\"\n" +
				"5: pouch=\"P2\" arm=\"aged\" strength=1.2 note=()\n", nil},
		{"blanks round cells and headings", "peel.csv",
			" pouch, arm ,strength , note\n P1,fresh ,\t1.30 ,\u00a0two words \n",
			"2: pouch=\"P1\" arm=\"fresh\" strength=1.3 note=\"two words\"\n", nil},
		{"missing marks", "peel.csv", "pouch,arm,strength,note\nP1,NA,n/a,NA\n,fresh, ,  \n",
			"2: pouch=\"P1\" arm=(NA) strength=(n/a) note=(NA)\n3: pouch=() arm=\"fresh\" strength=() note=()\n", nil},
		{"forms of numbers", "peel.csv", "pouch,arm,strength,note\n" +
			"a,aged,-0,\nb,aged,+1.50,\nc,aged,007,\nd,aged,1e-3,\ne,aged,2.5E+2,\nf,aged,-0.0e5,\n" +
			"g,aged,0.1000000000000000055511151231257827021181583404541015625,\nh,aged,4.9e-324,\n",
			"2: pouch=\"a\" arm=\"aged\" strength=0 note=()\n3: pouch=\"b\" arm=\"aged\" strength=1.5 note=()\n" +
				"4: pouch=\"c\" arm=\"aged\" strength=7 note=()\n5: pouch=\"d\" arm=\"aged\" strength=0.001 note=()\n" +
				"6: pouch=\"e\" arm=\"aged\" strength=250 note=()\n7: pouch=\"f\" arm=\"aged\" strength=0 note=()\n" +
				"8: pouch=\"g\" arm=\"aged\" strength=0.1 note=()\n9: pouch=\"h\" arm=\"aged\" strength=5e-324 " +
				"note=()\n", nil},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			data, err := loadText(t, pouches(tt.file), tt.content)
			must(t, err)
			table := data.Tables[0]
			if got := show(table); got != tt.want {
				t.Errorf("got\n%swant\n%s", got, tt.want)
			}
			if !slices.Equal(table.Ignored, tt.ignored) {
				t.Errorf("ignored %q, want %q", table.Ignored, tt.ignored)
			}
			for i, v := range table.Column("strength").Numbers {
				if v == 0 && math.Signbit(v) {
					t.Errorf("row %d holds −0", i)
				}
			}
		})
	}
}

// A table of one column has no other way to write a missing value than a blank line.
func TestReadOneColumn(t *testing.T) {
	plan := pouches("peel.csv")
	plan.Sources[0].Columns = plan.Sources[0].Columns[3:]
	data, err := loadText(t, plan, "strength\n1\n\n  \n2\n\"\"\n3\n\"\"\n\n\n")
	must(t, err)
	want := "2: strength=1\n3: strength=()\n4: strength=()\n5: strength=2\n6: strength=()\n7: strength=3\n8: " +
		"strength=()\n"
	if got := show(data.Tables[0]); got != want {
		t.Errorf("got\n%swant\n%s", got, want)
	}
}

func TestSeparatedMistakes(t *testing.T) {
	const head = "pouch,arm,strength,note\n"
	const utf8 = "save the file as CSV with the encoding UTF-8"
	tests := []struct {
		name, content string
		want          []string
	}{
		{"empty", "", []string{"peel.csv: the file is empty; write headings in the first line and one row a line"}},
		{"blank lines only", "\n\n  \n,,\n", []string{
			"peel.csv: the file is empty; write headings in the first line and one row a line"}},
		{"headings only", head, []string{
			"peel.csv: the file has headings and no data rows; write one row a line below the headings"}},
		{"UTF-16", "\xff\xfep\x00o\x00", []string{"peel.csv:1:1: the file is not UTF-8 but UTF-16 or UTF-32 text; " +
			"" + utf8}},
		{"UTF-16 without a mark", "p\x00o\x00", []string{"peel.csv:1:2: a zero byte stands in the text; " + utf8 +
			"; text of another encoding may be the reason"}},
		{"Latin-1", head + "P1,aged,1.3,m\xfcde\n", []string{"peel.csv:2:14: the byte FC is not UTF-8 text; " + utf8}},
		{"workbook", "PK\x03\x04\x14\x00", []string{"peel.csv:1:1: the file is not text but a workbook or another " +
			"archive; " +
			"if it is a workbook, give it the name ending .xlsx"}},
		{"old workbook", "\xd0\xcf\x11\xe0\xa1\xb1", []string{
			"peel.csv:1:1: the file is not text but an old or protected workbook; " + utf8}},
		{"lone CR", "pouch,arm,strength,note\rP1,aged,1.3,\r", []string{"peel.csv:1:24: a carriage return stands " +
			"without a line feed; save the file with the line ends of Windows (CR LF) or of Unix (LF)"}},
		{"semicolons", "pouch;arm;strength;note\nP1;aged;1,3;\n", []string{"peel.csv:1:1: the cells are separated by " +
			"semicolons; semicolons and decimal commas are not available in this version: save the file with commas " +
			"between cells and decimal points"}},
		{"tabs", "pouch\tarm\tstrength\tnote\nP1\taged\t1.3\t\n", []string{
			"peel.csv:1:1: the cells are separated by tabs; give the file the name ending .tsv"}},
		{"blank first line", "\n" + head + "P1,aged,1.3,\n", []string{
			"peel.csv:1:1: the file begins with a blank line; write the headings in the first line"}},
		{"headings", "pouch,arm,Strength,note,,arm\nP1,aged,1.3,,,\n", []string{
			"plan.yaml:1:1: peel.csv has no column \"strength\"; did you mean \"Strength\"? headings there: " +
				"\"pouch\", \"arm\", " +
				"\"Strength\", \"note\", \"arm\"",
			"peel.csv:1:25: column 5 has no heading; give each column a heading, or take the column out",
			"peel.csv:1:26: heading \"arm\" stands over columns 2 and 6; give each column its own heading"}},
		{"no declared column", "a,b\n1,2\n", []string{
			"plan.yaml:1:1: peel.csv has no column \"arm\"; headings there: \"a\", \"b\"",
			"plan.yaml:1:1: peel.csv has no column \"note\"; headings there: \"a\", \"b\"",
			"plan.yaml:1:1: peel.csv has no column \"pouch\"; headings there: \"a\", \"b\"",
			"plan.yaml:1:1: peel.csv has no column \"strength\"; headings there: \"a\", \"b\""}},
		{"width", head + "P1,aged,1,3,\nP2,aged,1.3\nP3,aged,1.3,\n", []string{
			"peel.csv:2:1: the row has 5 cells, the headings are 4; write decimals with a point, and a cell that " +
				"holds the " +
				"separator between quotation marks",
			"peel.csv:3:1: the row has 3 cells, the headings are 4; write every cell, also the empty ones"}},
		{"blank lines inside", head + "P1,aged,1.3,\n\n\n,,,\n \nP2,aged,x,\n", []string{
			"peel.csv:3:1: lines 3 to 4 are blank; take them out", "peel.csv:5:1: line 5 is blank; take it out",
			"peel.csv:6:1: line 6 is blank; take it out",
			"peel.csv:7:9: column strength: \"x\" is not a number; write digits with a decimal point, or list the " +
				"text under " +
				"missing of the source if it means no value"}},
		{"place after characters of several bytes and lines", head + "\"ä€\nü\",aged,\"1,3x\",\n", []string{
			"peel.csv:3:9: column strength: \"1,3x\" is not a number; write digits with a decimal point, or list " +
				"the text " +
				"under missing of the source if it means no value"}},
		{"place after a byte order mark", "\ufeffä,pouch,arm,strength,note,pouch\n", []string{
			"peel.csv:1:27: heading \"pouch\" stands over columns 2 and 6; give each column its own heading"}},
		{"quote inside", head + "P1,aged,1.3,5\" strip\n", []string{
			"peel.csv:2:14: a quotation mark stands inside a cell that does not begin with one; write the cell " +
				"between " +
				"quotation marks, without blanks before them, and double the mark inside it"}},
		{"quote not closed", head + "P1,aged,1.3,ok\nP2,aged,1.3,\"open\nP3,aged,1.3,ok\n", []string{
			"peel.csv:3:1: a cell of the row that starts here begins with a quotation mark that is never closed; " +
				"close the " +
				"cell with a quotation mark, and double the marks inside it"}},
		{"text after the quote", head + "P1,aged,1.3,\"a\"b\n", []string{
			"peel.csv:2:15: text follows the quotation mark that closes the cell; end the cell at the mark, or " +
				"double the " +
				"mark if it belongs to the text"}},
		{"levels of the plan", head + "P1,agd,1.3,\nP1,Fresh,1.3,\nP1,old,1.3,\nP2,agd,1.3,\n", []string{
			"peel.csv:2:4: column arm: \"agd\" is not one of the levels in the plan; did you mean \"aged\"? levels: " +
				"\"fresh\", \"aged\"",
			"peel.csv:3:4: column arm: \"Fresh\" is not one of the levels in the plan; did you mean \"fresh\"? " +
				"levels: " +
				"\"fresh\", \"aged\"",
			"peel.csv:4:4: column arm: \"old\" is not one of the levels in the plan; levels: \"fresh\", \"aged\"",
			"peel.csv:5:4: column arm: \"agd\" is not one of the levels in the plan; did you mean \"aged\"? levels: " +
				"\"fresh\", \"aged\""}},
		{"spellings of a level", head + "P 1,aged,1.3,\nP 1 ,aged,1.3,\np 1,aged,1.3,\nP  " +
			"1,aged,1.3,\nP\u00a01,aged,1.3,\n" +
			"cafe\u0301,aged,1,\ncaf\u00e9,aged,1,\np 1,aged,1,\nP 1\u200b,aged,1,\n", []string{
			"peel.csv:3:1: column pouch: levels \"P 1\" (line 2) and \"P 1 \" differ only in the blanks round " +
				"them; write " +
				"them alike",
			"peel.csv:4:1: column pouch: levels \"P 1\" (line 2) and \"p 1\" differ only in letter case; write " +
				"them alike",
			"peel.csv:5:1: column pouch: levels \"P 1\" (line 2) and \"P  1\" differ only in the number of blanks; " +
				"write " +
				"them alike",
			"peel.csv:6:1: column pouch: levels \"P 1\" (line 2) and \"P\\u00a01\" differ only in the number of " +
				"blanks; write " +
				"them alike",
			"peel.csv:8:1: column pouch: levels \"cafe\u0301\" (line 7) and \"café\" differ only in letter case, " +
				"blanks, " +
				"invisible characters or the coding of a character; write them alike",
			"peel.csv:10:1: column pouch: levels \"P 1\" (line 2) and \"P 1\\u200b\" differ only in letter case, " +
				"blanks, " +
				"invisible characters or the coding of a character; write them alike"}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			data, err := loadText(t, pouches("peel.csv"), tt.content)
			if data != nil {
				t.Error("there are data beside the mistakes")
			}
			compare(t, err, tt.want)
		})
	}
}

// compare checks the whole text of every mistake.
func compare(t *testing.T, err error, want []string) {
	t.Helper()
	var all spec.Errors
	if !errors.As(err, &all) {
		t.Fatalf("error %v, want mistakes", err)
	}
	if got := all.Error(); got != strings.Join(want, "\n") {
		t.Errorf("got\n%s\nwant\n%s", got, strings.Join(want, "\n"))
	}
}

func TestSeparatorMistakesInTabFile(t *testing.T) {
	_, err := loadText(t, pouches("peel.tsv"), "pouch,arm,strength,note\nP1,aged,1.3,\n")
	compare(t, err, []string{"peel.tsv:1:1: the cells are separated by commas; give the file the name ending .csv"})
}

func TestNumberMistakes(t *testing.T) {
	const generic = "; write digits with a decimal point, or list the text under missing of the source if it means " +
		"no " +
		"value"
	tests := []struct{ cell, want string }{
		{"1,3", `"1,3" has a comma; write decimals with a point and thousands without a separator`},
		{"1,234.5", `"1,234.5" has a comma; write decimals with a point and thousands without a separator`},
		{"1.234,5", `"1.234,5" has a comma; write decimals with a point and thousands without a separator`},
		{"1,3x", `"1,3x" is not a number` + generic},
		{"1_000", `"1_000" has a separator between its digits; write 1000`},
		{"1 000.5", `"1 000.5" has a separator between its digits; write 1000.5`},
		{"0x1F", `"0x1F" is not a number` + generic},
		{"0x1p-2", `"0x1p-2" is not a number` + generic},
		{"Inf", `"Inf" is not a number; if it means that there is no value, write missing: ["Inf"] in the source`},
		{"NaN", `"NaN" is not a number; if it means that there is no value, write missing: ["NaN"] in the source`},
		{"-", `"-" is not a number; if it means that there is no value, write missing: ["-"] in the source`},
		{"\u22121.3", "\"\u22121.3\" has a minus sign that is not the one of the keyboard; write -1.3"},
		{"<0.5", `"<0.5" is a value below a reporting limit; such values are not available in this version`},
		{">100", `">100" is a value above a limit; such values are not available in this version`},
		{"12 %", `"12 %" is a percentage; write 12 and give the column the unit %`},
		{".5", `".5" has no digit before the point; write 0.5`},
		{"-.5", `"-.5" has no digit before the point; write -0.5`},
		{"5.", `"5." has no digit after the point; write 5.0`},
		{"1e400", `"1e400" is too large for a number; use a larger unit`},
		{"-1e400", `"-1e400" is too large for a number; use a larger unit`},
		{"1e-400", `"1e-400" is too small for a number and would be read as 0; use a smaller unit`},
		{"1e", `"1e" is not a number` + generic},
		{"e5", `"e5" is not a number` + generic},
		{"--1", `"--1" is not a number` + generic},
		{"1.2.3", `"1.2.3" is not a number` + generic},
		{"\uff11", "\"\uff11\" is not a number" + generic},
		{strings.Repeat("x", 50), `"` + strings.Repeat("x", 40) + `"… is not a number` + generic},
	}
	for _, tt := range tests {
		_, problem, fix := number(tt.cell)
		if got := problem + "; " + fix; got != tt.want {
			t.Errorf("number(%q): %s, want %s", tt.cell, got, tt.want)
		}
	}
}

func TestManyMistakes(t *testing.T) {
	for _, tt := range []struct {
		rows int
		last string
	}{
		{50, "peel.csv:51:9: column strength: \"x\" is not a number; write digits with a decimal point, or list " +
			"the text " +
			"under missing of the source if it means no value"},
		{51, "peel.csv: 1 more mistake is not listed; correct those above and check again"},
		{1000, "peel.csv: 950 more mistakes are not listed; correct those above and check again"},
	} {
		_, err := loadText(t, pouches("peel.csv"), "pouch,arm,strength,note\n"+strings.Repeat("P1,aged,x,\n", tt.rows))
		var all spec.Errors
		if !errors.As(err, &all) {
			t.Fatal(err)
		}
		if got := all[len(all)-1].Error(); got != tt.last {
			t.Errorf("%d rows: last mistake\n%s\nwant\n%s", tt.rows, got, tt.last)
		}
		if want := min(tt.rows, 51); len(all) != want {
			t.Errorf("%d rows: %d mistakes, want %d", tt.rows, len(all), want)
		}
	}
}

// The bounds end reading with a message.
func TestMostRows(t *testing.T) {
	for _, content := range []string{"strength\n1\n2\n3\n4\n", "strength\n1\n2\n\n\n3\n"} {
		plan := pouches("peel.csv")
		plan.Sources[0].Columns = plan.Sources[0].Columns[3:]
		b := &builder{plan: plan, table: &Table{Source: plan.Sources[0]}, bad: &mistakes{file: "peel.csv"}, most: 3}
		separated([]byte(content), ',', b)
		compare(t, b.bad.all(), []string{"peel.csv: the file has more than 3 rows; divide the study"})
	}
}

// Long lists are cut in messages.
func TestManyNames(t *testing.T) {
	var headings []string
	for i := range 25 {
		headings = append(headings, fmt.Sprintf("c%d", i+1))
	}
	plan := pouches("peel.csv")
	plan.Sources[0].Columns = []spec.Column{{Name: "c1", Type: spec.TypeText}, {Name: "x", Type: spec.TypeNumber}}
	_, err := loadText(t, plan, strings.Join(headings, ",")+"\n"+strings.Repeat(",", 23)+"1,\n")
	compare(t, err, []string{`plan.yaml:1:1: peel.csv has no column "x"; headings there: "c1", "c2", "c3", "c4", "c5", ` +
		`"c6", "c7", "c8", "c9", "c10", "c11", "c12", "c13", "c14", "c15", "c16", "c17", "c18", "c19", "c20", …`})
}
