package source

import (
	"archive/zip"
	"bytes"
	"fmt"
	"hash/crc32"
	"io"
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/xuri/excelize/v2"

	"lotproof/spec"
)

// book makes a workbook of one sheet named Data, with the headings of pouches in its first row.
func book(tb testing.TB, fill func(f *excelize.File)) []byte {
	tb.Helper()
	f := excelize.NewFile()
	defer f.Close()
	must(tb, f.SetSheetName("Sheet1", "Data"))
	for i, heading := range []string{"pouch", "arm", "strength", "note"} {
		set(tb, f, fmt.Sprintf("%c1", 'A'+i), heading)
	}
	fill(f)
	var b bytes.Buffer
	_, err := f.WriteTo(&b)
	must(tb, err)
	return b.Bytes()
}

func set(tb testing.TB, f *excelize.File, cell string, value any) {
	tb.Helper()
	if number, is := value.(float64); is { // the ordinary setter cuts to 15 digits
		must(tb, f.SetCellDefault("Data", cell, strconv.FormatFloat(number, 'g', -1, 64)))
		return
	}
	must(tb, f.SetCellValue("Data", cell, value))
}

// rewrite replaces texts in the part of the sheet.
func rewrite(tb testing.TB, content []byte, pairs ...string) []byte {
	tb.Helper()
	return rewriteParts(tb, content, func(name string, text []byte) []byte {
		if name != "xl/worksheets/sheet1.xml" {
			return text
		}
		for i := 0; i < len(pairs); i += 2 {
			if !strings.Contains(string(text), pairs[i]) {
				tb.Fatalf("%q does not stand in %s", pairs[i], text)
			}
		}
		return []byte(strings.NewReplacer(pairs...).Replace(string(text)))
	})
}

// rewriteParts changes the parts of a workbook.
func rewriteParts(tb testing.TB, content []byte, change func(name string, text []byte) []byte) []byte {
	tb.Helper()
	in, err := zip.NewReader(bytes.NewReader(content), int64(len(content)))
	must(tb, err)
	var b bytes.Buffer
	out := zip.NewWriter(&b)
	for _, part := range in.File {
		r, err := part.Open()
		must(tb, err)
		text, err := io.ReadAll(r)
		must(tb, err)
		w, err := out.Create(part.Name)
		must(tb, err)
		_, err = w.Write(change(part.Name, text))
		must(tb, err)
	}
	must(tb, out.Close())
	return b.Bytes()
}

func loadBook(tb testing.TB, plan *spec.Plan, content []byte) (*Data, error) {
	tb.Helper()
	return loadText(tb, plan, string(content))
}

func TestReadWorkbook(t *testing.T) {
	content := book(t, func(f *excelize.File) {
		must(t, f.SetCellRichText("Data", "D2", []excelize.RichTextRun{{Text: "two "}, {Text: "runs"}}))
		row := []any{"P1", "fresh", 1.3}
		for i, v := range row {
			set(t, f, fmt.Sprintf("%c2", 'A'+i), v)
		}
		row = []any{1.1, "aged", " 1.25 ", "NA"} // a number as category, a number stored as text
		for i, v := range row {
			set(t, f, fmt.Sprintf("%c3", 'A'+i), v)
		}
		row = []any{2041007.0, "aged", 0.30000000000000004, 45000.0}
		for i, v := range row {
			set(t, f, fmt.Sprintf("%c4", 'A'+i), v)
		}
		set(t, f, "A5", "P5")
		must(t, f.SetRowVisible("Data", 4, false))
		must(t, f.SetColVisible("Data", "C", false))
		percent, err := f.NewStyle(&excelize.Style{NumFmt: 9})
		must(t, err)
		must(t, f.SetCellStyle("Data", "C4", "C4", percent))
		must(t, f.SetCellStyle("Data", "A6", "D9", percent)) // empty cells with a format are no rows
	})
	data, err := loadBook(t, pouches("peel.xlsx"), content)
	must(t, err)
	want := `2: pouch="P1" arm="fresh" strength=1.3 note="two runs"
3: pouch="1.1" arm="aged" strength=1.25 note=(NA)
4: pouch="2041007" arm="aged" strength=0.30000000000000004 note="45000"
5: pouch="P5" arm=() strength=() note=()
`
	if got := show(data.Tables[0]); got != want {
		t.Errorf("got\n%swant\n%s", got, want)
	}
}

