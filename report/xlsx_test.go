package report

import (
	"archive/zip"
	"bytes"
	"errors"
	"fmt"
	"io"
	"math"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/go-pdf/fpdf"
	"github.com/xuri/excelize/v2"

	"lotproof/runner/record"
	"lotproof/runner/source"
	"lotproof/spec"
)

func workbook(t *testing.T, rec *record.Record, data *source.Data) []byte {
	t.Helper()
	var b bytes.Buffer
	must(t, Workbook(&b, rec, data))
	return b.Bytes()
}

func openWorkbook(t *testing.T, content []byte) *excelize.File {
	t.Helper()
	f, err := excelize.OpenReader(bytes.NewReader(content), excelize.Options{RawCellValue: true})
	must(t, err)
	t.Cleanup(func() { _ = f.Close() })
	return f
}

// workbookParts returns the parts of a workbook by name.
func workbookParts(t *testing.T, content []byte) map[string]string {
	t.Helper()
	archive, err := zip.NewReader(bytes.NewReader(content), int64(len(content)))
	must(t, err)
	out := map[string]string{}
	for _, f := range archive.File {
		r, err := f.Open()
		must(t, err)
		body, err := io.ReadAll(r)
		must(t, err)
		out[f.Name] = string(body)
	}
	return out
}

// The golden file has one cell a line: sheet, row and column, what is stored, and the number format.
func TestWorkbookText(t *testing.T) {
	rec, data := fixture()
	f := openWorkbook(t, workbook(t, rec, data))
	var b strings.Builder
	for _, name := range f.GetSheetList() {
		rows, err := f.GetRows(name)
		must(t, err)
		if name == "Figure points" { // TestFigurePoints has them
			rows = rows[:5]
		}
		for r, row := range rows {
			for c, value := range row {
				if value == "" {
					continue
				}
				at, err := excelize.CoordinatesToCellName(c+1, r+1)
				must(t, err)
				fmt.Fprintf(&b, "%s %d,%d %s", name, r+1, c+1, strings.ReplaceAll(value, "\n", `\n`))
				id, err := f.GetCellStyle(name, at)
				must(t, err)
				style, err := f.GetStyle(id)
				must(t, err)
				if style.CustomNumFmt != nil {
					fmt.Fprintf(&b, "  [%s]", *style.CustomNumFmt)
				}
				b.WriteString("\n")
			}
		}
	}
	golden(t, "workbook.txt", []byte(b.String()))
}

func TestWorkbookRepeats(t *testing.T) {
	rec, data := fixture()
	first := workbook(t, rec, data)
	for range 8 { // the library ranges over maps, which go wrong only now and then
		rec, data := fixture()
		if second := workbook(t, rec, data); !bytes.Equal(first, second) {
			a, b := workbookParts(t, first), workbookParts(t, second)
			for name := range a {
				if a[name] != b[name] {
					t.Errorf("part %s differs", name)
				}
			}
			t.Fatal("two workbooks of one record differ")
		}
	}
}

// Stored numbers read back to the same float64. The values include such as need 17 digits; that every float64 survives
// 17 significant digits is Theorem 15 of Goldberg, "What every computer scientist should know about floating-point
// arithmetic", ACM Computing Surveys 23 (1991) 5-48.
func TestWorkbookKeepsAllDigits(t *testing.T) {
	nasty := []float64{0.1 + 0.2, 1.0 / 3, 10.123456789012345, 5e-324, math.MaxFloat64, -math.Pi, 1e21, 1e-7,
		123456789.12345678, math.Nextafter(1, 2), 0, -1e-300, 9007199254740993}
	rec, data := fixture()
	column := data.Tables[0].Column("excess")
	copy(column.Numbers, nasty)
	s := &rec.Results.Statistics[0]
	for _, v := range nasty {
		evidence := []record.Value{{Name: "v", Value: &v}}
		s.Advisories = append(s.Advisories, record.Advisory{Severity: "note", Evidence: evidence})
	}
	s.Estimate, s.StandardError, s.Intervals[0].Lower = &nasty[0], &nasty[1], &nasty[2]
	f := openWorkbook(t, workbook(t, rec, data))
	read := func(sheet, cell string, want float64) {
		t.Helper()
		text, err := f.GetCellValue(sheet, cell)
		must(t, err)
		got, err := strconv.ParseFloat(text, 64)
		must(t, err)
		if got != want {
			t.Errorf("%s!%s holds %s, want %.17g", sheet, cell, text, want)
		}
		kind, err := f.GetCellType(sheet, cell)
		must(t, err)
		if kind != excelize.CellTypeUnset && kind != excelize.CellTypeNumber {
			t.Errorf("%s!%s is not a number cell", sheet, cell)
		}
	}
	at, heads := findCell(t, f, "Rows peel", "excess")
	if at == 0 {
		t.Fatal("no column excess")
	}
	for i, want := range nasty {
		cell, err := excelize.CoordinatesToCellName(at, heads+2+i)
		must(t, err)
		read("Rows peel", cell, want)
	}
	at, heads = findCell(t, f, "Estimates", "Estimate")
	for k, want := range nasty[:2] {
		cell, err := excelize.CoordinatesToCellName(at+k, heads+1)
		must(t, err)
		read("Estimates", cell, want)
	}
	at, heads = findCell(t, f, "Limits", "Lower limit")
	cell, err := excelize.CoordinatesToCellName(at, heads+1)
	must(t, err)
	read("Limits", cell, nasty[2])
}

