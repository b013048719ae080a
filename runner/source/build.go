package source

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"
	"unicode"

	"golang.org/x/text/unicode/norm"

	"lotproof/spec"
)

// mostRows bounds the memory that one table may take.
const mostRows = 10_000_000

// A builder makes a table from the cells of a file, whatever its format, and reports what is wrong with them.
//
// Blanks round a heading or a cell are not part of it. A cell that is empty, or one of Source.Missing, holds no value.
// Two spellings of one category, which differ only in blanks, letter case or the coding of a character, are a mistake:
// they would be two levels unseen.
type builder struct {
	plan  *spec.Plan
	table *Table
	bad   *mistakes
	at    func(cell int) spec.Error // the place of a cell of the current row
	unit  string                    // what Row.Line counts: "line" or "row"
	width int                       // number of headings
	most  int                       // most rows; 0: mostRows

	columns   []int       // for each heading, its index in table.Columns, or −1
	declared  []int       // for each of table.Columns, its index in Source.Columns
	spellings []spellings // one for each of table.Columns
	planBad   spec.Errors // mistakes in what the plan says of the file, located in the plan
	stopped   bool        // reading ended before the end of the file
}

// spellings holds the different cells of a category column, or of a text column that makes resampling units; it is empty
// for other columns.
type spellings struct {
	text   map[string]string   // cell as in the file → level
	folded map[string]spelling // by the folded text, the first cell that folds so
}

type spelling struct {
	raw  string // the cell as in the file
	line int
}

func (b *builder) source() *spec.Source { return &b.table.Source }

func (b *builder) declares(name string) bool {
	return slices.ContainsFunc(b.source().Columns, func(c spec.Column) bool { return c.Name == name })
}

// unitOf says whether a statistic draws by the column: then a text, too, must be written in one way.
func (b *builder) unitOf(name string) bool {
	return slices.ContainsFunc(b.plan.Statistics, func(s spec.Statistic) bool {
		return s.Source == b.source().Name && slices.Contains(s.Resampling.Unit, name)
	})
}

// headings takes the first row of a file. It returns false if no declared column was found.
func (b *builder) headings(cells []string) bool {
	b.width = len(cells)
	b.columns = make([]int, len(cells))
	found := make([]string, len(cells))
	first := map[string]int{}
	for i, cell := range cells {
		name := strings.TrimSpace(cell)
		found[i] = name
		b.columns[i] = -1
		if name == "" {
			e := b.at(i)
			e.Problem = fmt.Sprintf("column %d has no heading", i+1)
			e.Fix = "give each column a heading, or take the column out"
			b.bad.add(e)
			continue
		}
		if earlier, twice := first[name]; twice {
			e := b.at(i)
			e.Problem = fmt.Sprintf("heading %s stands over columns %d and %d", quote(name), earlier+1, i+1)
			e.Fix = "give each column its own heading"
			b.bad.add(e)
			continue
		}
		first[name] = i
		at := slices.IndexFunc(b.source().Columns, func(c spec.Column) bool { return c.Name == name })
		if at < 0 {
			b.table.Ignored = append(b.table.Ignored, name)
			continue
		}
		declared := b.source().Columns[at]
		b.columns[i] = len(b.table.Columns)
		b.declared = append(b.declared, at)
		b.table.Columns = append(b.table.Columns,
			Column{Name: name, Type: declared.Type, Unit: declared.Unit, Decimals: declared.Decimals})
		var seen spellings
		if declared.Type == spec.TypeCategory || b.unitOf(name) {
			seen = spellings{map[string]string{}, map[string]spelling{}}
		}
		b.spellings = append(b.spellings, seen)
	}
	for _, declared := range b.source().Columns {
		if _, there := first[declared.Name]; !there {
			b.planBad = append(b.planBad, b.plan.Mistake("sources."+b.source().Name+".columns."+declared.Name,
				fmt.Sprintf("%s has no column %s", b.source().File, quote(declared.Name)),
				suggestion(declared.Name, found, "headings there")))
		}
	}
	return len(b.table.Columns) > 0
}

// grow makes room for about n rows.
func (b *builder) grow(n int) {
	n = min(n, mostRows)
	b.table.Rows = slices.Grow(b.table.Rows, n)
	for i := range b.table.Columns {
		b.table.Columns[i].grow(n)
	}
}

func (c *Column) grow(n int) {
	c.Texts = slices.Grow(c.Texts, n)
	c.Missing = slices.Grow(c.Missing, n)
	if c.Type == spec.TypeNumber {
		c.Numbers = slices.Grow(c.Numbers, n)
	}
}

// row takes one data row of the right width. It returns false if the table is full.
func (b *builder) row(line int, cells []string) bool {
	if !b.room() {
		return false
	}
	b.table.Rows = append(b.table.Rows, Row{Line: line, Excluded: -1})
	for i, cell := range cells {
		at := b.columns[i]
		if at < 0 {
			continue
		}
		c := &b.table.Columns[at]
		text := strings.TrimSpace(cell)
		if text == "" || slices.Contains(b.source().Missing, text) {
			c.missing(text)
			continue
		}
		switch c.Type {
		case spec.TypeNumber:
			value, problem, fix := number(text)
			if problem != "" {
				b.wrong(i, c, problem, fix)
			}
			c.Numbers = append(c.Numbers, value)
		default:
			if b.spellings[at].text != nil {
				text = b.level(i, line, c, at, cell, text)
			}
		}
		c.Texts = append(c.Texts, text)
		c.Missing = append(c.Missing, false)
	}
	return true
}