// Every finite number comes back to the last bit.
func TestWorkbookDigits(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	values := []float64{math.MaxFloat64, math.SmallestNonzeroFloat64, 1e15, 1e-5, 123456.7, -1e21, 0}
	for len(values) < 500 {
		if v := math.Float64frombits(random.Uint64()); !math.IsNaN(v) && !math.IsInf(v, 0) {
			values = append(values, v)
		}
	}
	content := book(t, func(f *excelize.File) {
		for i, v := range values {
			set(t, f, fmt.Sprintf("A%d", i+2), "P")
			set(t, f, fmt.Sprintf("C%d", i+2), v)
		}
	})
	data, err := loadBook(t, pouches("peel.xlsx"), content)
	must(t, err)
	got := data.Tables[0].Column("strength").Numbers
	if len(got) != len(values) {
		t.Fatalf("%d rows, want %d", len(got), len(values))
	}
	for i, v := range values {
		if math.Float64bits(got[i]) != math.Float64bits(v) {
			t.Errorf("row %d: %v, want %v", i, got[i], v)
		}
	}
}

func TestWorkbookOneColumn(t *testing.T) {
	plan := pouches("peel.xlsx")
	plan.Sources[0].Columns = plan.Sources[0].Columns[3:]
	content := book(t, func(f *excelize.File) {
		set(t, f, "A1", "strength")
		for _, cell := range []string{"B1", "C1", "D1"} {
			set(t, f, cell, nil)
		}
		set(t, f, "A2", 1.5)
		set(t, f, "A5", 2.5)
	})
	data, err := loadBook(t, plan, content)
	must(t, err)
	want := "2: strength=1.5\n3: strength=()\n4: strength=()\n5: strength=2.5\n"
	if got := show(data.Tables[0]); got != want {
		t.Errorf("got\n%swant\n%s", got, want)
	}
}

