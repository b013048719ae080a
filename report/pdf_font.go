package report

import (
	"encoding/binary"
	"fmt"
	"strings"
	"sync"
	"unicode"

	"github.com/go-fonts/dejavu/dejavusans"
	"github.com/go-fonts/dejavu/dejavusansbold"
	"github.com/go-fonts/dejavu/dejavusansmono"
)

// A face is one of the typefaces that the appendix embeds.
type face uint8

const (
	sans face = iota
	bold
	mono
	faces = 3
)

// fontFile returns the TrueType file of a face; the bytes are shared and must not be modified.
func fontFile(f face) []byte {
	return [faces][]byte{dejavusans.TTF, dejavusansbold.TTF, dejavusansmono.TTF}[f]
}

// metrics are the advance widths of a face in thousandths of the type size, −1 where it has no glyph. Only the basic
// plane is listed: the writer of the file addresses glyphs by 16 bits.
type metrics [1 << 16]int16

var allMetrics = sync.OnceValue(func() *[faces]metrics {
	var all [faces]metrics
	for f := range all {
		readMetrics(fontFile(face(f)), &all[f])
	}
	return &all
})

// readMetrics reads the advance widths from a TrueType file with a character map of format 4 (OpenType specification,
// tables head, hhea, hmtx and cmap). The files are part of the program, so a malformed one is our own mistake.
func readMetrics(ttf []byte, m *metrics) {
	u16 := func(at int) int { return int(binary.BigEndian.Uint16(ttf[at:])) }
	u32 := func(at int) int { return int(binary.BigEndian.Uint32(ttf[at:])) }
	table := map[string]int{}
	for i := range u16(4) {
		entry := 12 + 16*i
		table[string(ttf[entry:entry+4])] = u32(entry + 8)
	}
	unitsPerEm := u16(table["head"] + 18)
	long := u16(table["hhea"] + 34) // glyphs from here on share the last advance width
	advance := func(glyph int) int16 {
		units := u16(table["hmtx"] + 4*min(glyph, long-1))
		return int16((1000*units + unitsPerEm/2) / unitsPerEm)
	}
	for r := range m {
		m[r] = -1
	}
	cmap := table["cmap"]
	for i := range u16(cmap + 2) {
		sub := cmap + u32(cmap+4+8*i+4)
		if u16(sub) != 4 {
			continue
		}
		twice := u16(sub + 6) // 2 × number of segments
		for s := 0; s < twice; s += 2 {
			last, first := u16(sub+14+s), u16(sub+16+twice+s)
			delta, offsetAt := u16(sub+16+2*twice+s), sub+16+3*twice+s
			for r := first; r <= last && r < 0xFFFF; r++ {
				glyph := r
				if offset := u16(offsetAt); offset != 0 {
					glyph = u16(offsetAt + offset + 2*(r-first))
					if glyph == 0 {
						continue
					}
				}
				if glyph = (glyph + delta) & 0xFFFF; glyph != 0 {
					m[r] = advance(glyph)
				}
			}
		}
	}
}

// drawable says whether a face shows r as a reader expects it: it has a glyph, and r is neither invisible nor written
// from right to left, which would need an order and shapes that the writer does not know.
func (f face) drawable(r rune) bool {
	if r > 0xFFFF || allMetrics()[f][r] < 0 || unicode.Is(unicode.C, r) {
		return false
	}
	return !unicode.In(r, unicode.Zl, unicode.Zp, unicode.Hebrew, unicode.Arabic, unicode.Syriac, unicode.Nko)
}

// clean makes text drawable: a tab becomes blanks, and what the face cannot show is named by its code points, as in
// ⟨U+6F22 U+5B57⟩. Line feeds stay; they are the business of the line breaker.
func (f face) clean(text string) string {
	needless := true
	text = strings.ToValidUTF8(text, "\ufffd")
	for _, r := range text {
		if r != '\n' && !f.drawable(r) {
			needless = false
			break
		}
	}
	if needless {
		return text
	}
	var b strings.Builder
	text = strings.ReplaceAll(text, "\r\n", "\n")
	open := false
	for _, r := range text {
		switch {
		case r == '\n' || f.drawable(r):
			if open {
				b.WriteString("⟩")
			}
			open = false
			b.WriteRune(r)
		case r == '\t' && !open:
			b.WriteString("    ")
		case open:
			fmt.Fprintf(&b, " U+%04X", r)
		default:
			fmt.Fprintf(&b, "⟨U+%04X", r)
			open = true
		}
	}
	if open {
		b.WriteString("⟩")
	}
	return b.String()
}

// millimetres in one typographic point.
const point = 25.4 / 72

// width returns the width of clean text in millimetres at a type size in points.
func (f face) width(text string, size float64) float64 {
	m := &allMetrics()[f]
	units := 0
	for _, r := range text {
		units += int(m.of(r))
	}
	return float64(units) / 1000 * size * point
}

func (m *metrics) of(r rune) int16 {
	if r > 0xFFFF || m[r] < 0 {
		return 0
	}
	return m[r]
}
