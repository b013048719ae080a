package report

import (
	"strconv"
	"strings"
)

// methodSheet explains what was used, and only that, with numbered references.
func (b *book) methodSheet() {
	s := b.sheet("Methods", "statistics, intervals and resampling in words and formulas, with references", false, 24, 104)
	s.title("Methods", "Only what this study used is described. Numbers in square brackets lead to the references below.",
		2)
	numbers := map[string]string{}
	all := references(b.results)
	for i, r := range all {
		numbers[r] = "[" + strconv.Itoa(i+1) + "]"
	}
	describeAll := func(heading string, methods []methodText) {
		if len(methods) == 0 {
			return
		}
		s.heading(heading)
		for i, m := range methods {
			first := s.row
			if i == 0 {
				first = s.row - 2 // with its heading
			}
			var cited []string
			for _, r := range m.sources {
				cited = append(cited, numbers[r])
			}
			s.text(1, m.title, look{bold: true, wrap: true})
			s.text(2, strings.TrimSpace(m.summary+" "+strings.Join(cited, " ")), bookText)
			s.row++
			for _, part := range [][2]string{{"formula", m.formula}, {"where", m.where}, {"limits", m.caution}} {
				if part[1] == "" {
					continue
				}
				s.text(1, part[0], bookName)
				s.text(2, part[1], bookText)
				s.row++
			}
			s.together(first)
			s.row++
		}
	}
	paragraphs := func(heading string, texts []string) {
		if len(texts) == 0 {
			return
		}
		first := s.row
		s.heading(heading)
		for _, text := range texts {
			s.wide(1, 2, text, bookText)
			s.row++
			s.together(first)
			first = s.row
		}
	}
	describeAll("Statistics", statisticMethods(b.results))
	paragraphs("Resampling", resamplingTexts(b.results))
	describeAll("Intervals", intervalMethods(b.results))
	paragraphs("Random streams and Monte-Carlo error", streamTexts(b.results))
	if text := comparisonText(b.results); text != "" {
		paragraphs("Comparison with the criteria", []string{text})
	}
	first := s.row
	s.heading("References")
	for _, r := range all {
		s.text(1, numbers[r], look{colour: bookAccent})
		s.text(2, r, bookText)
		s.row++
		s.together(first)
		first = s.row
	}
}

// planSheet is the text of the plan, line by line.
func (b *book) planSheet() {
	plan := &b.results.Plan
	s := b.sheet("Plan", "the text of the study plan as it was run", false, 7, 112)
	s.title("Plan", "The text of "+plan.File+" as it was run. The digest "+short(plan.SHA256)+
		" is over its content: spacing, order of keys and comments do not enter, every value does.", 2)
	at := s.row
	s.heads(1, ">Line", "Text")
	s.freeze(at, 0)
	text := strings.TrimSuffix(strings.ReplaceAll(plan.Text, "\r\n", "\n"), "\n")
	n := 0
	for line := range strings.SplitSeq(text, "\n") {
		n++
		for k, piece := range cellPieces(line) {
			if k == 0 {
				s.put(1, count(n), look{colour: bookSoft})
			}
			s.text(2, piece, look{code: true, size: 9, wrap: true, inset: true})
			s.row++
		}
	}
}

// provenanceSheet holds all that ties the results to plan, data and program.
func (b *book) provenanceSheet() {
	s := b.sheet("Provenance", "digests, versions, seed, generator, run, amendments, and how to run it again", false,
		30, 16, 40, 40, 14)
	s.title("Provenance", "", 5)
	run, r := b.rec.Run, b.results
	pairs := func(rows [][2]string) {
		for _, p := range rows {
			s.text(1, p[0], bookName)
			s.wide(2, 5, p[1], bookText)
			s.row++
		}
	}
	pairs([][2]string{
		{"Program", program + " " + r.Program.Version + ", plan language " + strconv.Itoa(r.Program.PlanLanguage)},
		{"Generator", r.Program.Generator},
		{"Seed", seedText(&r.Plan.Resolved)},
		{"Plan file", r.Plan.File},
		{"Digest of the plan", r.Plan.SHA256},
		{"Digest of the results", b.rec.ResultsSHA256},
		{"Run", strconv.Itoa(run.Number)},
		{"Started (UTC)", run.Started},
		{"Finished (UTC)", run.Finished},
		{"System", run.System},
		{"Compiler", run.Go},
	})
	s.heading("Sources")
	for i := range r.Sources {
		f := &r.Sources[i]
		pairs([][2]string{{f.Name, f.File + ", " + grouped(f.Bytes) + " bytes, digest in the plan: " + f.Approved},
			{"", f.SHA256}})
	}
	s.heading("Resampling designs")
	s.wide(1, 5, "A design says which rows are drawn together. Its digest and the seed address the random streams.",
		bookQuiet)
	s.row++
	var order []string
	users := map[string][]string{}
	for i := range r.Statistics {
		d := r.Statistics[i].Design.SHA256
		if users[d] == nil {
			order = append(order, d)
		}
		users[d] = append(users[d], r.Statistics[i].ID)
	}
	for _, d := range order {
		pairs([][2]string{{"Design of", strings.Join(users[d], ", ")}, {"", d}})
	}
	b.amendments(s)
	s.heading("To run it again")
	for _, text := range replayTexts(b.rec) {
		s.wide(1, 5, text, bookText)
		s.row++
	}
}

// amendments lists the approved changes of the plan.
func (b *book) amendments(s *bookSheet) {
	s.heading("Amendments of the plan")
	all := b.results.Plan.Resolved.Amendments
	if len(all) == 0 {
		s.text(1, noFigure, look{})
		s.row++
		return
	}
	s.heads(1, ">Number", "Date", "What changed", "Why", "Results seen")
	for _, a := range all {
		seen := "no"
		if a.ResultsSeen {
			seen = "yes"
		}
		s.line(1, count(a.Number), say(a.Date), say(a.What), say(a.Why), say(seen))
	}
}
