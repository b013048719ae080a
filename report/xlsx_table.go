package report

import (
	"math"
	"strconv"
	"strings"
)

// The looks of the workbook.
var (
	bookTitle   = look{size: 16, bold: true}
	bookBrand   = look{size: 9, bold: true, colour: bookAccent}
	bookHeading = look{size: 12, bold: true, colour: bookAccent}
	bookText    = look{wrap: true}
	bookQuiet   = look{size: 9, colour: bookSoft, wrap: true}
	bookName    = look{colour: bookSoft}
	bookHead    = look{bold: true, fill: bookBand, wrap: true, underBold: true, middle: true, inset: true}
	bookBody    = look{wrap: true, under: true, inset: true, middle: true}
)

// A bookItem is one entry of a table: text or a number, and how it differs from the look of the table.
type bookItem struct {
	text    string
	number  *float64
	format  string // of the number
	letters int    // how many the number has as shown
	bold    bool
	soft    bool
	code    bool
	right   bool
}

func say(text string) bookItem      { return bookItem{text: text} }
func sayCode(text string) bookItem  { return bookItem{text: text, code: true} }
func quietly(text string) bookItem  { return bookItem{text: text, soft: true} }
func strongly(text string) bookItem { return bookItem{text: text, bold: true} }

// count is a whole number.
func count(n int) bookItem {
	v := float64(n)
	return bookItem{number: &v, format: "#,##0", letters: len([]rune(grouped(int64(n))))}
}

// measured is a figure with its unit, shown with a number of decimals and stored with all digits; nil says what
// otherwise says.
func measured(v *float64, decimals int, unit, otherwise string) bookItem {
	if v == nil {
		return bookItem{text: otherwise, soft: true, right: true}
	}
	return bookItem{number: v, format: unitFormat(*v, decimals, unit),
		letters: len([]rune(withUnit(fixedText(*v, decimals), unit)))}
}

// percentage is a share from 0 to 1 shown in percent.
func percentage(v *float64, decimals int) bookItem {
	if v == nil {
		return bookItem{text: notAsked, soft: true, right: true}
	}
	return bookItem{number: v, format: decimalFormat(decimals) + " %", letters: decimals + 6}
}

// confidenceItem is a confidence as the plan writes it, as a share shown in percent.
func confidenceItem(level string) bookItem {
	v, err := strconv.ParseFloat(level, 64)
	if err != nil {
		return say(level)
	}
	_, fraction, _ := strings.Cut(strings.TrimRight(level, "0"), ".")
	return percentage(&v, max(0, len(fraction)-2))
}

// unitFormat is the number format that shows v with a number of decimals and its unit.
func unitFormat(v float64, decimals int, unit string) string {
	format := decimalFormat(decimals)
	if math.Abs(v) >= 1e15 || decimals > 15 {
		format = decimalFormat(min(max(exponent(v, judgedDigits)+decimals, 0), judgedDigits-1)) + "E+00"
	}
	if unit == "" || longUnit(unit) {
		return format
	}
	return format + literal(" "+unit)
}

// longUnit says that a unit stands in words elsewhere: a number format holds 255 characters, and columns are narrow.
func longUnit(unit string) bool { return len([]rune(unit)) > 24 }

// literal is text inside a number format.
func literal(text string) string {
	return `"` + strings.ReplaceAll(clean(text), `"`, `"\""`) + `"`
}

func decimalFormat(decimals int) string {
	if decimals <= 0 {
		return "0"
	}
	return "0." + strings.Repeat("0", min(decimals, 30))
}

// put writes an item into the current row.
func (s *bookSheet) put(column int, item bookItem, l look) {
	l.bold = l.bold || item.bold
	if item.soft {
		l.colour = bookSoft
	}
	if item.code {
		l.code, l.size = true, 9
	}
	l.right = l.right || item.right
	if item.number != nil {
		l.format, l.right, l.wrap = item.format, true, false
		if s.letters[column] < item.letters {
			s.letters[column] = item.letters
		}
		s.number(column, *item.number, l)
		return
	}
	s.text(column, item.text, l)
}

// heads writes the headings of a table; those that begin with > stand on the right, over numbers.
func (s *bookSheet) heads(first int, titles ...string) {
	for i, t := range titles {
		l := bookHead
		t, l.right = strings.CutPrefix(t, ">")
		s.text(first+i, t, l)
	}
	s.row++
}

// line writes one row of a table. Text longer than a cell holds goes on in further rows.
func (s *bookSheet) line(first int, items ...bookItem) {
	more := false
	rest := make([]bookItem, len(items))
	for i, item := range items {
		if pieces := cellPieces(item.text); len(pieces) > 1 {
			rest[i], more = item, true
			item.text, rest[i].text = pieces[0], strings.Join(pieces[1:], "")
		}
		s.put(first+i, item, bookBody)
	}
	s.row++
	if more {
		s.line(first, rest...)
	}
}

// title begins a sheet with its name and one sentence, and leaves a blank row.
func (s *bookSheet) title(text, about string, last int) {
	s.wide(1, last, text, look{size: 14, bold: true})
	s.row++
	if about != "" {
		s.wide(1, last, about, bookQuiet)
		s.row++
	}
	s.row++
}

// heading begins a part of a sheet.
func (s *bookSheet) heading(text string) {
	s.row++
	s.text(1, text, bookHeading)
	s.row++
}
