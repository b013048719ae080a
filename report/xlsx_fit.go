package report

import (
	"regexp"
	"strconv"
	"strings"
	"unicode/utf16"
)

// Text is made fit here for the places of a workbook: cells, sheet names, heads and feet.

var unfit = strings.NewReplacer(":", " ", `\`, " ", "/", " ", "?", " ", "*", " ", "[", "(", "]", ")")

// sheetName makes a name fit: at most 31 UTF-16 units, no forbidden sign, no apostrophe at either end, unique.
func (b *book) sheetName(name string) string {
	base := strings.Trim(strings.TrimSpace(unfit.Replace(clean(name))), "'")
	if base == "" || strings.EqualFold(base, "history") { // one name is reserved
		base = strings.TrimSpace(base + " sheet")
	}
	for n := 1; ; n++ {
		suffix := ""
		if n > 1 {
			suffix = " " + strconv.Itoa(n)
		}
		full := strings.TrimRight(cutUnits(base, 31-len(suffix)), "' ") + suffix
		if key := strings.ToLower(full); !b.taken[key] {
			b.taken[key] = true
			return full
		}
	}
}

// cutUnits cuts text to a number of UTF-16 units, between characters.
func cutUnits(text string, units int) string {
	n := 0
	for i, r := range text {
		n += max(utf16.RuneLen(r), 1)
		if n > units {
			return text[:i]
		}
	}
	return text
}

// cellPieces cuts text into pieces that a cell can hold, with some room for what escaped adds.
func cellPieces(text string) []string {
	var out []string
	for {
		piece := cutUnits(text, cellLetters-767)
		out = append(out, piece)
		if text = text[len(piece):]; text == "" {
			return out
		}
	}
}

// firstPiece is what a cell holds of a text: cut rather than continued, so that one row stays one row.
func firstPiece(text string) string {
	if pieces := cellPieces(text); len(pieces) > 1 {
		return pieces[0] + "…"
	}
	return text
}

// footText makes text fit for a head or foot, in which & begins a command; a head holds 255 characters in all.
func footText(text string) string {
	return strings.ReplaceAll(cutUnits(clean(text), 90), "&", "&&")
}

// fitted cuts a text that a cell cannot hold.
func fitted(text string) string {
	const note = " … (cut; the whole text is in the record and the plan)"
	if cutUnits(text, cellLetters) == text {
		return text
	}
	return cutUnits(text, cellLetters-len(note)) + note
}

// clean replaces what the file format cannot hold, and blanks that some viewers show as boxes.
func clean(text string) string {
	return strings.Map(func(r rune) rune {
		switch {
		case r == '\u00a0' || r == '\u202f':
			return ' '
		case r == '\t' || r == '\n':
			return r
		case r < ' ' || r == '\ufffe' || r == '\uffff':
			return '\ufffd'
		}
		return r
	}, strings.ReplaceAll(strings.ToValidUTF8(text, "\ufffd"), "\r\n", "\n"))
}

var escapeLike = regexp.MustCompile(`_(x[0-9A-Fa-f]{4}_)`)

// escaped protects text that a reader of the format would take for an escaped character, such as _x0041_.
func escaped(text string) string { return escapeLike.ReplaceAllString(text, "_x005F_$1") }
