package report

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
	"time"

	"github.com/xuri/excelize/v2"

	"lotproof/runner/record"
	"lotproof/runner/source"
)

// Workbook writes the results workbook of a run: decisions first, then every figure with all its digits, the rows as
// analysed, the resample values, the methods, the plan and the provenance. It depends on the record and the rows alone
// and gives the same bytes every time; dates in the file are those of the run. data are those that the record was made
// from, with one ledger for each statistic.
//
// Results are stored as values, never as formulas, so no viewer computes them anew. Text stays text, whatever it looks
// like.
func Workbook(w io.Writer, rec *record.Record, data *source.Data) error {
	b, err := newBook(rec, data)
	if err != nil {
		return err
	}
	b.decisionSheet()
	b.estimateSheet()
	b.limitSheet()
	b.advisorySheet()
	b.ledgerSheet()
	b.rowSheets()
	b.valueSheets()
	b.methodSheet()
	b.planSheet()
	b.provenanceSheet()
	b.contents()
	return b.write(w)
}

// A book is a workbook in the making. The first error stays in err, and what follows it does nothing.
type book struct {
	rec     *record.Record
	results *record.Results
	data    *source.Data

	file   *excelize.File
	err    error
	looks  map[look]int
	sheets []*bookSheet
	taken  map[string]bool // sheet names in lower case; viewers do not tell cases apart
	index  int             // row of the first sheet from which the list of sheets is written
}

func newBook(rec *record.Record, data *source.Data) (*book, error) {
	if len(data.Selections) != len(rec.Results.Statistics) || len(data.Tables) != len(rec.Results.Sources) {
		return nil, fmt.Errorf("the record has %d statistics and %d sources, the data have %d and %d; "+
			"take the data of the record's own run",
			len(rec.Results.Statistics), len(rec.Results.Sources), len(data.Selections), len(data.Tables))
	}
	b := &book{rec: rec, results: &rec.Results, data: data, file: excelize.NewFile(),
		looks: map[look]int{}, taken: map[string]bool{}}
	b.keep(b.file.SetDefaultFont(bookFont))
	return b, nil
}

// keep remembers the first error.
func (b *book) keep(err error) {
	if b.err == nil {
		b.err = err
	}
}

// started is the time of the run; never the time of writing, so that a record without one still gives the same bytes.
func (b *book) started() time.Time {
	t, err := time.Parse(time.RFC3339, b.rec.Run.Started)
	if err != nil || t.Year() < 1980 || t.Year() > 2107 { // what a zip archive can hold
		t = time.Date(1980, 1, 1, 0, 0, 0, 0, time.UTC)
	}
	return t.UTC()
}

// write gives the file its properties and writes it.
func (b *book) write(w io.Writer) error {
	study := &b.results.Plan.Resolved.Study
	at := b.started().Format(time.RFC3339)
	b.keep(b.file.SetDocProps(&excelize.DocProperties{Creator: program, LastModifiedBy: program, Created: at, Modified: at,
		Title: clean(study.ID + " – " + study.Title), Subject: "Results workbook, run " + strconv.Itoa(b.rec.Run.Number),
		Language: "en-GB"}))
	b.keep(b.file.SetAppProps(&excelize.AppProperties{Application: program}))
	for _, p := range [][2]string{{"plan SHA-256", b.results.Plan.SHA256}, {"results SHA-256", b.rec.ResultsSHA256},
		{"seed", strconv.FormatUint(b.results.Plan.Resolved.Seed.Value, 10)}} {
		b.keep(b.file.SetCustomProps(excelize.CustomProperty{Name: p[0], Value: p[1]}))
	}
	for _, s := range b.sheets {
		s.widen()
		b.keep(b.file.SetSheetDimension(s.name, "A1:"+s.cell(len(s.widths), max(s.row-1, 1))))
	}
	if b.err != nil {
		return b.err
	}
	b.file.SetActiveSheet(0)
	b.file.SetZipWriter(func(w io.Writer) excelize.ZipWriter {
		return &sortedZip{w: w, parts: map[string]*bytes.Buffer{}, time: b.started()}
	})
	if err := b.file.Write(w); err != nil {
		return err
	}
	return b.file.Close()
}

const (
	program  = "Lotproof"
	bookFont = "Arial"
	codeFont = "Courier New"

	sheetRows   = 1048576 // rows of a sheet, at most
	cellLetters = 32767   // UTF-16 units of text in a cell, at most
	tallest     = 409.0   // height of a row in points, at most
)

