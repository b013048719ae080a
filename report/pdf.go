package report

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"time"

	"github.com/go-pdf/fpdf"
)

// Size of the sheet, A4 upright, in millimetres.
const (
	sheetWidth  = 210.0
	sheetHeight = 297.0
)

// A document is the appendix laid out.
type document struct {
	title, subject string
	author         string // empty: not stated
	made           time.Time
	pages          []page
	targets        map[string]target // where links lead
	outline        []entry
}

// A target is a place in the document.
type target struct {
	page int // from 0
	y    float64
}

// An entry is one line of the outline and of the table of contents.
type entry struct {
	title string
	level int // from 0
	to    string
}

// familyName is what the faces are called inside the file.
var familyName = [faces]string{"body", "strong", "fixed"}

// write makes the file. It is the only place that knows the library, and gives the same bytes for the same document:
// dates come from the document, objects are sorted, and the library gets its own copy of each font, because it writes
// into the bytes that it is given.
func (d *document) write(w io.Writer) error {
	f := fpdf.New("P", "mm", "A4", "")
	f.SetCreationDate(d.made)
	f.SetModificationDate(d.made)
	f.SetCatalogSort(true)
	f.SetProducer("Lotproof", true)
	f.SetCreator("Lotproof", true)
	f.SetTitle(d.title, true)
	f.SetSubject(d.subject, true)
	if d.author != "" {
		f.SetAuthor(d.author, true)
	}
	f.SetLang("en-GB")
	f.SetMargins(0, 0, 0)
	f.SetAutoPageBreak(false, 0)
	for i, name := range familyName {
		f.AddUTF8FontFromBytes(name, "", bytes.Clone(fontFile(face(i))))
	}
	links := map[string]int{}
	for i := range d.pages {
		f.AddPage()
		writer{f}.page(&d.pages[i])
		for _, a := range d.pages[i].areas {
			at, known := d.targets[a.to]
			if !known {
				continue
			}
			if _, made := links[a.to]; !made {
				links[a.to] = f.AddLink()
				f.SetLink(links[a.to], grid(at.y), at.page+1)
			}
			f.Link(grid(a.x), grid(a.y), grid(a.w), grid(a.h), links[a.to])
		}
		// The outline entries of a page are made while it is the current one, since the library notes where it stands.
		for _, e := range d.outline {
			if at, known := d.targets[e.to]; known && at.page == i {
				f.SetFont(familyName[sans], "", 9)
				f.Bookmark(e.title, e.level, grid(at.y))
			}
		}
	}
	if err := f.Output(w); err != nil {
		return fmt.Errorf("writing the appendix: %w", err)
	}
	return nil
}

// A writer draws marks with the library. It states every colour and width before use, so nothing is left over.
type writer struct{ f *fpdf.Fpdf }

// grid moves a length to the nearest hundredth of a point, which is what the library writes. Its own products then lie
// far from where a last bit, which differs between machines, would change a digit.
func grid(mm float64) float64 {
	const perMillimetre = 100 * 72 / 25.4
	return math.Round(float64(mm*perMillimetre)) / perMillimetre
}

func (w writer) page(p *page) {
	for i := range p.marks {
		m := &p.marks[i]
		switch m.kind {
		case markText:
			w.f.SetFont(familyName[m.style.face], "", m.style.size)
			c := m.style.colour
			w.f.SetTextColor(int(c.r), int(c.g), int(c.b))
			w.f.Text(grid(m.x), grid(m.y), m.text)
		case markPath:
			w.path(m)
		case markClip:
			w.f.ClipRect(grid(m.x), grid(m.y), grid(m.w), grid(m.h), false)
		case markUnclip:
			w.f.ClipEnd()
			// The end of a clip takes the file back to the font and the fill colour of its beginning, which the library
			// does not note; stating others makes it state the next ones.
			w.f.SetFont(familyName[sans], "", 1)
			w.f.SetFillColor(0, 0, 0)
		}
	}
}

func (w writer) path(m *mark) {
	r, g, b := int(m.colour.r), int(m.colour.g), int(m.colour.b)
	how := "D"
	if m.fill {
		w.f.SetFillColor(r, g, b)
		how = "F"
	} else {
		w.f.SetDrawColor(r, g, b)
		w.f.SetLineWidth(m.width)
		w.f.SetDashPattern(m.dash, 0)
	}
	for i, s := range m.spots {
		if i == 0 {
			w.f.MoveTo(grid(s.x), grid(s.y))
		} else {
			w.f.LineTo(grid(s.x), grid(s.y))
		}
	}
	if m.closed {
		w.f.ClosePath()
	}
	w.f.DrawPath(how)
}