func TestWorkbookMistakes(t *testing.T) {
	const place = "peel.xlsx: sheet Data"
	const dates = "; dates are not available in this version: write it as text, or as a number of days; a " +
		"spreadsheet " +
		"program also makes dates of entries such as 3.1"
	const damage = "; open it in a spreadsheet program and save it again as .xlsx"
	row := func(f *excelize.File, n int, values ...any) {
		for i, v := range values {
			set(t, f, fmt.Sprintf("%c%d", 'A'+i, n), v)
		}
	}
	tests := []struct {
		name  string
		fill  func(f *excelize.File)
		patch []string
		want  []string
	}{
		{"numbers and levels", func(f *excelize.File) {
			row(f, 2, "P1", "agd", "1,3")
			row(f, 3, "p1", "aged", 1.3)
		}, nil, []string{
			place + ", cell B2: column arm: \"agd\" is not one of the levels in the plan; did you mean \"aged\"? " +
				"levels: " +
				"\"fresh\", \"aged\"",
			place + ", cell C2: column strength: \"1,3\" has a comma; write decimals with a point and thousands " +
				"without a " +
				"separator",
			place + ", cell A3: column pouch: levels \"P1\" (row 2) and \"p1\" differ only in letter case; write " +
				"them alike",
		}},
		{"error, TRUE, formula, dates", func(f *excelize.File) {
			row(f, 2, "P1", "aged", 77.0, "ok")
			row(f, 3, true, "aged", 1.3, "ok")
			row(f, 4, "P3", "aged", nil, "ok")
			must(t, f.SetCellFormula("Data", "C4", "1+0.3"))
			row(f, 5, "P3", "aged", time.Date(2041, 1, 3, 0, 0, 0, 0, time.UTC), "ok")
			row(f, 6, "P3", "aged", 3.1, 45000.0)
			code := `d. mmm "of" yyyy`
			style, err := f.NewStyle(&excelize.Style{CustomNumFmt: &code})
			must(t, err)
			must(t, f.SetCellStyle("Data", "D6", "D6", style))
		}, []string{`<c r="C2"><v>77</v></c>`, `<c r="C2" t="e"><f>1/0</f><v>#DIV/0!</v></c>`}, []string{
			place + ", cell C2: column strength: the cell holds the error \"#DIV/0!\"; mend the formula, or clear " +
				"the cell; " +
				"if the error means that there is no value, list it under missing of the source",
			place + ", cell A3: column pouch: the cell holds TRUE or FALSE; write a number or a text",
			place + ", cell C4: column strength: the formula has no stored value; open the workbook in a spreadsheet " +
				"program and save it",
			place + ", cell C5: column strength: the cell holds a date" + dates,
			place + ", cell D6: column note: the cell holds a date" + dates,
		}},
		{"merged cells", func(f *excelize.File) {
			row(f, 2, "P1", "aged", 1.3, "ok")
			row(f, 3, "", "aged", 1.3, "ok")
			must(t, f.MergeCell("Data", "A2", "A3"))
			must(t, f.MergeCell("Data", "A7", "A8")) // below the data
			must(t, f.MergeCell("Data", "F1", "F2")) // beside them
		}, nil, []string{
			place + ", cells A2:A3: the cells are merged; undo the merging and write each value into its own cell"}},
		{"blank rows, cells without a heading", func(f *excelize.File) {
			row(f, 4, "P1", "aged", 1.3, "ok", "stray")
			row(f, 6, "P2", "aged", 1.3, "ok")
		}, nil, []string{
			place + ": rows 2 to 3 are blank; take them out",
			place + ", cell E4: the cell has no heading above it; write one, or take the cell out",
			place + ": row 5 is blank; take it out",
		}},
		{"headings", func(f *excelize.File) {
			row(f, 1, "pouch", "", "strength", "pouch", "arm")
		}, nil, []string{
			"plan.yaml:1:1: peel.xlsx has no column \"note\"; headings there: \"pouch\", \"strength\", \"pouch\", " +
				"\"arm\"",
			place + ", cell B1: column 2 has no heading; give each column a heading, or take the column out",
			place + ", cell D1: heading \"pouch\" stands over columns 1 and 4; give each column its own heading",
		}},
		{"headings only", func(*excelize.File) {}, nil, []string{
			place + ": the sheet has headings and no data rows; write one row of data a row below the headings"}},
		{"no headings", func(f *excelize.File) { row(f, 1, "", "", "", ""); row(f, 2, "P1") }, nil, []string{
			place + ": the first row is blank; write the headings in row 1"}},
		{"empty sheet", func(f *excelize.File) { must(t, f.RemoveRow("Data", 1)) }, nil, []string{
			place + ": the sheet is empty; write headings in the first row and one row of data a row"}},
		{"several sheets", func(f *excelize.File) {
			_, err := f.NewSheet("Notes")
			must(t, err)
		}, nil, []string{"plan.yaml:1:1: peel.xlsx has 2 sheets; name one with sheet: \"Data\", \"Notes\""}},
		{"text that is not in the list of texts", func(f *excelize.File) { row(f, 2, "P1", "aged", 1.3, "ok") },
			[]string{`<c r="A2" t="s"><v>4</v></c>`, `<c r="A2" t="s"><v>400</v></c>`},
			[]string{place + ": the sheet is damaged" + damage}},
		{"sheet cut short", func(f *excelize.File) { row(f, 2, "P1", "aged", 1.3, "ok") },
			[]string{`</row></sheetData>`, `</row><row r="3"><c r="A3"`}, []string{place + ": the sheet is damaged" + damage}},
		{"rows out of order", func(f *excelize.File) { row(f, 3, "P1", "aged", 1.3, "ok"); row(f, 4, "P1") },
			[]string{`<row r="4"`, `<row r="2"`, `r="A4"`, `r="A2"`}, []string{place + ": the sheet is damaged" + damage}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			content := book(t, tt.fill)
			if tt.patch != nil {
				content = rewrite(t, content, tt.patch...)
			}
			_, err := loadBook(t, pouches("peel.xlsx"), content)
			compare(t, err, tt.want)
		})
	}
}

