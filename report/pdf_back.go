package report

import (
	"slices"
	"strconv"
	"strings"
)

// limitsPart says how far the results may be trusted: what was found, what is not checked, what the plan disclaims.
func (a *appendix) limitsPart() {
	f := a.flow
	f.add(a.section(0, "Limits of validity and cautions", "limits")...)
	for _, text := range validityTexts(a.results) {
		f.add(bullet(plainRun(body, text), 1.6)...)
	}
	if t := a.advisories(); len(t.rows) == 0 {
		f.add(prose("No advisory was given.")...)
	} else {
		f.add(tableWithCaption(caption(a.tableLabel(), "Advisories, the gravest first.", 4), t)...)
	}
	if d := a.plan.Study.Disclaimers; len(d) > 0 {
		f.add(a.section(1, "Statements of the plan", "disclaimers")...)
		for _, text := range d {
			f.add(bullet(plainRun(body, text), 1.6)...)
		}
	}
}

// advisories lists each advisory once, with the statistics that have it and the evidence of each.
func (a *appendix) advisories() table {
	t := table{columns: []column{{title: "Advisory", least: 27, most: 27}, {title: "Statistics and findings"},
		{title: "What to do, and where the rule is from", least: 58, most: 58}}, size: small.size, before: 1}
	for _, severity := range []string{"stop", "caution", "note"} {
		var codes []string
		row := map[string]int{}
		for i := range a.results.Statistics {
			s := &a.results.Statistics[i]
			for k := range s.Advisories {
				v := &s.Advisories[k]
				if v.Severity != severity {
					continue
				}
				if !slices.Contains(codes, v.Code) {
					codes = append(codes, v.Code)
					row[v.Code] = len(t.rows)
					t.rows = append(t.rows, []cell{
						{runs: []run{{text: severity, style: smallBold}, {text: "\n" + v.Code, style: quiet}},
							symbol: severitySymbol(severity)},
						{},
						{runs: []run{{text: v.Action, style: small}, {text: "\n" + v.Source + full(v.Source), style: quiet}}}})
				}
				found := &t.rows[row[v.Code]][1]
				start := ""
				if len(found.runs) > 0 {
					start = "\n"
				}
				found.runs = append(found.runs, run{text: start, style: small},
					run{text: s.Label + ". ", style: small.in(accent), to: statisticName(i)}, run{text: v.Text + " ", style: small})
				if evidence := evidenceText(v); evidence != "" {
					found.runs = append(found.runs, run{text: "(" + evidence + ")", style: quiet})
				}
			}
		}
	}
	return t
}

// provenancePart holds all that ties the results to plan, data and program.
func (a *appendix) provenancePart() {
	f, run := a.flow, a.rec.Run
	f.add(a.section(0, "Provenance", "provenance")...)
	program := a.results.Program
	digest := func(name, value string) [2]cell { return [2]cell{cellText(quiet, name), {runs: digestRuns(value)}} }
	f.add(pairs([][2]cell{
		pair("Program", "Lotproof "+program.Version+", plan language "+strconv.Itoa(program.PlanLanguage), ""),
		pair("Generator", program.Generator, "not stated"),
		pair("Seed", seedText(a.plan), ""),
		pair("Plan file", a.results.Plan.File, "not stated"),
		digest("Digest of the plan", a.results.Plan.SHA256),
		digest("Digest of the results", a.rec.ResultsSHA256),
		pair("Run", strconv.Itoa(run.Number), ""),
		pair("Started, finished (UTC)", run.Started+", "+run.Finished, ""),
		pair("System", strings.TrimSpace(run.System+", "+run.Go), "not stated"),
	}, 0)...)
	a.digests()
	f.add(a.section(1, "To run it again", "replay")...)
	for _, text := range replayTexts(a.rec) {
		f.add(prose(text)...)
	}
	a.amendments()
}

// digests lists the digests of sources and resampling designs.
func (a *appendix) digests() {
	t := table{columns: []column{{title: "Source or design"}, {title: "Digest (SHA-256)", least: 98}},
		size: small.size, before: 1}
	for _, s := range a.results.Sources {
		t.rows = append(t.rows, []cell{cellText(small, "source "+s.Name+": "+s.File), cellText(code, s.SHA256)})
	}
	seen := map[string]int{}
	var order []string
	users := map[string][]string{}
	for _, s := range a.results.Statistics {
		if _, known := seen[s.Design.SHA256]; !known {
			seen[s.Design.SHA256] = len(order)
			order = append(order, s.Design.SHA256)
		}
		users[s.Design.SHA256] = append(users[s.Design.SHA256], s.ID)
	}
	if len(order) == 0 && len(t.rows) == 0 {
		return
	}
	for _, d := range order {
		t.rows = append(t.rows, []cell{cellText(small, "design of "+strings.Join(users[d], ", ")), cellText(code, d)})
	}
	over := caption(a.tableLabel(), "Digests of the sources and of the resampling designs; a design and the seed "+
		"address the random streams.", 4)
	a.flow.add(tableWithCaption(over, t)...)
}

