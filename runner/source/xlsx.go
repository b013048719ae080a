package source

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"path"
	"slices"
	"strconv"
	"strings"

	"github.com/xuri/excelize/v2"

	"lotproof/spec"
)

// workbook reads one sheet of an .xlsx file into b; headings stand in its first row.
//
// A number is read from its stored digits, whatever the format that shows it; in a category or text column its text is
// the shortest decimal that reads back the same. A formula counts with its stored value. Rows and columns that are
// hidden or filtered are read like all others. Blank rows are treated as in a text file. Errors, dates, TRUE or FALSE,
// merged cells and formulas without a stored value are mistakes.
func workbook(content []byte, b *builder) {
	// The library is given hostile bytes; a fault in it must end in a message like any other damage.
	defer func() {
		if recover() != nil {
			b.bad.add(spec.Error{Problem: damaged, Fix: damagedFix})
		}
	}()
	if problem, fix := checkArchive(content); problem != "" {
		b.bad.add(spec.Error{Problem: problem, Fix: fix})
		return
	}
	file, err := excelize.OpenReader(bytes.NewReader(content), excelize.Options{RawCellValue: true,
		UnzipSizeLimit: mostUnpacked, UnzipXMLSizeLimit: mostUnpacked}) // equal limits: nothing goes through the disk
	if err != nil {
		b.bad.add(spec.Error{Problem: damaged, Fix: damagedFix})
		return
	}
	defer file.Close() // holds no file of the disk
	name, found := chooseSheet(b, file.GetSheetList())
	if !found {
		return
	}
	s := &sheet{file: file, name: name, builder: b}
	b.at, b.unit, b.table.sheet = s.at, "row", name
	if err := s.read(); err != nil {
		e := s.whole()
		e.Problem, e.Fix = err.Error(), damagedFix
		if !errors.Is(err, errDamaged) {
			e.Fix = ""
		}
		b.bad.add(e)
	}
}

var errDamaged = errors.New("the sheet is damaged")

// chooseSheet returns the sheet that the plan names, or the only one.
func chooseSheet(b *builder, sheets []string) (string, bool) {
	s := b.source()
	switch {
	case s.Sheet == "" && len(sheets) == 1:
		return sheets[0], true
	case s.Sheet == "":
		b.planBad = append(b.planBad, b.plan.Mistake("sources."+s.Name+".file",
			fmt.Sprintf("%s has %d sheets", s.File, len(sheets)), "name one with sheet: "+names(sheets)))
	case !slices.Contains(sheets, s.Sheet):
		b.planBad = append(b.planBad, b.plan.Mistake("sources."+s.Name+".sheet",
			fmt.Sprintf("%s has no sheet %s", s.File, quote(s.Sheet)), suggestion(s.Sheet, sheets, "sheets there")))
	default:
		return s.Sheet, true
	}
	return "", false
}

// A sheet is a sheet that is being read: the library gives the value of each cell, the scanner of its part gives what
// the library does not tell, the kinds of the cells and whether the part is whole.
type sheet struct {
	file    *excelize.File
	name    string
	builder *builder

	row     int      // current row, from 1
	values  []string // of the current row
	kinds   []kind   // of the current row
	blank   []span   // blank rows since the last data row
	dates   map[int]bool
	strings int // how many shared strings there are
}

// whole returns the place of the sheet.
func (s *sheet) whole() spec.Error {
	return spec.Error{File: fmt.Sprintf("%s: sheet %s", s.builder.source().File, s.name)}
}

// at returns the place of a cell of the current row.
func (s *sheet) at(cell int) spec.Error { return s.cell(cell, s.row) }

func (s *sheet) cell(cell, row int) spec.Error {
	e := s.whole()
	address, err := excelize.CoordinatesToCellName(cell+1, row)
	if err == nil { // else beyond the last column of any sheet
		e.File += ", cell " + address
	}
	return e
}

