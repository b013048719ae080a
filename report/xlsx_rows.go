package report

import (
	"fmt"
	"strconv"
	"strings"

	"lotproof/runner/record"
	"lotproof/runner/source"
	"lotproof/runner/statistic"
	"lotproof/spec"
)

// definitionOf returns the entry of the catalogue behind a statistic, or nil.
func definitionOf(one *record.Statistic) *statistic.Definition {
	return statistic.Lookup(one.Statistic)
}

// ledgerSheet says how rows add up: those of each source, the exclusions, those of each statistic.
func (b *book) ledgerSheet() {
	s := b.sheet("Row ledger", "rows read, used, excluded and missing, with the reason of each exclusion", true,
		5, 20, 40, 46, 22, 10, 10, 10, 10, 10)
	s.title("Row ledger", "For each statistic: read = used + excluded + missing + outside. Missing: a needed column "+
		"has no value. Outside: the condition or the comparison of the statistic does not select the row.", 10)
	s.heads(1, ">No.", "Statistic", "Label", "Rows where", "Source", ">Read", ">Used", ">Excluded", ">Missing", ">Outside")
	for i := range b.results.Statistics {
		one := &b.results.Statistics[i]
		r := one.Rows
		s.line(1, count(i+1), say(one.ID), say(one.Label), sayCode(one.Where), say(one.Source), count(r.Read), count(r.Used),
			count(r.Excluded), count(r.Missing), count(r.Outside))
	}
	s.heading("Sources")
	s.heads(1, "", "Source", "File", "Columns not declared", "Digest in the plan", ">Read", ">Used", ">Excluded")
	for i := range b.results.Sources {
		f := &b.results.Sources[i]
		s.line(1, say(""), say(f.Name), say(f.File), say(orElse(strings.Join(f.Ignored, ", "), noFigure)), say(f.Approved),
			count(f.Rows.Read), count(f.Rows.Used), count(f.Rows.Excluded))
	}
	s.heading("Rows excluded from every analysis")
	heads := true
	for i := range b.results.Sources {
		f := &b.results.Sources[i]
		for _, e := range f.Exclusions {
			if heads {
				s.heads(1, "", "Source", "Rule: rows where", "Reason", "Stated by", ">Rows", "Lines of the file")
				heads = false
			}
			s.text(7, "", bookBody)
			for c, item := range []bookItem{say(""), say(f.Name), sayCode(e.Where), say(e.Because), say(e.By),
				count(len(e.Lines))} {
				s.put(1+c, item, bookBody)
			}
			s.wide(7, 10, lineList(e.Lines), bookBody)
			s.row++
		}
	}
	if heads {
		s.text(1, "The plan excludes no rows.", look{})
		s.row++
	}
}

// mostLetters is how many letters of line numbers the ledger lists; the sheet of rows has them all.
const mostLetters = 1500

func lineList(lines []int) string {
	text := lineRanges(lines)
	if len(text) <= mostLetters {
		return text
	}
	cut := strings.LastIndex(text[:mostLetters], ",")
	return text[:cut] + ", and more: see the sheet of rows"
}

// mostCells is how many cells of rows a workbook holds at most, over all sources: a cell costs about 700 bytes of
// memory while the file is made, and as many are more than anyone looks at.
const mostCells = 1_500_000

// rowSheets lists the rows of each source as analysed: every value that entered, and what became of every row.
func (b *book) rowSheets() {
	left := mostCells
	for i, t := range b.data.Tables {
		left -= b.rowSheet(&b.results.Sources[i], t, left)
	}
}

// rowColumns are the columns before those of the file.
const rowColumns = 4