// amendments lists the approved changes of the plan.
func (a *appendix) amendments() {
	if len(a.plan.Amendments) == 0 {
		return
	}
	t := table{columns: []column{{title: "No.", align: right}, {title: "Date", least: 20}, {title: "What changed"},
		{title: "Why"}, {title: "Results seen", least: 18}}, size: small.size, before: 1}
	for _, m := range a.plan.Amendments {
		seen := "no"
		if m.ResultsSeen {
			seen = "yes"
		}
		t.rows = append(t.rows, []cell{cellText(small, strconv.Itoa(m.Number)), cellText(small, m.Date),
			cellText(small, m.What), cellText(small, m.Why), cellText(small, seen)})
	}
	a.flow.add(a.section(1, "Amendments of the plan", "amendments")...)
	a.flow.add(t.atoms()...)
}

// planPart is the plan, byte for byte as far as the font can show it, with numbered lines.
func (a *appendix) planPart() {
	f := a.flow
	f.add(a.section(0, "Study plan", "plan")...)
	f.add(prose("The text of " + a.results.Plan.File + " as it was run. The digest of the plan is taken of its content, " +
		"not of its layout.")...)
	text := strings.TrimSuffix(strings.ReplaceAll(a.results.Plan.Text, "\r\n", "\n"), "\n")
	const gutter = 8.0
	numberStyle := listing.in(soft)
	step := float64(leading(listing.size) * 0.94)
	em := mono.width(" ", listing.size)
	f.add(atom{height: 2})
	for i, line := range strings.Split(text, "\n") {
		// Lines that are too long go on below their own beginning, a little further in.
		content := strings.TrimLeft(listing.face.clean(line), " ")
		indent := min(float64(em*float64(len(listing.face.clean(line))-len(content))), measure/2)
		width := measure - gutter - indent
		lines := wrap(plainRun(listing, content), width)
		if len(lines) > 1 {
			lines = wrap(plainRun(listing, content), width-float64(2*em))
		}
		for j, l := range lines {
			f.add(atom{height: step, draw: func(p *page, y float64) {
				x := leftEdge + gutter + indent
				if j == 0 {
					p.textRight(leftEdge+gutter-3, y+baseline(listing.size), numberStyle, strconv.Itoa(i+1))
				} else {
					x += float64(2 * em)
				}
				l.draw(p, x, y+baseline(listing.size))
			}})
		}
	}
}

// referencesPart lists what was cited, in the order of first use.
func (a *appendix) referencesPart() {
	if len(a.cited) == 0 {
		return
	}
	a.flow.add(a.section(0, "References", "references")...)
	for i, r := range a.cited {
		atoms := paragraph(plainRun(body, r), leftEdge+9, measure-9, 1.6)
		first, number := atoms[0].draw, "["+strconv.Itoa(i+1)+"]"
		atoms[0].name = referenceName(i + 1)
		atoms[0].draw = func(p *page, y float64) {
			p.text(leftEdge, y+baseline(body.size), linkStyle, number)
			first(p, y)
		}
		a.flow.add(atoms...)
	}
}

// signaturesPart leaves room for signatures, which belong to the quality system of the reader.
func (a *appendix) signaturesPart() {
	atoms := a.section(0, "Signatures", "signatures")
	note := prose(signatureText())
	for i := range note {
		note[i].keep = true
	}
	atoms = append(atoms, note...)
	names := []string{"Role", "Printed name", "Meaning of the signature", "Date", "Signature"}
	starts := []float64{0, 30, 68, 110, 132}
	atoms = append(atoms, space(2), atom{height: 5, keep: true, draw: func(p *page, y float64) {
		for i, n := range names {
			p.text(leftEdge+starts[i], y+3.4, style{face: bold, size: 7.2, colour: soft}, n)
		}
		p.line(pen{ink, 0.3, nil}, spot{leftEdge, y + 5}, spot{rightEdge, y + 5})
	}})
	for k := range 3 {
		atoms = append(atoms, atom{height: 13, keep: k < 2, draw: func(p *page, y float64) {
			for i, x := range starts {
				end := measure
				if i+1 < len(starts) {
					end = starts[i+1] - 3
				}
				p.line(pen{soft, 0.15, nil}, spot{leftEdge + x, y + 12}, spot{leftEdge + end, y + 12})
			}
		}})
	}
	a.flow.add(atoms...)
}
