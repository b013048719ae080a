package report

import "strings"

// Viewers fit the height of a row to wrapped text only while it is edited, so the workbook states it. The widths of the
// signs are those of Helvetica, which Arial and its free likes share (Adobe Core 14 font metrics).

// helvetica holds the widths of the signs from the blank to the tilde, in thousandths of the size.
var helvetica = [...]float64{278, 278, 355, 556, 556, 889, 667, 191, 333, 333, 389, 584, 278, 333, 278, 278,
	556, 556, 556, 556, 556, 556, 556, 556, 556, 556, 278, 278, 584, 584, 584, 556,
	1015, 667, 667, 722, 722, 667, 611, 778, 722, 278, 500, 667, 556, 833, 722, 778,
	667, 778, 722, 667, 611, 722, 667, 944, 667, 667, 611, 278, 278, 278, 469, 556,
	333, 556, 556, 500, 556, 556, 278, 556, 556, 222, 222, 500, 222, 833, 556, 556,
	556, 556, 333, 500, 278, 556, 500, 722, 500, 500, 500, 334, 260, 334, 584}

// textWidth returns the width of one line in points.
func textWidth(text string, l look) float64 {
	width := 0.0
	for _, r := range text {
		switch {
		case l.code:
			width += 602
		case r >= ' ' && r <= '~':
			width += helvetica[r-' ']
		case r < 0x1100:
			width += 640
		default:
			width += 1000
		}
	}
	if l.bold && !l.code {
		width *= 1.07
	}
	return width / 1000 * l.points()
}

func (l look) points() float64 {
	if l.size == 0 {
		return 10
	}
	return l.size
}

// lineCount returns how many lines text takes in a width in points, broken between words, and within words that are too
// long.
func lineCount(text string, l look, room float64) int {
	lines := 0
	blank := textWidth(" ", l)
	for paragraph := range strings.SplitSeq(text, "\n") {
		lines++
		at := 0.0
		for i, word := range strings.Split(paragraph, " ") {
			w := textWidth(word, l)
			if i > 0 {
				if at+blank+w <= room {
					at += blank + w
					continue
				}
				lines++
			}
			at = w
			for at > room && room > 0 {
				lines++
				at -= room
			}
		}
	}
	return lines
}

// room returns how wide text can be in columns first to last, in points. A unit of width is a digit of the standard
// font, a little less to be on the safe side.
func (s *bookSheet) room(first, last int) float64 {
	width := 0.0
	for c := first; c <= last && c <= len(s.widths); c++ {
		width += s.widths[c-1]
	}
	return width*5.75 - 6
}

// fit makes the current row high enough for text in columns first to last.
func (s *bookSheet) fit(first, last int, text string, l look) {
	if !l.wrap || text == "" {
		return
	}
	room := s.room(first, last)
	if l.inset {
		room -= 9
	}
	if n := lineCount(text, l, room); n > 1 || l.points() > 11 {
		s.tall(float64(n)*l.points()*1.2 + 6)
	}
}