func (s *sheet) read() error {
	part, err := s.part()
	if err != nil {
		return err
	}
	s.strings = countElements(s.bytes("xl/sharedStrings.xml"), "si")
	scan := newScanner(part)
	rows, err := s.file.Rows(s.name)
	if err != nil {
		return errDamaged
	}
	defer rows.Close() // reads from memory
	b := s.builder
	for s.row = 1; rows.Next(); s.row++ {
		if s.values, err = rows.Columns(); err != nil {
			return errDamaged
		}
		if s.kinds, err = scan.row(s.row); err != nil {
			return err
		}
		if err := s.agree(); err != nil {
			return err
		}
		switch {
		case s.row == 1:
			if !s.headings() {
				return nil
			}
		case s.empty():
			s.blank = append(s.blank, span{s.row, s.row})
		default:
			if s.row*b.width > mostCells {
				return fmt.Errorf("the sheet has more than %d cells", mostCells)
			}
			s.flush()
			s.data()
		}
	}
	if s.row == 1 {
		e := s.whole()
		e.Problem, e.Fix = "the sheet is empty", "write headings in the first row and one row of data a row"
		b.bad.add(e)
		return nil
	}
	if err := scan.end(); err != nil || rows.Error() != nil {
		return errDamaged
	}
	s.merged(scan.merged)
	if len(b.table.Rows) == 0 && len(b.bad.list) == 0 {
		e := s.whole()
		e.Problem, e.Fix = "the sheet has headings and no data rows", "write one row of data a row below the headings"
		b.bad.add(e)
	}
	return nil
}

// agree compares what the scanner and the library found in the current row. They differ if the library passed over
// something without a word, such as a text that is not in the list of texts.
func (s *sheet) agree() error {
	if len(s.values) > len(s.kinds) {
		return errDamaged
	}
	for i, k := range s.kinds {
		value := ""
		if i < len(s.values) {
			value = s.values[i]
		}
		switch k.kind {
		case "", "n", "b", "e", "d":
			if value != k.stored {
				return errDamaged
			}
		case "s":
			if value == "" && k.stored != "" {
				at, err := strconv.Atoi(strings.TrimSpace(k.stored))
				if err != nil || at < 0 || at >= s.strings {
					return errDamaged
				}
			}
		case "str", "inlineStr":
		default:
			return errDamaged
		}
	}
	return nil
}

func (s *sheet) headings() bool {
	if s.empty() {
		e := s.whole()
		e.Problem, e.Fix = "the first row is blank", "write the headings in row 1"
		s.builder.bad.add(e)
		return false
	}
	for n := len(s.values); strings.TrimSpace(s.values[n-1]) == ""; n = len(s.values) {
		s.values = s.values[:n-1]
	}
	return s.builder.headings(s.values)
}

// empty says whether no cell of the current row holds text.
func (s *sheet) empty() bool { return blank(s.values) && !slices.ContainsFunc(s.kinds, kind.unstored) }

// flush settles the blank rows before a data row.
func (s *sheet) flush() {
	b := s.builder
	for i := 0; i < len(s.blank); {
		if b.width == 1 {
			b.blankRow(s.blank[i].first)
			i++
			continue
		}
		first := i
		for i++; i < len(s.blank) && s.blank[i].first == s.blank[i-1].last+1; i++ {
		}
		b.blankLines(s.whole(), span{s.blank[first].first, s.blank[i-1].last})
	}
	s.blank = s.blank[:0]
}

// data takes the current row as a data row.
func (s *sheet) data() {
	b := s.builder
	cells := make([]string, b.width)
	copy(cells, s.values)
	for i := range s.kinds {
		switch {
		case i >= b.width:
			if i < len(s.values) && strings.TrimSpace(s.values[i]) != "" {
				e := s.at(i)
				e.Problem, e.Fix = "the cell has no heading above it", "write one, or take the cell out"
				b.bad.add(e)
			}
		case b.columns[i] >= 0:
			cells[i] = s.plain(i, cells[i])
		}
	}
	b.row(s.row, cells)
}