// findCell returns column and row of the first cell with that text.
func findCell(t *testing.T, f *excelize.File, sheet, text string) (column, row int) {
	t.Helper()
	rows, err := f.GetRows(sheet)
	must(t, err)
	for r, cells := range rows {
		for c, cell := range cells {
			if cell == text {
				return c + 1, r + 1
			}
		}
	}
	return 0, 0
}

var awkward = []string{"=1+1", "+1", "-2+3", "@SUM(A1)", `=HYPERLINK("http://example.invalid","x")`, "|cmd", "_x0041_",
	"  blanks  ", "1e5", "0012", "TRUE", "2041-02-03", "a\tb", "quote\"<&>'", "ünïcödé 漢字 😀", "#REF!"}

func TestTextStaysText(t *testing.T) {
	rec, data := fixture()
	notes := data.Tables[0].Column("note")
	copy(notes.Texts, awkward)
	rec.Results.Statistics[0].Label = "=1+1"
	rec.Results.Statistics[1].Unit = `"x" [;@\_`
	rec.Results.Plan.Resolved.Study.Title = `=A1&"&P &D`
	rec.Results.Plan.Text = "=1+1\n@x: 1\n"
	rec.Results.Sources[0].Name = "=1+1/[*]?:"
	content := workbook(t, rec, data)
	f := openWorkbook(t, content)
	name := "Rows =1+1 ( )"
	column, heads := findCell(t, f, name, "note")
	for i, want := range awkward {
		cell, err := excelize.CoordinatesToCellName(column, heads+2+i)
		must(t, err)
		got, err := f.GetCellValue(name, cell)
		must(t, err)
		kind, err := f.GetCellType(name, cell)
		must(t, err)
		if got != want || kind != excelize.CellTypeSharedString {
			t.Errorf("%q came back as %q, kind %v", want, got, kind)
		}
	}
	for part, body := range workbookParts(t, content) {
		if strings.HasPrefix(part, "xl/worksheets/") && regexp.MustCompile(`<f[ >/]`).MatchString(body) {
			t.Errorf("%s holds a formula", part)
		}
		if strings.Contains(part, "externalLink") || strings.Contains(part, "vba") ||
			strings.Contains(body, `TargetMode="External"`) {
			t.Errorf("%s leads out of the workbook", part)
		}
	}
	head, err := f.GetHeaderFooter("Decision")
	must(t, err)
	if !strings.Contains(head.OddHeader, `=A1&&"&&P &&D`) {
		t.Errorf("the title is not protected in the head: %s", head.OddHeader)
	}
}

func TestControlCharactersAreReplaced(t *testing.T) {
	rec, data := fixture()
	data.Tables[0].Column("note").Texts[0] = "a\x00b\x0bc\xffd\u00a0e\r\nf"
	f := openWorkbook(t, workbook(t, rec, data))
	column, heads := findCell(t, f, "Rows peel", "note")
	cell, err := excelize.CoordinatesToCellName(column, heads+2)
	must(t, err)
	got, err := f.GetCellValue("Rows peel", cell)
	must(t, err)
	if want := "a\ufffdb\ufffdc\ufffdd e\nf"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
}