// The colours of the workbook. None of them carries a meaning alone.
const (
	bookInk    = "1F2A30"
	bookAccent = "0F6B6B"
	bookSoft   = "5B6870"
	bookBand   = "E8F0F0"
	bookHair   = "C9D3D6"
	bookWarn   = "8A3B12"
)

// A look is how a cell looks. The zero value is plain text at the top left.
type look struct {
	size      float64 // points; 0: 10
	bold      bool
	code      bool   // fixed pitch
	colour    string // empty: ink
	fill      string // empty: none
	right     bool   // aligned
	middle    bool   // vertically
	wrap      bool
	inset     bool   // text a little to the right, away from the number before it
	format    string // of numbers; empty: general
	under     bool   // hairline below
	underBold bool   // line below, in the accent
}

func (b *book) style(l look) int {
	if id, known := b.looks[l]; known {
		return id
	}
	font := &excelize.Font{Family: bookFont, Size: l.points(), Bold: l.bold, Color: l.colour}
	if l.code {
		font.Family = codeFont
	}
	if font.Color == "" {
		font.Color = bookInk
	}
	s := &excelize.Style{Font: font, Alignment: &excelize.Alignment{Vertical: "top", WrapText: l.wrap}}
	if l.middle {
		s.Alignment.Vertical = "center"
	}
	s.Alignment.Horizontal = "left"
	if l.right {
		s.Alignment.Horizontal = "right"
	} else if l.inset {
		s.Alignment.Indent = 1
	}
	if l.fill != "" {
		s.Fill = excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{l.fill}}
	}
	if l.format != "" {
		s.CustomNumFmt = &l.format
	}
	if l.under {
		s.Border = append(s.Border, excelize.Border{Type: "bottom", Color: bookHair, Style: 1})
	}
	if l.underBold {
		s.Border = append(s.Border, excelize.Border{Type: "bottom", Color: bookAccent, Style: 1})
	}
	id, err := b.file.NewStyle(s)
	b.keep(err)
	b.looks[l] = id
	return id
}

// A bookSheet is one sheet in the making; rows and columns count from 1.
type bookSheet struct {
	*book
	name  string
	about string // what the list of sheets says of it
	row   int    // the next free row

	widths  []float64       // of the columns
	heights map[int]float64 // of the rows that are not of standard height, in points
	letters map[int]int     // of the longest number in a column, as shown
	page    int             // row at the top of the current printed page

	across, down float64 // what a printed page has room for, in points
}

// sheet adds a sheet. wide is landscape; widths are those of the columns, in digits of the standard font.
func (b *book) sheet(name, about string, wide bool, widths ...float64) *bookSheet {
	s := &bookSheet{book: b, name: b.sheetName(name), about: about, row: 1, widths: widths, page: 1,
		heights: map[int]float64{}, letters: map[int]int{}}
	if len(b.sheets) == 0 {
		b.keep(b.file.SetSheetName("Sheet1", s.name))
	} else {
		_, err := b.file.NewSheet(s.name)
		b.keep(err)
	}
	b.sheets = append(b.sheets, s)
	for i, w := range widths {
		letter, err := excelize.ColumnNumberToName(i + 1)
		b.keep(err)
		b.keep(b.file.SetColWidth(s.name, letter, letter, w))
	}
	s.pageSetup(wide)
	return s
}

// pageSetup sets paper, margins, head and foot.
func (s *bookSheet) pageSetup(wide bool) {
	paper, orientation, once, many, yes, no := 9, "portrait", 1, 0, true, false
	s.across, s.down = 523, 734 // A4 less margins
	if wide {
		orientation = "landscape"
		s.across, s.down = 770, 487
	}
	s.keep(s.file.SetPageLayout(s.name, &excelize.PageLayoutOptions{Size: &paper, Orientation: &orientation,
		FitToWidth: &once, FitToHeight: &many}))
	s.keep(s.file.SetSheetProps(s.name, &excelize.SheetPropsOptions{FitToPage: &yes}))
	side, end, edge := 0.5, 0.75, 0.35
	s.keep(s.file.SetPageMargins(s.name, &excelize.PageLayoutMarginsOptions{Left: &side, Right: &side, Top: &end,
		Bottom: &end, Header: &edge, Footer: &edge}))
	study := &s.results.Plan.Resolved.Study
	left := footText(study.ID + "   " + study.Title)
	if study.Status == "draft" {
		left = "DRAFT   " + left
	}
	s.keep(s.file.SetHeaderFooter(s.name, &excelize.HeaderFooterOptions{
		OddHeader: `&L&8` + " " + left + `&R&8` + " " + footText(s.name),
		OddFooter: fmt.Sprintf("&L&8 plan %s · results %s · run %d&R&8 page &P of &N", short(s.results.Plan.SHA256),
			short(s.rec.ResultsSHA256), s.rec.Run.Number)}))
	s.keep(s.file.SetSheetView(s.name, 0, &excelize.ViewOptions{ShowGridLines: &no}))
}

