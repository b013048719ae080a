package source

import (
	"bytes"
	"encoding/xml"
	"errors"
	"io"
	"strconv"
	"strings"
)

// A kind is what a sheet stores of a cell beside the value that is shown (ECMA-376 part 1, 18.3.1.4).
type kind struct {
	kind    string // attribute t: "" and n number, s shared text, str and inlineStr text, b, e error, d date
	style   int
	stored  string // the element v
	formula bool
	valued  bool // whether there is an element v or is
}

// unstored says whether the cell holds a formula that was never computed.
func (k kind) unstored() bool { return k.formula && !k.valued }

// A scanner reads the part of one sheet. Rows and cells must stand in ascending order, as every program writes them.
type scanner struct {
	xml    *xml.Decoder
	next   int // number of the row whose start was read last; its cells were not
	last   int // number of the row before
	done   bool
	merged []string // areas
	cells  []kind   // of the current row
}

func newScanner(part []byte) *scanner {
	return &scanner{xml: xml.NewDecoder(bytes.NewReader(part))}
}

// row returns the cells of row number n from its first column on. Rows must be asked for in ascending order; a row that
// the part leaves out has no cells.
func (s *scanner) row(n int) ([]kind, error) {
	s.cells = s.cells[:0]
	for s.next == 0 && !s.done {
		if err := s.advance(); err != nil {
			return nil, err
		}
	}
	if s.done || s.next > n {
		return s.cells, nil
	}
	if s.next < n {
		return nil, errDamaged
	}
	s.last, s.next = s.next, 0
	return s.cells, s.readCells()
}

// advance reads on to the start of the next row, or to the end of the part.
func (s *scanner) advance() error {
	for {
		token, err := s.xml.Token()
		if errors.Is(err, io.EOF) {
			s.done = true
			return nil
		}
		if err != nil {
			return errDamaged
		}
		start, is := token.(xml.StartElement)
		if !is {
			continue
		}
		switch start.Name.Local {
		case "row":
			s.next = s.last + 1
			if r := attribute(start, "r"); r != "" {
				number, err := strconv.Atoi(r)
				if err != nil || number <= s.last {
					return errDamaged
				}
				s.next = number
			}
			return nil
		case "mergeCell":
			s.merged = append(s.merged, attribute(start, "ref"))
		}
	}
}

// readCells reads the cells of the row that has started.
func (s *scanner) readCells() error {
	for {
		token, err := s.xml.Token()
		if err != nil {
			return errDamaged
		}
		switch element := token.(type) {
		case xml.EndElement:
			return nil
		case xml.StartElement:
			if element.Name.Local != "c" {
				if s.xml.Skip() != nil {
					return errDamaged
				}
				continue
			}
			if err := s.readCell(element); err != nil {
				return err
			}
		}
	}
}

func (s *scanner) readCell(start xml.StartElement) error {
	column := len(s.cells) + 1
	if r := attribute(start, "r"); r != "" {
		at, row := address(r)
		if row != s.last || at < column {
			return errDamaged
		}
		column = at
	}
	if column > mostColumns {
		return errDamaged
	}
	for len(s.cells) < column-1 {
		s.cells = append(s.cells, kind{})
	}
	k := kind{kind: attribute(start, "t")}
	if style := attribute(start, "s"); style != "" {
		number, err := strconv.Atoi(style)
		if err != nil {
			return errDamaged
		}
		k.style = number
	}
	for {
		token, err := s.xml.Token()
		if err != nil {
			return errDamaged
		}
		switch element := token.(type) {
		case xml.EndElement:
			s.cells = append(s.cells, k)
			return nil
		case xml.StartElement:
			switch element.Name.Local {
			case "v":
				k.valued = true
				err = s.xml.DecodeElement(&k.stored, &element)
			case "is":
				k.valued = true
				err = s.xml.Skip()
			case "f":
				k.formula = true
				err = s.xml.Skip()
			default:
				err = s.xml.Skip()
			}
			if err != nil {
				return errDamaged
			}
		}
	}
}

// end reads the part to its end, where the merged cells stand. Another row there is damage: the library saw none.
func (s *scanner) end() error {
	for !s.done {
		if s.next != 0 {
			return errDamaged
		}
		if err := s.advance(); err != nil {
			return err
		}
	}
	return nil
}

// mostColumns is how many columns a sheet can have.
const mostColumns = 16384

// address returns column and row of an address such as D41, both from 1; zeros if it is none.
func address(text string) (column, row int) {
	i := 0
	for ; i < len(text) && i < 3 && 'A' <= text[i] && text[i] <= 'Z'; i++ {
		column = column*26 + int(text[i]-'A') + 1
	}
	row, err := strconv.Atoi(text[i:])
	if err != nil || i == 0 || row < 1 || text[i] == '+' {
		return 0, 0
	}
	return column, row
}

func attribute(start xml.StartElement, name string) string {
	for _, a := range start.Attr {
		if a.Name.Local == name && a.Name.Space == "" {
			return a.Value
		}
	}
	return ""
}

// countElements counts the elements of that name in a part, up to its end or first fault.
func countElements(part []byte, name string) int {
	n := 0
	for x := xml.NewDecoder(bytes.NewReader(part)); ; {
		token, err := x.Token()
		if err != nil {
			return n
		}
		if start, is := token.(xml.StartElement); is && start.Name.Local == name {
			n++
		}
	}
}

// dateFormatID says whether a number format that needs no code shows dates or times: ECMA-376 part 1, 18.8.30, with the
// formats of East Asian languages.
func dateFormatID(id int) bool {
	return 14 <= id && id <= 22 || 27 <= id && id <= 36 || 45 <= id && id <= 47 || 50 <= id && id <= 58
}

// dateFormat says whether a format code shows dates or times: whether one of the letters y m d h s stands in it outside
// quoted text, escapes and brackets, or in the brackets of elapsed time.
func dateFormat(code string) bool {
	for i := 0; i < len(code); i++ {
		switch c := code[i]; c {
		case '"':
			end := strings.IndexByte(code[i+1:], '"')
			if end < 0 {
				return false
			}
			i += end + 1
		case '\\', '_', '*':
			i++
		case '[':
			end := strings.IndexByte(code[i:], ']')
			if end < 0 {
				return false
			}
			if inside := strings.ToLower(code[i+1 : i+end]); inside != "" && strings.Trim(inside, inside[:1]) == "" &&
				strings.Contains("hms", inside[:1]) {
				return true
			}
			i += end
		default:
			if strings.IndexByte("ymdhsYMDHS", c) >= 0 {
				return true
			}
		}
	}
	return false
}