// At most 31 characters, certain signs forbidden, no apostrophes at the ends, no difference of case, "History"
// reserved: the rules of the viewers (common practice, no single source).
func TestSheetNames(t *testing.T) {
	rec, data := fixture()
	b, err := newBook(rec, data)
	must(t, err)
	for _, tt := range []struct{ name, want string }{
		{"Rows peel", "Rows peel"},
		{"rows PEEL", "rows PEEL 2"},
		{"Rows peel", "Rows peel 3"},
		{"Rows a/b\\c:d*e?f[g]", "Rows a b c d e f(g)"},
		{"Rows 0123456789012345678901234567890123", "Rows 01234567890123456789012345"},
		{"Rows 0123456789012345678901234567890999", "Rows 012345678901234567890123 2"},
		{"'quoted'", "quoted"},
		{"", "sheet"},
		{"History", "History sheet"},
		{"😀😀😀😀😀😀😀😀😀😀😀😀😀😀😀😀", strings.Repeat("😀", 15)},
	} {
		if got := b.sheetName(tt.name); got != tt.want {
			t.Errorf("sheetName(%q) = %q, want %q", tt.name, got, tt.want)
		}
	}
}

// A cell holds 32,767 characters, which viewers count in UTF-16 units (common practice, no single source).
func TestLongTextGoesOn(t *testing.T) {
	rec, data := fixture()
	long := strings.Repeat("a😀", 20000) + "end"
	rec.Results.Plan.Text = "first\n" + long + "\nlast\n"
	rec.Results.Statistics[0].Advisories[0].Text = long
	data.Tables[0].Column("note").Texts[0] = long
	f := openWorkbook(t, workbook(t, rec, data))
	joined := func(sheet string, column, row int) string {
		t.Helper()
		text := ""
		for {
			cell, err := excelize.CoordinatesToCellName(column, row)
			must(t, err)
			piece, err := f.GetCellValue(sheet, cell)
			must(t, err)
			text += piece
			if strings.HasSuffix(text, "end") || piece == "" {
				return text
			}
			row++
		}
	}
	column, row := findCell(t, f, "Plan", "first")
	if joined("Plan", column, row+1) != long {
		t.Error("a long line of the plan is not whole")
	}
	column, row = findCell(t, f, "Advisories", "coarse steps")
	if joined("Advisories", column+2, row) != long {
		t.Error("a long advisory is not whole")
	}
	column, row = findCell(t, f, "Rows peel", "note")
	cell, err := excelize.CoordinatesToCellName(column, row+2)
	must(t, err)
	got, err := f.GetCellValue("Rows peel", cell)
	must(t, err)
	if !strings.HasSuffix(got, "…") || !strings.HasPrefix(long, strings.TrimSuffix(got, "…")) {
		t.Error("a long text of a row is not cut with a mark")
	}
}

func TestTextBeyondACellSaysSo(t *testing.T) {
	rec, data := fixture()
	rec.Results.Plan.Resolved.Study.Purpose = strings.Repeat("_x0041_ ", 5000)
	f := openWorkbook(t, workbook(t, rec, data))
	got, err := f.GetCellValue("Decision", "B5")
	must(t, err)
	const note = "(cut; the whole text is in the record and the plan)"
	if !strings.HasPrefix(got, "_x0041_ _x0041_ ") || !strings.HasSuffix(got, note) {
		t.Errorf("the purpose begins %q and ends %q", got[:20], got[len(got)-60:])
	}
}

func TestRowsBeyondTheSheet(t *testing.T) {
	rec, data := fixture()
	b, err := newBook(rec, data)
	must(t, err)
	columns := rowColumns + len(data.Tables[0].Columns)
	b.rowSheet(&rec.Results.Sources[0], data.Tables[0], 7*columns)
	must(t, b.err)
	rows, err := b.file.GetRows("Rows peel")
	must(t, err)
	if !strings.Contains(rows[1][0], "Only the first 7 of 120 rows are listed") {
		t.Errorf("the sheet does not say what it leaves out: %s", rows[1][0])
	}
	if got := len(rows) - 5; got != 7 { // title, sentence, blank row, two rows of headings
		t.Errorf("%d rows are listed, want 7", got)
	}
}