// freeze keeps the rows above the next one, and the first columns, in sight, and repeats those rows, from the row of
// headings on, on every printed page.
func (s *bookSheet) freeze(titleRow, columns int) {
	top, err := excelize.CoordinatesToCellName(columns+1, s.row)
	s.keep(err)
	pane := "bottomLeft"
	if columns > 0 {
		pane = "bottomRight"
	}
	s.keep(s.file.SetPanes(s.name, &excelize.Panes{Freeze: true, XSplit: columns, YSplit: s.row - 1, TopLeftCell: top,
		ActivePane: pane, Selection: []excelize.Selection{{SQRef: top, ActiveCell: top, Pane: pane}}}))
	s.repeat(titleRow, s.row-1)
}

// repeat repeats rows on every printed page.
func (s *bookSheet) repeat(first, last int) {
	s.keep(s.file.SetDefinedName(&excelize.DefinedName{Name: "_xlnm.Print_Titles", Scope: s.name,
		RefersTo: fmt.Sprintf("%s!$%d:$%d", quoted(s.name), first, last)}))
}

// printed limits what is printed to the rows so far.
func (s *bookSheet) printed() {
	s.keep(s.file.SetDefinedName(&excelize.DefinedName{Name: "_xlnm.Print_Area", Scope: s.name,
		RefersTo: fmt.Sprintf("%s!$A$1:%s", quoted(s.name), fixedCell(s.cell(len(s.widths), max(1, s.row-1))))}))
}

func fixedCell(cell string) string {
	at := strings.IndexAny(cell, "0123456789")
	return "$" + cell[:at] + "$" + cell[at:]
}

func quoted(name string) string { return "'" + strings.ReplaceAll(name, "'", "''") + "'" }

// breakPage begins a new printed page at a row.
func (s *bookSheet) breakPage(row int) {
	s.keep(s.file.InsertPageBreak(s.name, s.cell(1, row)))
	s.page = row
}

// together begins a new printed page before row first if otherwise the rows from there to the last one written might be
// torn.
func (s *bookSheet) together(first int) {
	height := 0.0
	for row := s.page; row < s.row; row++ {
		height += max(s.heights[row], 15)
	}
	width := 0.0
	for i := range s.widths {
		width += 6*s.width(i+1) + 4
	}
	// The sheet is made smaller until its width fits; a little is left for viewers that measure otherwise.
	if height > 0.96*s.down*max(1, width/s.across) && first > s.page {
		s.breakPage(first)
	}
}

// width is how wide a column will be: a number that does not fit shows as ####.
func (s *bookSheet) width(column int) float64 {
	return max(s.widths[column-1], min(float64(s.letters[column])+3, 100))
}

// widen makes columns as wide as their numbers.
func (s *bookSheet) widen() {
	for i, w := range s.widths {
		if need := s.width(i + 1); need > w {
			letter, err := excelize.ColumnNumberToName(i + 1)
			s.keep(err)
			s.keep(s.file.SetColWidth(s.name, letter, letter, need))
		}
	}
}

func (s *bookSheet) cell(column, row int) string {
	name, err := excelize.CoordinatesToCellName(column, row)
	s.keep(err)
	return name
}

// text writes text into a cell and makes the row high enough.
func (s *bookSheet) text(column int, text string, l look) {
	s.write(column, text, l)
	s.fit(column, column, text, l)
}

// write puts text into a cell. What a cell cannot hold is cut, and says so: texts as long come from the plan, which
// stands whole on a sheet of its own.
func (s *bookSheet) write(column int, text string, l look) {
	if s.err != nil {
		return
	}
	at := s.cell(column, s.row)
	if text != "" {
		s.keep(s.file.SetCellStr(s.name, at, fitted(escaped(clean(text)))))
	}
	s.keep(s.file.SetCellStyle(s.name, at, at, s.style(l)))
}

