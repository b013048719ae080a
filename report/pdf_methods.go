package report

import "strings"

// methodsPart explains what was used, and only that.
func (a *appendix) methodsPart() {
	f := a.flow
	f.add(a.section(0, "Methods", "methods")...)
	f.add(prose("Only what this study used is described. Numbers in square brackets lead to the references.")...)
	a.methods("Statistics", "", statisticMethods(a.results))
	if texts := resamplingTexts(a.results); len(texts) > 0 {
		f.add(a.section(1, "Resampling", "method resampling")...)
		for _, text := range texts {
			f.add(prose(text)...)
		}
	}
	a.methods("Intervals", " interval", intervalMethods(a.results))
	f.add(a.section(1, "Random streams and Monte-Carlo error", "method streams")...)
	texts := streamTexts(a.results)
	for i, text := range texts {
		runs := plainRun(body, text)
		if i == 0 {
			runs = append(runs, run{text: " ", style: body})
			runs = append(runs, a.cite(streamSources...)...)
		}
		f.add(rich(runs...)...)
	}
	if text := comparisonText(a.results); text != "" {
		f.add(a.section(1, "Comparison with the criteria", "method comparison")...)
		f.add(rich(append(plainRun(body, text+" "), a.cite(comparisonSource)...)...)...)
	}
}

// methods describes one kind of method, each with its formula and its references. Names stand as plans write them, with
// a word behind if that makes them plainer.
func (a *appendix) methods(title, behind string, all []methodText) {
	if len(all) == 0 {
		return
	}
	a.flow.add(a.section(1, title, "methods "+title)...)
	formulaStyle := style{face: sans, size: 9, colour: ink}
	for _, m := range all {
		atoms := heading(2, "", m.title+behind, "method "+m.title)
		runs := append(plainRun(body, m.summary+" "), a.cite(m.sources...)...)
		lines := rich(runs...)
		lines[len(lines)-1].keep = m.formula != "" && len(lines) < 5 // a formula alone on a page is hard to read
		atoms = append(atoms, lines...)
		if m.formula != "" {
			atoms = append(atoms, space(1.6))
			atoms = append(atoms, formula(m.formula, formulaStyle, leftEdge, measure)...)
			atoms[len(atoms)-1].keep = m.where != ""
		}
		if m.where != "" {
			atoms = append(atoms, paragraph(plainRun(quiet, m.where+full(m.where)), leftEdge, measure, 1)...)
		}
		if m.caution != "" {
			atoms = append(atoms, paragraph([]run{{text: "Limits. ", style: smallBold}, {text: m.caution, style: small}},
				leftEdge, measure, 1)...)
		}
		if height(atoms) < 0.35*(bottomEdge-topEdge) {
			atoms = together(atoms)
		}
		a.flow.add(atoms...)
	}
}

// full returns the full stop that a text lacks.
func full(text string) string {
	if strings.HasSuffix(text, ".") {
		return ""
	}
	return "."
}

// capital makes the first letter a capital one, unless the name is written otherwise.
func capital(text string) string {
	if text == "" || text[0] < 'a' || text[0] > 'z' {
		return text
	}
	return strings.ToUpper(text[:1]) + text[1:]
}