// The points of a figure are the histogram of the record, bar by bar, and upright lines at the figures of the record.
func TestFigurePoints(t *testing.T) {
	rec, data := fixture()
	f := openWorkbook(t, workbook(t, rec, data))
	rows, err := f.GetRows("Figure points")
	must(t, err)
	s := &rec.Results.Statistics[0]
	var want []string
	add := func(name string, x, y float64) {
		want = append(want, fmt.Sprintf("1|%s|%s|%v|%v", s.ID, name, x, y))
	}
	most := 0
	name := "resample values in each bin"
	for k, n := range s.Distribution.Counts {
		most = max(most, n)
		add(name, s.Distribution.Edges[k], 0)
		name = ""
		add("", s.Distribution.Edges[k], float64(n))
		add("", s.Distribution.Edges[k+1], float64(n))
	}
	add("", s.Distribution.Edges[len(s.Distribution.Edges)-1], 0)
	for _, u := range []struct {
		name string
		x    float64
	}{{"estimate 1.310 N/15mm", 1.31}, {"lower limit 1.27 N/15mm, bca", 1.27}, {"criterion: at least 1.20 N/15mm", 1.2}} {
		add(u.name, u.x, 0)
		add("", u.x, 1.08*float64(most))
	}
	_, first := findCell(t, f, "Figure points", "No.")
	for i, w := range want {
		if got := strings.Join(rows[first+i], "|"); got != w {
			t.Fatalf("point %d is %s, want %s", i, got, w)
		}
	}
}

// An axis ends at whole steps and the steps are 1, 2 or 5 times a power of ten (common practice, no single source).
func TestNiceAxis(t *testing.T) {
	for _, tt := range []struct{ low, high, from, to, step float64 }{
		{1.2, 1.4, 1.2, 1.4, 0.05},
		{1.2034, 1.3971, 1.2, 1.4, 0.05},
		{-0.23, 0.16, -0.25, 0.2, 0.05},
		{0, 1, 0, 1, 0.2},
		{-3e-9, 4e-9, -3e-9, 4e-9, 1e-9},
		{12345, 98765, 0, 100000, 20000},
	} {
		from, to, step := niceAxis(tt.low, tt.high)
		if from != tt.from || to != tt.to || step != tt.step {
			t.Errorf("niceAxis(%g, %g) = %g, %g, %g, want %g, %g, %g", tt.low, tt.high, from, to, step, tt.from, tt.to, tt.step)
		}
	}
	if _, _, step := niceAxis(1, 1); step != 0 {
		t.Errorf("an axis of no length has a step of %g", step)
	}
}

// Widths of Helvetica as the PDF library has them, from the Adobe Core 14 font metrics.
func TestHelveticaWidths(t *testing.T) {
	p := fpdf.New("P", "pt", "A4", "")
	p.SetFont("Helvetica", "", 1000)
	for i, want := range helvetica {
		if got := p.GetStringWidth(string(rune(' ' + i))); got != want {
			t.Errorf("%q is %g wide, have %g", rune(' '+i), got, want)
		}
	}
}

func TestLineCount(t *testing.T) {
	ten := look{size: 10} // a digit is 5.56 points wide, a blank 2.78
	for _, tt := range []struct {
		text string
		room float64
		want int
	}{
		{"", 100, 1},
		{"0000000000", 55.7, 1},            // 55.6
		{"0000000000", 55.5, 2},            // one word, broken
		{"00000 00000", 58.4, 1},           // 2 · 27.8 + 2.78 = 58.38
		{"00000 00000", 58.3, 2},           //
		{"0\n\n0", 100, 3},                 //
		{strings.Repeat("0", 30), 55.7, 3}, //
	} {
		if got := lineCount(tt.text, ten, tt.room); got != tt.want {
			t.Errorf("lineCount(%q, %g) = %d, want %d", tt.text, tt.room, got, tt.want)
		}
	}
}