func TestWorkbookSheetByName(t *testing.T) {
	content := book(t, func(f *excelize.File) {
		set(t, f, "A2", "P1")
		_, err := f.NewSheet("Notes")
		must(t, err)
	})
	plan := pouches("peel.xlsx")
	plan.Sources[0].Sheet = "Data"
	data, err := loadBook(t, plan, content)
	must(t, err)
	if got, want := show(data.Tables[0]), "2: pouch=\"P1\" arm=() strength=() note=()\n"; got != want {
		t.Errorf("got %s, want %s", got, want)
	}
	plan.Sources[0].Sheet = "data"
	_, err = loadBook(t, plan, content)
	compare(t, err, []string{
		"plan.yaml:1:1: peel.xlsx has no sheet \"data\"; did you mean \"Data\"? sheets there: \"Data\", \"Notes\""})
}

// An error value that the plan lists means that there is no value.
func TestWorkbookErrorAsMissing(t *testing.T) {
	plan := pouches("peel.xlsx")
	plan.Sources[0].Missing = []string{"#N/A"}
	content := rewrite(t, book(t, func(f *excelize.File) { set(t, f, "A2", "P1"); set(t, f, "C2", 77.0) }),
		`<c r="C2"><v>77</v></c>`, `<c r="C2" t="e"><v>#N/A</v></c>`)
	data, err := loadBook(t, plan, content)
	must(t, err)
	if got, want := show(data.Tables[0]), "2: pouch=\"P1\" arm=() strength=(#N/A) note=()\n"; got != want {
		t.Errorf("got %s, want %s", got, want)
	}
}

// The library accepts a part whose check sum is wrong, and a part longer than the archive claims.
func TestArchiveMistakes(t *testing.T) {
	const damage = "peel.xlsx: the workbook is damaged; open it in a spreadsheet program and save it again as .xlsx"
	good := book(t, func(f *excelize.File) { set(t, f, "C2", 12345.0) })
	raw := func(write func(z *zip.Writer)) []byte {
		var b bytes.Buffer
		z := zip.NewWriter(&b)
		write(z)
		must(t, z.Close())
		return b.Bytes()
	}
	part := func(z *zip.Writer, name string, text string, claim uint64, sum uint32) {
		w, err := z.CreateRaw(&zip.FileHeader{Name: name, Method: zip.Store, CRC32: sum, UncompressedSize64: claim,
			CompressedSize64: uint64(len(text))})
		must(t, err)
		_, err = w.Write([]byte(text))
		must(t, err)
	}
	tests := []struct {
		name    string
		content []byte
		want    string
	}{
		{"empty", nil, "peel.xlsx: the file is not a workbook; save it in a spreadsheet program as .xlsx"},
		{"text", []byte("pouch,arm\n"), "peel.xlsx: the file is not a workbook; save it in a spreadsheet program " +
			"as .xlsx"},
		{"cut short", good[:len(good)/2], "peel.xlsx: the file is not a workbook; save it in a spreadsheet program " +
			"as .xlsx"},
		{"old format", []byte("\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"), "peel.xlsx: the workbook is protected by a " +
			"password or " +
			"has the old format .xls; save it as .xlsx without a password"},
		{"another archive", raw(func(z *zip.Writer) { part(z, "a.txt", "a", 1, crc32.ChecksumIEEE([]byte("a"))) }), damage},
		{"wrong sum", raw(func(z *zip.Writer) { part(z, "a.txt", "92345", 5, crc32.ChecksumIEEE([]byte("12345"))) }), damage},
		{"shorter than claimed", raw(func(z *zip.Writer) { part(z, "a.txt", "abc", 5, crc32.ChecksumIEEE([]byte("abc"))) }),
			damage},
		{"longer than claimed", raw(func(z *zip.Writer) { part(z, "a.txt", "abc", 2, crc32.ChecksumIEEE([]byte("ab"))) }),
			damage},
		{"claims too much", raw(func(z *zip.Writer) { part(z, "a.txt", "abc", 2<<30, 0) }),
			"peel.xlsx: the workbook unpacks to more than 512 MiB; save the sheet alone"},
		{"a part twice", raw(func(z *zip.Writer) {
			part(z, "xl/a.xml", "a", 1, crc32.ChecksumIEEE([]byte("a")))
			part(z, `XL\a.xml`, "a", 1, crc32.ChecksumIEEE([]byte("a")))
		}), "peel.xlsx: the workbook holds the part \"XL\\\\a.xml\" twice; open it in a spreadsheet program and " +
			"save it " +
			"again as .xlsx"},
		{"many parts", raw(func(z *zip.Writer) {
			for i := range mostParts + 1 {
				part(z, fmt.Sprint(i), "", 0, 0)
			}
		}), "peel.xlsx: the workbook has more than 4096 parts; save the sheet alone"},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			_, err := loadBook(t, pouches("peel.xlsx"), tt.content)
			compare(t, err, []string{tt.want})
		})
	}
}