// blankRow takes a row without any text.
func (b *builder) blankRow(line int) {
	if !b.room() {
		return
	}
	b.table.Rows = append(b.table.Rows, Row{Line: line, Excluded: -1})
	for i := range b.table.Columns {
		b.table.Columns[i].missing("")
	}
}

func (b *builder) room() bool {
	most := cmp.Or(b.most, mostRows)
	if len(b.table.Rows) < most {
		return true
	}
	if !b.stopped {
		b.stopped = true
		b.bad.add(spec.Error{Problem: fmt.Sprintf("the file has more than %d rows", most), Fix: "divide the study"})
	}
	return false
}

// missing appends a cell without a value; text is what stands in the file instead.
func (c *Column) missing(text string) {
	if c.Type == spec.TypeNumber {
		c.Numbers = append(c.Numbers, math.NaN())
	}
	c.Texts = append(c.Texts, text)
	c.Missing = append(c.Missing, true)
}

// wrong reports a mistake in a cell of the current row.
func (b *builder) wrong(cell int, c *Column, problem, fix string) {
	if b.bad.full() {
		b.bad.more++
		return
	}
	e := b.at(cell)
	e.Problem = fmt.Sprintf("column %s: %s", c.Name, problem)
	e.Fix = fix
	b.bad.add(e)
}

// level returns the level of a category cell: one string for all cells that are written alike. text is the cell
// without the blanks round it.
func (b *builder) level(cell, line int, c *Column, at int, raw, text string) string {
	seen := &b.spellings[at]
	if level, known := seen.text[raw]; known {
		if level == "" { // a text that the plan does not list; each such cell is reported
			b.notLevel(cell, c, at, text)
		}
		return level
	}
	raw, text = strings.Clone(raw), strings.Clone(text) // not to keep the whole line in memory
	if levels := b.source().Columns[b.declared[at]].Levels; len(levels) > 0 && !slices.Contains(levels, text) {
		seen.text[raw] = ""
		b.notLevel(cell, c, at, text)
		return ""
	}
	seen.text[raw] = text
	key := fold(text)
	if first, twice := seen.folded[key]; twice {
		b.wrong(cell, c, fmt.Sprintf("levels %s (%s %d) and %s differ only in %s", quote(first.raw), b.unit, first.line,
			quote(raw), difference(first.raw, raw)), "write them alike")
	} else {
		seen.folded[key] = spelling{raw, line}
	}
	return text
}

// fold brings together the spellings that a reader cannot tell apart, or takes for the same.
func fold(text string) string {
	visible := strings.Map(func(r rune) rune {
		if unicode.Is(unicode.Cf, r) { // such as a blank of no width
			return -1
		}
		return r
	}, norm.NFKC.String(text))
	return strings.ToLower(strings.Join(strings.Fields(visible), " "))
}

func (b *builder) notLevel(cell int, c *Column, at int, text string) {
	if b.bad.full() {
		b.bad.more++
		return
	}
	levels := b.source().Columns[b.declared[at]].Levels
	b.wrong(cell, c, quote(text)+" is not one of the levels in the plan", suggestion(text, levels, "levels"))
}

// difference says in what two spellings of a level differ.
func difference(a, b string) string {
	switch {
	case strings.TrimSpace(a) == strings.TrimSpace(b):
		return "the blanks round them"
	case strings.EqualFold(strings.TrimSpace(a), strings.TrimSpace(b)):
		return "letter case"
	case strings.Join(strings.Fields(a), " ") == strings.Join(strings.Fields(b), " "):
		return "the number of blanks"
	}
	return "letter case, blanks, invisible characters or the coding of a character"
}

// wrongWidth reports a row with too many or too few cells, at e.
func (b *builder) wrongWidth(cells int, e spec.Error) {
	e.Problem = fmt.Sprintf("the row has %s, the headings are %d", count(cells, "cell"), b.width)
	e.Fix = "write every cell, also the empty ones"
	if cells > b.width {
		e.Fix = "write decimals with a point, and a cell that holds the separator between quotation marks"
	}
	b.bad.add(e)
}

// blankLines reports lines without any text, at e.
func (b *builder) blankLines(e spec.Error, s span) {
	e.Problem = fmt.Sprintf("%s %d is blank", b.unit, s.first)
	e.Fix = "take it out"
	if s.last > s.first {
		e.Problem = fmt.Sprintf("%ss %d to %d are blank", b.unit, s.first, s.last)
		e.Fix = "take them out"
	}
	b.bad.add(e)
}

// finish ends a file that was read to its end.
func (b *builder) finish() {
	if len(b.table.Rows) == 0 && len(b.bad.list) == 0 {
		b.bad.add(spec.Error{Problem: "the file has headings and no data rows",
			Fix: "write one row a line below the headings"})
	}
}

// count writes a number with its noun.
func count(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}
