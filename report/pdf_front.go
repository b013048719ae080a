package report

import (
	"fmt"
	"strconv"
)

// front is the first page: which study, what was asked, what came out, and the gravest doubts.
func (a *appendix) front() {
	study, f := &a.plan.Study, a.flow
	f.add(atom{height: 5, keep: true, draw: func(p *page, y float64) {
		p.text(leftEdge, y+3, style{face: bold, size: 8, colour: accent}, "METHOD APPENDIX")
	}})
	f.add(together(append(paragraph(plainRun(titleStyle, study.Title), leftEdge, measure, 1), space(3)))...)
	run := a.rec.Run
	short := table{size: body.size,
		columns: []column{{least: pairName, most: pairName}, {least: 52, most: 52}, {least: 26, most: 26}, {}}}
	for _, r := range [][2][2]cell{
		{pair("Study", study.ID, notStated), pair("Protocol", study.Protocol, notStated)},
		{pair("Author", study.Author, notStated), pair("Status of the plan", study.Status, notStated)},
		{pair("Run", strconv.Itoa(run.Number), ""), pair("Started (UTC)", run.Started, notStated)},
	} {
		short.rows = append(short.rows, []cell{r[0][0], r[0][1], r[1][0], r[1][1]})
	}
	f.add(short.atoms()...)
	f.add(pairs([][2]cell{
		pair("Purpose", study.Purpose, notStated),
		{cellText(quiet, "Digest of the plan"), {runs: digestRuns(a.results.Plan.SHA256)}},
	}, 0)[1:]...)

	a.verdict()
	a.decisions()
	a.worst()
	if len(a.toc) > 0 {
		a.tableOfContents()
	}
}

// digestRuns sets a digest with its short form apart, by which the feet of the pages name it.
func digestRuns(digest string) []run {
	strong := code
	strong.colour = accent
	s := short(digest)
	return []run{{text: s, style: strong}, {text: digest[len(s):], style: code}}
}

// verdict is the band with the verdict of the study.
func (a *appendix) verdict() {
	verdict := a.results.Verdict
	counts := map[string]int{}
	all := 0
	for _, s := range a.results.Statistics {
		for _, c := range s.Accept {
			counts[c.Verdict]++
			all++
		}
	}
	text := "The plan sets no acceptance criterion."
	if all > 0 {
		text = fmt.Sprintf("%s met, %d not met, %d not shown, of %d in all. The verdict of the study is the worst of them.",
			strconv.Itoa(counts["met"]), counts["not met"], counts["not shown"], all)
	}
	const h = 14.0
	a.flow.add(atom{before: 5, height: h, name: "verdict", draw: func(p *page, y float64) {
		sign := verdictSymbol(verdict)
		p.box(band, leftEdge, y, measure, h)
		p.box(sign.colour(), leftEdge, y, 1.2, h)
		sign.draw(p, leftEdge+9, y+h/2, 3.2)
		p.text(leftEdge+16, y+5.9, style{face: bold, size: 11, colour: ink}, "Verdict of the study: "+verdict)
		p.text(leftEdge+16, y+10.8, small, text)
	}})
}

// decisions are the criteria, each with its sentence.
func (a *appendix) decisions() {
	t := table{columns: []column{{title: "Verdict", least: 24, most: 24}, {title: "Criterion and decision"}},
		size: sentence.size, before: 4}
	for i := range a.results.Statistics {
		s := &a.results.Statistics[i]
		for j := range s.Accept {
			c := &s.Accept[j]
			sign := verdictSymbol(c.Verdict)
			t.rows = append(t.rows, []cell{{runs: plainRun(sentenceBold, c.Verdict), symbol: sign},
				{runs: []run{{text: decisionSentence(a.results, s, c) + " ", style: sentence},
					{text: "→\u00a0" + a.resultNumber(i), style: sentence.in(accent), to: statisticName(i)}}}})
		}
	}
	if len(t.rows) > 0 {
		a.flow.add(t.atoms()...)
	}
}

// mostDoubts is how many advisories the first page lists.
const mostDoubts = 6

// worst lists the gravest advisories.
func (a *appendix) worst() {
	t := table{columns: []column{{title: "Advisory", least: 24, most: 24}, {title: "Statistic and finding"}},
		size: sentence.size, before: 4}
	more := 0
	for _, severity := range []string{"stop", "caution"} {
		for i := range a.results.Statistics {
			s := &a.results.Statistics[i]
			for _, v := range s.Advisories {
				if v.Severity != severity {
					continue
				}
				if len(t.rows) == mostDoubts {
					more++
					continue
				}
				t.rows = append(t.rows, []cell{{runs: plainRun(sentenceBold, severity), symbol: severitySymbol(severity)},
					{runs: []run{{text: s.Label + ". ", style: sentence.in(accent), to: statisticName(i)},
						{text: v.Text, style: sentence}}}})
			}
		}
	}
	if len(t.rows) == 0 {
		return
	}
	a.flow.add(t.atoms()...)
	if more > 0 {
		a.flow.add(paragraph([]run{{text: strconv.Itoa(more) + " more of these stand in ", style: small},
			{text: "the list of cautions", style: small.in(accent), to: "limits"}, {text: ".", style: small}}, leftEdge,
			measure, 1.5)...)
	}
}

// tableOfContents has one line a section; the page numbers are filled in at the end.
func (a *appendix) tableOfContents() {
	atoms := heading(1, "", "Contents", "contents")
	for i := range a.toc {
		e := a.toc[i]
		s, indent := body, 0.0
		if e.level > 0 {
			s, indent = small, 9
		}
		step := leading(s.size) + 0.35
		atoms = append(atoms, atom{height: step, draw: func(p *page, y float64) {
			base := y + baseline(s.size)
			w := p.text(leftEdge+indent, base, s, shorten(s, e.title, measure-indent-14))
			p.line(pen{hair, 0.2, []float64{0.2, 1.2}}, spot{leftEdge + indent + w + 2, base}, spot{rightEdge - 8, base})
			p.areas = append(p.areas, area{leftEdge, y, measure, step, e.to})
			a.numbersAt = append(a.numbersAt, contentsLine{len(a.flow.pages) - 1, base, s, e.to})
		}})
	}
	if len(a.toc) <= 42 { // else it would leave more than half a page empty
		atoms = together(atoms)
	}
	a.flow.add(atoms...)
}

// A contentsLine is where a page number belongs in the table of contents.
type contentsLine struct {
	page  int
	y     float64
	style style
	to    string
}
