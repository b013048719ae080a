package source

import (
	"bytes"
	"fmt"
	"unicode/utf8"

	"lotproof/spec"
)

// byteOrderMark may stand before UTF-8 text; it is no part of the first heading.
var byteOrderMark = []byte("\xef\xbb\xbf")

// checkText returns the first mistake that keeps data from being read as lines of UTF-8 text, or nil. data is without
// the byte order mark.
func checkText(data []byte) *spec.Error {
	const utf8Fix = "save the file as CSV with the encoding UTF-8"
	switch {
	case bytes.HasPrefix(data, []byte("\xff\xfe")), bytes.HasPrefix(data, []byte("\xfe\xff")),
		bytes.HasPrefix(data, []byte("\x00\x00\xfe\xff")):
		return &spec.Error{Line: 1, Column: 1, Problem: "the file is not UTF-8 but UTF-16 or UTF-32 text", Fix: utf8Fix}
	case bytes.HasPrefix(data, []byte("PK\x03\x04")):
		return &spec.Error{Line: 1, Column: 1, Problem: "the file is not text but a workbook or another archive",
			Fix: "if it is a workbook, give it the name ending .xlsx"}
	case bytes.HasPrefix(data, []byte("\xd0\xcf\x11\xe0")):
		return &spec.Error{Line: 1, Column: 1, Problem: "the file is not text but an old or protected " +
			"workbook", Fix: utf8Fix}
	}
	at := len(data)
	var problem, fix string
	if i := bytes.IndexByte(data, 0); i >= 0 {
		at, problem, fix = i, "a zero byte stands in the text", utf8Fix+"; text of another encoding may be the reason"
	}
	if i := loneReturn(data[:at]); i >= 0 {
		at, problem = i, "a carriage return stands without a line feed"
		fix = "save the file with the line ends of Windows (CR LF) or of Unix (LF)"
	}
	if i := notUTF8(data[:at]); i >= 0 {
		at, problem, fix = i, fmt.Sprintf("the byte %02X is not UTF-8 text", data[i]), utf8Fix
	}
	if problem == "" {
		return nil
	}
	line, column := position(data, at)
	return &spec.Error{Line: line, Column: column, Problem: problem, Fix: fix}
}

// loneReturn returns the place of the first CR that no LF follows, or −1.
func loneReturn(data []byte) int {
	for from := 0; ; {
		i := bytes.IndexByte(data[from:], '\r')
		if i < 0 {
			return -1
		}
		i += from
		if i+1 == len(data) || data[i+1] != '\n' {
			return i
		}
		from = i + 2
	}
}

// notUTF8 returns the place of the first byte that does not belong to a character, or −1.
func notUTF8(data []byte) int {
	if utf8.Valid(data) {
		return -1
	}
	for i := 0; i < len(data); {
		r, size := utf8.DecodeRune(data[i:])
		if r == utf8.RuneError && size == 1 {
			return i
		}
		i += size
	}
	return -1
}

// position returns line and column of the byte at offset, both from 1, the column in characters.
func position(data []byte, offset int) (line, column int) {
	before := data[:offset]
	return bytes.Count(before, []byte("\n")) + 1, utf8.RuneCount(before[bytes.LastIndexByte(before, '\n')+1:]) + 1
}
