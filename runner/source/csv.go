package source

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"
	"unicode/utf8"

	"lotproof/spec"
)

// separated reads a text file of separated values into b: RFC 4180 with the given separator, UTF-8, headings in the
// first line, line ends LF or CR LF.
//
// A line without any text is blank, also if it holds separators. Blank lines at the end are no rows; one before that is
// a mistake, unless the table has one column only, where it is a row without a value.
func separated(data []byte, separator rune, b *builder) {
	data = bytes.TrimPrefix(data, byteOrderMark)
	if e := checkText(data); e != nil {
		b.bad.add(*e)
		return
	}
	f := &separatedFile{data: data, builder: b, next: 1, csv: csv.NewReader(bytes.NewReader(data))}
	f.csv.Comma = separator
	f.csv.FieldsPerRecord = -1
	f.csv.ReuseRecord = true
	b.at, b.unit = f.at, "line"
	if f.headings() {
		f.rows()
	}
}

// A separatedFile is a file of separated values that is being read.
type separatedFile struct {
	data    []byte
	builder *builder
	csv     *csv.Reader

	start int    // where in data the current record starts; blank lines before it count as part of it
	end   int    // where it ends
	line  int    // line where its first field starts
	next  int    // first line after it
	blank []span // blank lines since the last row
}

// A span is some lines in a row, the last one included.
type span struct{ first, last int }

// read reads the next record. If there is none, it returns nil, after reporting the mistake if that is the reason.
func (f *separatedFile) read() []string {
	cells, err := f.csv.Read()
	f.start, f.end = f.end, int(f.csv.InputOffset())
	if err != nil {
		if !errors.Is(err, io.EOF) {
			f.builder.bad.add(f.broken(err))
		}
		return nil
	}
	first := f.next
	f.line, _ = f.csv.FieldPos(0)
	f.next += bytes.Count(f.data[f.start:f.end], []byte("\n"))
	if f.line > first { // the library steps over empty lines
		f.blank = append(f.blank, span{first, f.line - 1})
	}
	return cells
}

// at returns the place of a cell of the current record.
func (f *separatedFile) at(cell int) spec.Error {
	line, column := f.csv.FieldPos(cell)
	return f.place(line, column)
}

// place returns line and column, from 1, where column is given in bytes; the line belongs to the current record.
func (f *separatedFile) place(line, column int) spec.Error {
	rest := f.data[f.start:]
	for skip := line - (bytes.Count(f.data[:f.start], []byte("\n")) + 1); skip > 0; skip-- {
		rest = rest[bytes.IndexByte(rest, '\n')+1:]
	}
	column = min(column-1, len(rest))
	return spec.Error{Line: line, Column: utf8.RuneCount(rest[:column]) + 1}
}

// broken words what is wrong with the quotes of the current record.
func (f *separatedFile) broken(err error) spec.Error {
	var parse *csv.ParseError
	if !errors.As(err, &parse) {
		return spec.Error{Problem: err.Error()} // reading from memory has no other errors
	}
	if errors.Is(parse.Err, csv.ErrBareQuote) {
		e := f.place(parse.Line, parse.Column)
		e.Problem = `a quotation mark stands inside a cell that does not begin with one`
		e.Fix = `write the cell between quotation marks, without blanks before them, and double the mark inside it`
		return e
	}
	if f.end == len(f.data) && bytes.Count(f.data[f.start:], []byte(`"`))%2 == 1 {
		return spec.Error{Line: parse.StartLine, Column: 1,
			Problem: "a cell of the row that starts here begins with a quotation mark that is never closed",
			Fix:     `close the cell with a quotation mark, and double the marks inside it`}
	}
	e := f.place(parse.Line, parse.Column)
	e.Problem = "text follows the quotation mark that closes the cell"
	e.Fix = "end the cell at the mark, or double the mark if it belongs to the text"
	return e
}

// headings reads the first record. It returns false if there is no point in reading on.
func (f *separatedFile) headings() bool {
	cells := f.read()
	for cells != nil && blank(cells) {
		cells = f.read()
	}
	if cells == nil {
		if len(f.builder.bad.list) == 0 {
			f.builder.bad.add(spec.Error{Problem: "the file is empty",
				Fix: "write headings in the first line and one row a line"})
		}
		return false
	}
	if f.line > 1 {
		f.builder.bad.add(spec.Error{Line: 1, Column: 1, Problem: "the file begins with a blank line",
			Fix: "write the headings in the first line"})
		f.blank = nil
	}
	if e, wrong := f.otherSeparator(cells); wrong {
		f.builder.bad.add(e)
		return false
	}
	return f.builder.headings(cells)
}

// otherSeparator recognises a file with another separator: one heading only, which would give a declared column if it
// were cut there.
func (f *separatedFile) otherSeparator(cells []string) (spec.Error, bool) {
	if len(cells) != 1 || f.builder.declares(strings.TrimSpace(cells[0])) {
		return spec.Error{}, false
	}
	for _, other := range []struct{ mark, name, fix string }{
		{";", "semicolons", "semicolons and decimal commas are not available in this version: save the file with " +
			"commas " +
			"between cells and decimal points"},
		{"\t", "tabs", "give the file the name ending .tsv"},
		{",", "commas", "give the file the name ending .csv"},
		{"|", "upright bars", "save the file with commas between cells"},
	} {
		for heading := range strings.SplitSeq(cells[0], other.mark) {
			if heading != cells[0] && f.builder.declares(strings.TrimSpace(strings.Trim(heading, `"`))) {
				e := f.at(0)
				e.Problem = fmt.Sprintf("the cells are separated by %s", other.name)
				e.Fix = other.fix
				return e, true
			}
		}
	}
	return spec.Error{}, false
}

func (f *separatedFile) rows() {
	b := f.builder
	b.grow(min(bytes.Count(f.data, []byte("\n")), len(f.data)/b.width)) // a row has a byte a cell, or more
	for {
		cells := f.read()
		if cells == nil {
			break
		}
		if f.empty(cells) {
			f.blank = append(f.blank, span{f.line, f.next - 1})
			continue
		}
		f.flush()
		if len(cells) != b.width {
			b.wrongWidth(len(cells), spec.Error{Line: f.line, Column: 1})
			continue
		}
		if !b.row(f.line, cells) {
			return
		}
	}
	b.finish()
}

// empty says whether the current record is a blank line. In a table of one column, "" between quotation marks is a row.
func (f *separatedFile) empty(cells []string) bool {
	return blank(cells) && (len(cells) > 1 || f.builder.width > 1 || bytes.IndexByte(f.data[f.start:f.end], '"') < 0)
}

// blank says whether no cell holds text.
func blank(cells []string) bool {
	return !slices.ContainsFunc(cells, func(cell string) bool { return strings.TrimSpace(cell) != "" })
}

// flush settles the blank lines before a row.
func (f *separatedFile) flush() {
	for _, lines := range f.blank {
		if f.builder.width == 1 {
			for line := lines.first; line <= lines.last; line++ {
				f.builder.blankRow(line)
			}
			continue
		}
		f.builder.blankLines(spec.Error{Line: lines.first, Column: 1}, lines)
	}
	f.blank = f.blank[:0]
}