// number writes a finite number with all its digits; the library's own setters keep only 15 of them.
func (s *bookSheet) number(column int, v float64, l look) {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		s.text(column, noFigure, l) // a record holds none; a cell must not either
		return
	}
	if s.err != nil {
		return
	}
	at := s.cell(column, s.row)
	s.keep(s.file.SetCellDefault(s.name, at, strconv.FormatFloat(v, 'g', -1, 64)))
	s.keep(s.file.SetCellStyle(s.name, at, at, s.style(l)))
}

// wide writes text that stands in columns first to last, which are merged.
func (s *bookSheet) wide(first, last int, text string, l look) {
	l.wrap = true
	s.write(first, text, l)
	for c := first + 1; c <= last; c++ {
		at := s.cell(c, s.row)
		s.keep(s.file.SetCellStyle(s.name, at, at, s.style(l)))
	}
	s.fit(first, last, text, l)
	if last > first {
		s.keep(s.file.MergeCell(s.name, s.cell(first, s.row), s.cell(last, s.row)))
	}
}

// tall makes the current row at least that high, in points.
func (s *bookSheet) tall(points float64) {
	if points = min(points, tallest); points > s.heights[s.row] {
		s.heights[s.row] = points
		s.keep(s.file.SetRowHeight(s.name, s.row, points))
	}
}

// link makes the cell lead to another sheet.
func (s *bookSheet) link(column int, to *bookSheet) {
	s.keep(s.file.SetCellHyperLink(s.name, s.cell(column, s.row), quoted(to.name)+"!A1", "Location"))
}

// plot draws lines over a numeric axis, its upper left corner at the given cell.
func (s *bookSheet) plot(column, row int, p plotted) {
	if s.err != nil {
		return
	}
	font := excelize.Font{Family: bookFont, Size: 8, Color: bookSoft}
	legend := excelize.Font{Family: bookFont, Size: 9, Color: bookInk}
	title := func(text string) excelize.ChartTitle {
		f := font
		f.Color = bookInk
		return excelize.ChartTitle{Paragraph: []excelize.RichTextRun{{Text: text, Font: &f}}}
	}
	zero := 0.0
	chart := &excelize.Chart{
		Type:      excelize.Scatter,
		Format:    excelize.GraphicOptions{Name: cutUnits(clean(p.name), 200), AltText: cutUnits(clean(p.name), 200)},
		Legend:    excelize.ChartLegend{Position: "bottom", Font: &legend},
		Dimension: excelize.ChartDimension{Width: 640, Height: 430},
		Border:    excelize.LineOptions{Type: excelize.LineNone},
		XAxis: excelize.ChartAxis{Minimum: &p.low, Maximum: &p.high, MajorUnit: p.step, Font: font,
			NumFmt: excelize.ChartNumFmt{CustomNumFmt: p.format}, Title: title(p.axis)},
		YAxis: excelize.ChartAxis{Minimum: &zero, Font: font, MajorGridLines: true,
			TickLabelPosition: excelize.ChartTickLabelLow, NumFmt: excelize.ChartNumFmt{CustomNumFmt: "#,##0"}},
	}
	for _, l := range p.lines {
		chart.Series = append(chart.Series, excelize.ChartSeries{Name: l.name, Categories: l.x, Values: l.y,
			Marker: excelize.ChartMarker{Symbol: "none"},
			Fill:   excelize.Fill{Type: "pattern", Pattern: 1, Color: []string{l.colour}},
			Line:   excelize.LineOptions{Type: excelize.LineSolid, Width: l.width, Dash: lineDash[l.dash]}})
	}
	s.keep(s.file.AddChart(s.name, s.cell(column, row), chart))
}

var lineDash = map[string]excelize.LineDashType{"": excelize.LineDashSolid, "dash": excelize.LineDashDash,
	"dot": excelize.LineDashSysDot, "dash dot": excelize.LineDashLgDashDot}

// A plotted figure has an axis from low to high with marks at each step.
type plotted struct {
	name, axis      string
	low, high, step float64
	format          string
	lines           []plottedLine
}

// A plottedLine goes through points that stand on a sheet; name, x and y are references to its cells.
type plottedLine struct {
	name, x, y string
	colour     string
	width      float64
	dash       string
}

// reference writes the address of cells in one column, for a figure.
func (s *bookSheet) reference(column, first, last int) string {
	from, err := excelize.CoordinatesToCellName(column, first, true)
	s.keep(err)
	to, err := excelize.CoordinatesToCellName(column, last, true)
	s.keep(err)
	if first == last {
		return quoted(s.name) + "!" + from
	}
	return quoted(s.name) + "!" + from + ":" + to
}
