package report

import (
	"fmt"
	"io"
	"slices"
	"strconv"
	"time"

	"lotproof/runner/record"
	"lotproof/runner/source"
	"lotproof/spec"
)

// Appendix writes the method appendix of a run as a PDF: what was asked, from which data, by which methods, what came
// out and how far it may be trusted. It depends on the record and the rows alone and gives the same bytes every time;
// dates in the file are those of the run. data are those that the record was made from, with one ledger for each
// statistic.
func Appendix(w io.Writer, rec *record.Record, data *source.Data) error {
	return layOut(rec, data).write(w)
}

// contentsFrom is how many pages an appendix has at least if it has a table of contents.
const contentsFrom = 5

// layOut lays the appendix out. The table of contents is left out first; if the appendix turns out long, it is laid out
// again with one.
func layOut(rec *record.Record, data *source.Data) *document {
	a := newAppendix(rec, data)
	a.compose()
	if len(a.flow.pages) >= contentsFrom {
		toc := a.outline
		a = newAppendix(rec, data)
		a.toc = brief(toc)
		a.compose()
	}
	return a.finish()
}

// An appendix is the document being composed.
type appendix struct {
	rec     *record.Record
	results *record.Results
	plan    *spec.Plan
	data    *source.Data
	flow    *flow
	outline []entry
	numbers [2]int // of the last heading of each level
	figures int
	tables  int
	cited   []string // references in the order of their first use

	toc       []entry        // what the table of contents lists; empty: there is none
	numbersAt []contentsLine // where its page numbers belong
}

// brief leaves the lower level out of a table of contents that would be long.
func brief(toc []entry) []entry {
	if len(toc) <= 40 {
		return toc
	}
	return slices.DeleteFunc(slices.Clone(toc), func(e entry) bool { return e.level > 0 })
}

func newAppendix(rec *record.Record, data *source.Data) *appendix {
	return &appendix{rec: rec, results: &rec.Results, plan: &rec.Results.Plan.Resolved, data: data, flow: newFlow()}
}

// compose lays the parts out, one after the other.
func (a *appendix) compose() {
	a.front()
	a.dataPart()
	a.methodsPart()
	a.resultsPart()
	a.limitsPart()
	a.provenancePart()
	a.planPart()
	a.referencesPart()
	a.signaturesPart()
	a.flow.end()
}

// section begins a part of the text and notes it in the outline; level 0 or 1.
func (a *appendix) section(level int, title, name string) []atom {
	a.numbers[level]++
	if level == 0 {
		a.numbers[1] = 0
	}
	number := strconv.Itoa(a.numbers[0])
	if level == 1 {
		number += "." + strconv.Itoa(a.numbers[1])
	}
	a.outline = append(a.outline, entry{title: number + "  " + plainTitle(title), level: level, to: name})
	return heading(level, number, title, name)
}

// plainTitle makes a title fit for the outline, which readers show in a font of their own.
func plainTitle(title string) string {
	return shorten(style{face: sans, size: 9}, sans.clean(title), 160)
}

// cite returns the mark of a reference, numbering it at its first use.
func (a *appendix) cite(sources ...string) []run {
	var out []run
	for _, s := range sources {
		n := 0
		for i, known := range a.cited {
			if known == s {
				n = i + 1
			}
		}
		if n == 0 {
			a.cited = append(a.cited, s)
			n = len(a.cited)
		}
		if len(out) > 0 {
			out = append(out, run{text: " ", style: body})
		}
		out = append(out, run{text: "[" + strconv.Itoa(n) + "]", style: linkStyle, to: referenceName(n)})
	}
	return out
}

func referenceName(n int) string { return "reference " + strconv.Itoa(n) }

func statisticName(i int) string { return "statistic " + strconv.Itoa(i) }

func (a *appendix) figureLabel() string {
	a.figures++
	return "Figure " + strconv.Itoa(a.figures)
}

func (a *appendix) tableLabel() string {
	a.tables++
	return "Table " + strconv.Itoa(a.tables)
}

// finish draws heads and feet, now that the number of pages is known, and returns the document.
func (a *appendix) finish() *document {
	study := &a.plan.Study
	pages := a.flow.pages
	for i := range pages {
		a.frame(&pages[i], i+1, len(pages))
	}
	for _, l := range a.numbersAt {
		pages[l.page].textRight(rightEdge, l.y, l.style, strconv.Itoa(a.flow.targets[l.to].page+1))
	}
	made, err := time.Parse(time.RFC3339, a.rec.Run.Started)
	if err != nil {
		made = time.Unix(0, 0) // never the time of writing: a record without a time still gives the same bytes
	}
	return &document{title: study.ID + " – " + study.Title,
		subject: "Method appendix, run " + strconv.Itoa(a.rec.Run.Number),
		author:  study.Author, made: made.UTC(), pages: pages, targets: a.flow.targets, outline: a.outline}
}

// frame draws what stands on every page: whose study it is, which page, and the digests that tie the pages together.
func (a *appendix) frame(p *page, number, of int) {
	study := &a.plan.Study
	const y = 15.5
	right := "Method appendix"
	p.textRight(rightEdge, y, quiet, right)
	x := leftEdge + p.text(leftEdge, y, smallBold, shorten(smallBold, study.ID, 45)) + 2.5
	room := rightEdge - quiet.face.width(right, quiet.size) - 6 - x
	if study.Status == "draft" {
		room -= 24
		a.draftMark(p, rightEdge-quiet.face.width(right, quiet.size)-22, y)
	}
	p.text(x, y, quiet, shorten(quiet, study.Title, room))
	p.line(pen{hair, 0.2, nil}, spot{leftEdge, y + 2.4}, spot{rightEdge, y + 2.4})

	const foot = sheetHeight - 12.0
	p.line(pen{hair, 0.2, nil}, spot{leftEdge, foot - 4}, spot{rightEdge, foot - 4})
	p.text(leftEdge, foot, quiet, fmt.Sprintf("page %d of %d", number, of))
	p.textRight(rightEdge, foot, quiet, fmt.Sprintf("plan %s · results %s · run %d", short(a.results.Plan.SHA256),
		short(a.rec.ResultsSHA256), a.rec.Run.Number))
}

// draftMark says that the plan is not approved; a frame and a word, not a colour alone.
func (a *appendix) draftMark(p *page, x, y float64) {
	s := style{face: bold, size: 7.6, colour: warning}
	const w, h = 17.0, 4.6
	top := y - 3.4
	p.outline(pen{warning, 0.35, nil}, spot{x, top}, spot{x + w, top}, spot{x + w, top + h}, spot{x, top + h})
	p.textCentre(x+w/2, y, s, "DRAFT")
}

// short returns the first eight digits of a digest.
func short(digest string) string {
	if len(digest) > 8 {
		return digest[:8]
	}
	return digest
}