// rowSheet lists the rows of a source on at most so many cells and returns how many it took.
func (b *book) rowSheet(f *record.Source, t *source.Table, most int) int {
	widths := []float64{9, 14, 34, 18}
	for i := range t.Columns {
		widths = append(widths, columnWidth(&t.Columns[i]))
	}
	s := b.sheet("Rows "+f.Name, "the data of source "+f.Name+" as analysed, and what became of each row",
		len(widths) > 8, widths...)
	last := min(len(widths), 8)
	about := fmt.Sprintf("File %s, SHA-256 %s. Used by: the numbers that the statistics have on the sheet Estimates. "+
		"Numbers are the values that entered the analysis; a cell without a value is shown as it is written, in grey.",
		f.File, short(f.SHA256))
	listed := min(len(t.Rows), sheetRows-8, most/len(widths))
	if listed < len(t.Rows) {
		about += fmt.Sprintf(" Only the first %s of %s rows are listed, because a workbook cannot hold more; the analysis "+
			"used them all.", grouped(int64(listed)), grouped(int64(len(t.Rows))))
	}
	s.title("Rows of "+f.Name, about, last)
	at := s.row
	titles := []string{">Line", "State", "Reason", "Used by"}
	units := []string{"", "", "", ""}
	for i := range t.Columns {
		c := &t.Columns[i]
		title, unit := c.Name, c.Unit
		if c.Type == spec.TypeNumber {
			title, unit = ">"+title, ">"+unit
		}
		if c.Derived {
			unit += " (derived)"
		}
		titles, units = append(titles, title), append(units, unit)
	}
	for i, title := range titles {
		l := bookHead
		l.underBold = false
		title, l.right = strings.CutPrefix(title, ">")
		s.text(1+i, title, l)
	}
	s.row++
	for i, unit := range units {
		l := look{size: 9, colour: bookSoft, fill: bookBand, underBold: true, wrap: true, inset: true}
		unit, l.right = strings.CutPrefix(unit, ">")
		s.text(1+i, strings.TrimSpace(unit), l)
	}
	s.row++
	s.freeze(at, 1)
	fates := b.fates(t)
	for row := range listed {
		state, reason, users := fates.of(f, row)
		s.put(1, count(t.Rows[row].Line), look{middle: true})
		l := look{wrap: true, inset: true, middle: true}
		if state != "used" {
			l.colour = bookSoft
		}
		s.text(2, state, l)
		s.text(3, firstPiece(reason), l)
		s.text(4, firstPiece(users), l)
		for i := range t.Columns {
			s.value(rowColumns+1+i, &t.Columns[i], row, l)
		}
		s.row++
		if s.err != nil {
			break
		}
	}
	return listed * len(widths)
}

// value writes the cell of a column as it was analysed.
func (s *bookSheet) value(at int, c *source.Column, row int, l look) {
	if c.Type != spec.TypeNumber || c.Missing[row] {
		if c.Missing[row] {
			l.colour, l.right = bookSoft, c.Type == spec.TypeNumber
		}
		s.text(at, firstPiece(c.Texts[row]), l)
		return
	}
	l.right, l.wrap = true, false
	decimals := c.Decimals
	if !c.Derived {
		decimals = max(decimals, spec.Number{Text: strings.TrimSpace(c.Texts[row])}.Decimals())
	}
	if decimals >= 0 {
		l.format = unitFormat(c.Numbers[row], decimals, "")
		s.letters[at] = max(s.letters[at], len([]rune(fixedText(c.Numbers[row], decimals))))
	}
	s.number(at, c.Numbers[row], l)
}

// columnWidth looks at the first rows of a column.
func columnWidth(c *source.Column) float64 {
	letters := max(len([]rune(c.Name)), len([]rune(c.Unit)))
	for _, text := range c.Texts[:min(len(c.Texts), 500)] {
		letters = max(letters, len([]rune(text)))
	}
	if c.Derived {
		letters = max(letters, 9)
	}
	return float64(min(max(letters, 7), 40)) + 3
}

// fates knows what becomes of the rows of a table in each statistic.
type fates struct {
	numbers    []int // of the statistics on this table, from 1
	selections []*source.Selection
	table      *source.Table
}

func (b *book) fates(t *source.Table) *fates {
	out := &fates{table: t}
	for i, selection := range b.data.Selections {
		if selection.Table == t {
			out.numbers, out.selections = append(out.numbers, i+1), append(out.selections, selection)
		}
	}
	return out
}

// of returns what becomes of a row, why, and which statistics use it.
func (f *fates) of(src *record.Source, row int) (state, reason, users string) {
	if rule := f.table.Rows[row].Excluded; rule >= 0 {
		e := src.Exclusions[rule]
		return "excluded", fmt.Sprintf("%s (by %s)", e.Because, e.By), ""
	}
	var used []int
	lacking := map[string][]int{}
	var lacks []string
	for i, s := range f.selections {
		switch s.States[row] {
		case source.Used:
			used = append(used, f.numbers[i])
		case source.Missing:
			c := s.Lacks[row]
			if lacking[c] == nil {
				lacks = append(lacks, c)
			}
			lacking[c] = append(lacking[c], f.numbers[i])
		}
	}
	var reasons []string
	for _, c := range lacks {
		reasons = append(reasons, fmt.Sprintf("%s has no value, so not in %s", c, numberList(lacking[c])))
	}
	reason = strings.Join(reasons, "; ")
	switch {
	case len(used) > 0:
		return "used", reason, numberList(used)
	case len(lacks) > 0:
		return "missing", reason, ""
	}
	return "not selected", "no statistic selects it", ""
}

// numberList writes ascending numbers, joining neighbours.
func numberList(numbers []int) string {
	if len(numbers) == 1 {
		return strconv.Itoa(numbers[0])
	}
	return lineRanges(numbers)
}