// What becomes of a row: of the fixture's rows, one is excluded as void, one has no value, half belong to another arm.
func TestFates(t *testing.T) {
	rec, data := fixture()
	b, err := newBook(rec, data)
	must(t, err)
	f := b.fates(data.Tables[0])
	for _, tt := range []struct {
		row                  int
		state, reason, users string
	}{
		{0, "used", "", "2, 5–7"},
		{17, "excluded", "Grip slipped. Deviation D-07. (by laboratory)", ""},
		{50, "used", "strength has no value, so not in 2, 6; excess has no value, so not in 7", "5"},
		{60, "used", "", "1–7"},
		{81, "excluded", "Specimen was cut twice. (by not stated)", ""},
	} {
		state, reason, users := f.of(&rec.Results.Sources[0], tt.row)
		if state != tt.state || reason != tt.reason || users != tt.users {
			t.Errorf("row %d: %q, %q, %q, want %q, %q, %q", tt.row, state, reason, users, tt.state, tt.reason, tt.users)
		}
	}
	data.Selections = data.Selections[1:2] // only the comparison, which needs the strength
	f = b.fates(data.Tables[0])
	if state, _, _ := f.of(&rec.Results.Sources[0], 50); state != "missing" {
		t.Errorf("a row that lacks its only use is %q", state)
	}
	data.Selections[0].States[0] = source.Outside
	if state, _, _ := f.of(&rec.Results.Sources[0], 0); state != "not selected" {
		t.Errorf("a row outside every statistic is %q", state)
	}
}

func TestPageSetup(t *testing.T) {
	rec, data := fixture()
	f := openWorkbook(t, workbook(t, rec, data))
	for _, name := range f.GetSheetList() {
		layout, err := f.GetPageLayout(name)
		must(t, err)
		if *layout.Size != 9 || *layout.FitToWidth != 1 || *layout.FitToHeight != 0 {
			t.Errorf("%s is not set up for A4, one page wide", name)
		}
		props, err := f.GetSheetProps(name)
		must(t, err)
		if !*props.FitToPage {
			t.Errorf("%s does not fit its page", name)
		}
		hf, err := f.GetHeaderFooter(name)
		must(t, err)
		if want := fmt.Sprintf("&L&8 plan %s · results %s · run 3&R&8 page &P of &N", short(rec.Results.Plan.SHA256),
			short(rec.ResultsSHA256)); hf.OddFooter != want {
			t.Errorf("%s: foot %q, want %q", name, hf.OddFooter, want)
		}
		if !strings.HasPrefix(hf.OddHeader, "&L&8 DRAFT ") {
			t.Errorf("%s: the head does not say that the plan is a draft: %q", name, hf.OddHeader)
		}
		if len(hf.OddHeader) > 255 {
			t.Errorf("%s: the head has %d characters", name, len(hf.OddHeader))
		}
	}
	panes, err := f.GetPanes("Rows peel")
	must(t, err)
	if !panes.Freeze || panes.YSplit != 5 || panes.XSplit != 1 {
		t.Errorf("the headings of the rows do not stay in sight: %+v", panes)
	}
	props, err := f.GetDocProps()
	must(t, err)
	if props.Creator != "Lotproof" || props.Created != rec.Run.Started || props.Modified != rec.Run.Started {
		t.Errorf("properties are %+v", props)
	}
}