// Format codes by the grammar of ECMA-376 part 1, 18.8.31, which dateFormat reads in part.
func TestDateFormat(t *testing.T) {
	for code, want := range map[string]bool{
		"General": false, "0.00": false, "#,##0": false, "0.00E+00": false, "0%": false, `0.0" mg/day"`: false,
		`0\d`: false, "_d0": false, "[Red]0.0": false, "[$kr-414]0": false, `[<0]"y"0;0`: false, "@": false,
		"yyyy-mm-dd": true, "[h]:mm": true, "[ss].0": true, "[$-409]d mmm": true, "hh:mm AM/PM": true,
		`0"`: false, "[d": false,
	} {
		if got := dateFormat(code); got != want {
			t.Errorf("dateFormat(%q) = %v", code, got)
		}
	}
}

// Any damage to the bytes of a workbook, or to the text of its parts, ends in a message or in a table, never in a panic.
func TestWorkbookDamage(t *testing.T) {
	good := book(t, func(f *excelize.File) {
		for i := range 5 {
			set(t, f, fmt.Sprintf("A%d", i+2), "P1")
			set(t, f, fmt.Sprintf("C%d", i+2), 1.25)
		}
		must(t, f.MergeCell("Data", "F1", "F2"))
	})
	random := rand.New(rand.NewPCG(3, 4))
	damage := func(b []byte) []byte {
		b = bytes.Clone(b)
		for range 1 + random.IntN(4) {
			switch at := random.IntN(len(b)); random.IntN(3) {
			case 0:
				b[at] ^= byte(1 + random.IntN(255))
			case 1:
				b[at] = "0123456789<>/\"= "[random.IntN(16)]
			case 2:
				b = append(b[:at], b[min(at+random.IntN(20), len(b)):]...)
			}
			if len(b) == 0 {
				break
			}
		}
		return b
	}
	read := 0
	for i := range 500 {
		bad := damage(good)
		if i > 50 {
			bad = rewriteParts(t, good, func(name string, text []byte) []byte {
				if random.IntN(4) == 0 || name == "xl/worksheets/sheet1.xml" {
					return damage(text)
				}
				return text
			})
		}
		table := &Table{Source: pouches("peel.xlsx").Sources[0]}
		b := &builder{plan: pouches("peel.xlsx"), table: table, bad: &mistakes{file: "peel.xlsx"}}
		workbook(bad, b)
		if len(b.planBad)+len(b.bad.list) == 0 {
			read++
			for _, c := range table.Columns {
				checkColumn(t, &c, len(table.Rows))
			}
		}
	}
	if read == 0 || read > 300 {
		t.Errorf("%d of 500 damaged workbooks were read", read) // the test should reach past every check
	}
}