// plain returns the text of a cell in a declared column, "" after a mistake.
func (s *sheet) plain(i int, value string) string {
	c := &s.builder.table.Columns[s.builder.columns[i]]
	k := s.kinds[i]
	if k.unstored() {
		s.builder.wrong(i, c, "the formula has no stored "+
			"value", "open the workbook in a spreadsheet program and save it")
		return ""
	}
	switch k.kind {
	case "e":
		if slices.Contains(s.builder.source().Missing, value) {
			return value
		}
		s.builder.wrong(i, c, "the cell holds the error "+
			""+quote(value), "mend the formula, or clear the cell; if the error "+
			"means that there is no value, list it under missing of the source")
		return ""
	case "b":
		s.builder.wrong(i, c, "the cell holds TRUE or FALSE", "write a number or a text")
		return ""
	case "d":
		s.builder.wrong(i, c, "the cell holds a date", dateFix)
		return ""
	case "", "n":
		if value == "" {
			return ""
		}
		if s.date(k.style) {
			s.builder.wrong(i, c, "the cell holds a date", dateFix)
			return ""
		}
		return shortest(value)
	}
	return value
}

// shortest returns the shortest decimal that reads back as the stored number: programs store 1.1 as 1.1000000000000001.
func shortest(stored string) string {
	number, err := strconv.ParseFloat(stored, 64)
	if err != nil || !plainNumber(stored) {
		return stored
	}
	if size := math.Abs(number); size == 0 || 1e-5 <= size && size < 1e15 {
		return strconv.FormatFloat(number, 'f', -1, 64)
	}
	return strconv.FormatFloat(number, 'g', -1, 64)
}

const dateFix = "dates are not available in this version: write it as text, or as a number of days; a spreadsheet " +
	"program also makes dates of entries such as 3.1"

// date says whether the number format of a cell style shows dates or times.
func (s *sheet) date(style int) bool {
	date, known := s.dates[style]
	if known {
		return date
	}
	styles := s.file.Styles
	if styles != nil && styles.CellXfs != nil && style >= 0 && style < len(styles.CellXfs.Xf) {
		if id := styles.CellXfs.Xf[style].NumFmtID; id != nil {
			date = dateFormatID(*id)
			if styles.NumFmts != nil {
				for _, f := range styles.NumFmts.NumFmt {
					if f != nil && f.NumFmtID == *id {
						date = dateFormat(f.FormatCode)
					}
				}
			}
		}
	}
	if s.dates == nil {
		s.dates = map[int]bool{}
	}
	s.dates[style] = date
	return date
}

// merged reports merged cells among the data.
func (s *sheet) merged(areas []string) {
	for _, area := range areas {
		from, to, _ := strings.Cut(area, ":")
		column, row, err := excelize.CellNameToCoordinates(from)
		if err != nil {
			continue
		}
		if from == to {
			continue
		}
		last := s.row - 1 - len(s.blank)
		if column > s.builder.width || row > last {
			continue
		}
		e := s.whole()
		e.File += ", cells " + area
		e.Problem, e.Fix = "the cells are merged", "undo the merging and write each value into its own cell"
		s.builder.bad.add(e)
	}
}

// bytes returns one part of the archive, empty if there is none.
func (s *sheet) bytes(name string) []byte {
	content, _ := s.file.Pkg.Load(name)
	b, _ := content.([]byte)
	return b
}

// part finds the part that holds the sheet, by the relations of ECMA-376 part 2.
func (s *sheet) part() ([]byte, error) {
	book := ""
	for _, r := range relations(s.bytes("_rels/.rels")) {
		if strings.HasSuffix(r.Type, "/officeDocument") && book == "" {
			book = strings.TrimPrefix(r.Target, "/")
		}
	}
	if s.file.WorkBook == nil {
		return nil, errDamaged
	}
	dir, base := path.Split(book)
	for _, listed := range s.file.WorkBook.Sheets.Sheet {
		if listed.Name != s.name {
			continue
		}
		for _, r := range relations(s.bytes(dir + "_rels/" + base + ".rels")) {
			if r.ID != listed.ID {
				continue
			}
			if !strings.HasSuffix(r.Type, "/worksheet") {
				return nil, errors.New("the sheet holds no cells")
			}
			target := path.Join(dir, r.Target)
			if strings.HasPrefix(r.Target, "/") {
				target = strings.TrimPrefix(r.Target, "/")
			}
			if part := s.bytes(target); len(part) > 0 {
				return part, nil
			}
		}
	}
	return nil, errDamaged
}