// A record with little in it still makes a workbook.
func TestWorkbookUnusual(t *testing.T) {
	for _, tt := range []struct {
		name   string
		change func(r *record.Record, d *source.Data)
	}{
		{"no criterion", func(r *record.Record, _ *source.Data) {
			for i := range r.Results.Statistics {
				r.Results.Statistics[i].Accept = nil
			}
			r.Results.Verdict, r.Results.Plan.Resolved.Rounding = "no criterion", nil
		}},
		{"no advisories", func(r *record.Record, _ *source.Data) {
			for i := range r.Results.Statistics {
				r.Results.Statistics[i].Advisories = nil
			}
		}},
		{"no times", func(r *record.Record, _ *source.Data) { r.Run = record.Run{} }},
		{"unknown names", func(r *record.Record, _ *source.Data) {
			r.Results.Statistics[0].Statistic, r.Results.Statistics[0].Intervals[0].Method = "unheard of", "neither"
		}},
		{"equal resample values", func(r *record.Record, _ *source.Data) {
			r.Results.Statistics[0].Distribution = &record.Distribution{Edges: []float64{1.3, 1.3}, Counts: []int{20000}}
		}},
		{"huge figures", func(r *record.Record, _ *source.Data) {
			s := &r.Results.Statistics[0]
			s.Estimate, s.Decimals = num(1e300), -1
			s.Distribution = &record.Distribution{Edges: []float64{-math.MaxFloat64, 0, math.MaxFloat64}, Counts: []int{1, 1}}
		}},
		{"tiny figures", func(r *record.Record, _ *source.Data) {
			s := &r.Results.Statistics[0]
			s.Estimate, s.StandardError, s.Decimals = num(3e-300), num(1e-305), -1
			s.Distribution = &record.Distribution{Edges: []float64{0, 1e-300, 5e-300}, Counts: []int{1, 1}}
		}},
		{"no rows", func(_ *record.Record, d *source.Data) {
			t := d.Tables[0]
			t.Rows = nil
			for i := range t.Columns {
				t.Columns[i].Texts, t.Columns[i].Numbers, t.Columns[i].Missing = nil, nil, nil
			}
		}},
		{"long unit and names", func(r *record.Record, _ *source.Data) {
			s := &r.Results.Statistics[0]
			s.Unit, s.Label, s.ID = strings.Repeat("furlong", 40), strings.Repeat("label ", 300), strings.Repeat("id", 300)
			r.Results.Plan.Resolved.Study.Title = strings.Repeat("title & ", 100)
			r.Results.Sources[0].Name = strings.Repeat("source", 20)
		}},
		{"decimals beyond a format", func(r *record.Record, _ *source.Data) { r.Results.Statistics[0].Decimals = 400 }},
	} {
		t.Run(tt.name, func(t *testing.T) {
			rec, data := fixture()
			tt.change(rec, data)
			f := openWorkbook(t, workbook(t, rec, data))
			for _, name := range f.GetSheetList() {
				rows, err := f.GetRows(name)
				must(t, err)
				for r, row := range rows {
					for _, cell := range row {
						if strings.Contains(cell, "NaN") || strings.Contains(cell, "Inf") || strings.Contains(cell, "%!") {
							t.Errorf("%s, row %d holds %q", name, r+1, cell)
						}
					}
				}
			}
		})
	}
}

func TestWorkbookRefusesForeignData(t *testing.T) {
	rec, data := fixture()
	data.Selections = data.Selections[1:]
	err := Workbook(io.Discard, rec, data)
	if err == nil || !strings.Contains(err.Error(), "take the data of the record's own run") {
		t.Errorf("error is %v", err)
	}
}

type fullDisk struct{ room int }

var errFull = errors.New("no room")

func (d *fullDisk) Write(p []byte) (int, error) {
	if d.room -= len(p); d.room < 0 {
		return 0, errFull
	}
	return len(p), nil
}

func TestWorkbookReportsWriteErrors(t *testing.T) {
	rec, data := fixture()
	for _, room := range []int{0, 100, 20000} {
		if err := Workbook(&fullDisk{room}, rec, data); !errors.Is(err, errFull) {
			t.Errorf("with room for %d bytes the error is %v", room, err)
		}
	}
}

// Number formats show the unit beside the number, whatever the unit is made of.
func TestUnitFormat(t *testing.T) {
	for _, tt := range []struct {
		v        float64
		decimals int
		unit     string
		want     string
	}{
		{1.25, 2, "N/15mm", `0.00" N/15mm"`},
		{1.25, 0, "%", `0" %"`},
		{1.25, 3, "", "0.000"},
		{1.25, 1, `2" pipe`, `0.0" 2"\"" pipe"`},
		{1.25, -3, "g", `0" g"`},
		{1.25e20, 2, "g", `0.00000000000000E+00" g"`},
		{1.25e-20, 22, "g", `0.00E+00" g"`},
		{1.25, 2, strings.Repeat("u", 25), "0.00"},
	} {
		if got := unitFormat(tt.v, tt.decimals, tt.unit); got != tt.want {
			t.Errorf("unitFormat(%g, %d, %q) = %s, want %s", tt.v, tt.decimals, tt.unit, got, tt.want)
		}
	}
	limit := record.Accept{Criterion: atMost, Limit: "-0.150"}
	s := record.Statistic{Unit: "N"}
	if got := criterionItem(&s, &limit).format; got != `"at most "0.000" N";"at most −"0.000" N"` {
		t.Errorf("the criterion has the format %s", got)
	}
	if got := (spec.Number{Text: limit.Limit}).Decimals(); got != 3 {
		t.Errorf("%s has %d decimals", limit.Limit, got)
	}
}
