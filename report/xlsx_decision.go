package report

import (
	"fmt"
	"strconv"

	"lotproof/runner/record"
	"lotproof/spec"
)

const decisionColumns = 7

// decisionSheet is the first sheet: which study, what was asked, what came out, and the gravest doubts.
func (b *book) decisionSheet() {
	s := b.sheet("Decision", "the study, each criterion with its verdict, the gravest advisories", true,
		15, 68, 16, 16, 21, 12, 16)
	study, run := &b.results.Plan.Resolved.Study, &b.rec.Run
	s.text(1, "LOTPROOF  RESULTS WORKBOOK", bookBrand)
	s.row++
	s.wide(1, decisionColumns, study.Title, bookTitle)
	s.row += 2
	for _, p := range [][2]string{{"Study", study.ID}, {"Purpose", orElse(study.Purpose, notStated)},
		{"Protocol", orElse(study.Protocol, notStated)}, {"Author", orElse(study.Author, notStated)}, {"Plan", study.Status},
		{"Run", fmt.Sprintf("%d, started %s (UTC)", run.Number, run.Started)},
		{"Digests", fmt.Sprintf("plan %s, results %s (SHA-256; whole on the sheet Provenance)", short(b.results.Plan.SHA256),
			short(b.rec.ResultsSHA256))}} {
		s.text(1, p[0], bookName)
		s.wide(2, decisionColumns, p[1], bookText)
		s.row++
	}
	s.row++
	s.studyVerdict()
	s.decisions()
	s.gravest()
	first := s.row
	s.heading("How to read this")
	texts := append([]string{comparisonText(b.results)}, validityTexts(b.results)...)
	texts = append(texts, study.Disclaimers...)
	for _, text := range texts {
		if text != "" {
			s.wide(1, decisionColumns, text, bookText)
			s.row++
		}
	}
	s.together(first)
	s.heading("Sheets of this workbook")
	b.index = s.row
}

// contents fills in the list of sheets, now that all are known.
func (b *book) contents() {
	s := b.sheets[0]
	s.row = b.index
	for _, to := range b.sheets[1:] {
		s.text(1, to.name, look{colour: bookAccent})
		s.link(1, to)
		s.wide(2, decisionColumns, to.about, bookText)
		s.row++
	}
	s.together(b.index - 2)
}

// studyVerdict is the band with the verdict of the study. Shape and word carry it, not the colour.
func (s *bookSheet) studyVerdict() {
	counts, all := map[string]int{}, 0
	for _, one := range s.results.Statistics {
		for _, a := range one.Accept {
			counts[a.Verdict]++
			all++
		}
	}
	text := "The plan sets no acceptance criterion."
	if all > 0 {
		text = fmt.Sprintf("%d met, %d not met, %d not shown, of %d in all. The verdict of the study is the worst of them.",
			counts["met"], counts["not met"], counts["not shown"], all)
	}
	band := look{size: 13, bold: true, fill: bookBand, middle: true, colour: verdictColour(s.results.Verdict)}
	s.wide(1, decisionColumns, markOf(s.results.Verdict)+"  Verdict of the study: "+s.results.Verdict, band)
	s.tall(26)
	s.row++
	s.wide(1, decisionColumns, text, look{fill: bookBand, underBold: true})
	s.row += 2
}

// mark writes a verdict or a severity with its shape into the first column.
func (s *bookSheet) mark(word string) {
	l := bookBody
	l.bold, l.colour = true, verdictColour(word)
	s.text(1, markOf(word)+" "+word, l)
}

func verdictColour(verdict string) string {
	switch verdict {
	case "not met", "stop":
		return bookWarn
	case "met":
		return bookAccent
	}
	return bookInk
}

// decisions lists the criteria, each with the figures that were compared.
func (s *bookSheet) decisions() {
	heads := true
	for i := range s.results.Statistics {
		one := &s.results.Statistics[i]
		for k := range one.Accept {
			a := &one.Accept[k]
			if heads {
				s.heads(1, "Verdict", "Decision", ">Estimate", ">Bound", ">Criterion", ">Confidence", "Interval")
				heads = false
			}
			s.mark(a.Verdict)
			for c, item := range []bookItem{say(decisionSentence(s.results, one, a)),
				measured(one.Estimate, estimateDecimals(one), one.Unit, noFigure),
				measured(a.Bound, leadingDecimals(one), one.Unit, noFigure),
				criterionItem(one, a), confidenceItem(a.Confidence), say(orElse(a.Method, noFigure))} {
				s.put(2+c, item, bookBody)
			}
			s.row++
			s.together(s.row - 1)
		}
	}
}

// criterionItem is the limit of a criterion as a number, with its words and its unit round it.
func criterionItem(one *record.Statistic, a *record.Accept) bookItem {
	v, err := strconv.ParseFloat(a.Limit, 64)
	if err != nil {
		return say(criterionText(one, a))
	}
	words := "at least "
	if a.Criterion == atMost {
		words = "at most "
	}
	plain := unitFormat(v, spec.Number{Text: a.Limit}.Decimals(), one.Unit)
	return bookItem{number: &v, format: literal(words) + plain + ";" + literal(words+"−") + plain,
		letters: len([]rune(criterionText(one, a)))}
}

// mostGrave is how many advisories the first sheet lists.
const mostGrave = 8

// gravest lists the advisories that are more than a note.
func (s *bookSheet) gravest() {
	listed, more := 0, 0
	for _, severity := range []string{"stop", "caution"} {
		for i := range s.results.Statistics {
			one := &s.results.Statistics[i]
			for k := range one.Advisories {
				v := &one.Advisories[k]
				if v.Severity != severity {
					continue
				}
				if listed == mostGrave {
					more++
					continue
				}
				first := s.row
				if listed == 0 {
					s.heading("Advisories that weigh most")
				}
				listed++
				s.mark(severity)
				s.wide(2, decisionColumns, fmt.Sprintf("%s: %s %s", one.Label, v.Text, v.Action), bookBody)
				s.row++
				s.together(first)
			}
		}
	}
	if more > 0 {
		s.wide(1, decisionColumns, fmt.Sprintf("%d more stops and cautions stand on the sheet Advisories.", more), bookQuiet)
		s.row++
	}
	if listed == 0 {
		s.heading("Advisories that weigh most")
		s.wide(1, decisionColumns, "None is more than a note. That does not show that all is well; only what the catalogue "+
			"lists is checked.", bookText)
		s.row++
	}
}
