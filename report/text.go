package report

import (
	"bytes"
	"fmt"
	"io"
	"strings"

	"lotproof/runner/advisory"
	"lotproof/runner/interval"
	"lotproof/runner/record"
	"lotproof/runner/statistic"
	"lotproof/spec"
)

// lineWidth is how many characters a line on a terminal has at most, where it can be broken.
const lineWidth = 100

// kept joins words that must stay on one line, such as a figure and its unit.
func kept(text string) string { return strings.ReplaceAll(text, " ", joint) }

// joint stands between words that are kept together, until they are written.
const joint = "\u00a0"

// wrapped breaks a text into lines, the first after the given prefix, the others indented as far.
func wrapped(prefix, text string) string {
	indent := strings.Repeat(" ", len([]rune(prefix)))
	var b strings.Builder
	line := prefix
	empty := true
	text = strings.ReplaceAll(text, " %", joint+"%")
	for _, word := range strings.FieldsFunc(text, breakable) {
		if !empty && len([]rune(line))+1+len([]rune(word)) > lineWidth {
			b.WriteString(line + "\n")
			line, empty = indent, true
		}
		if !empty {
			line += " "
		}
		line += word
		empty = false
	}
	b.WriteString(line + "\n")
	return strings.NewReplacer(joint, " ", "\u202f", " ").Replace(b.String())
}

// breakable says where a line may end.
func breakable(r rune) bool { return r == ' ' || r == '\n' || r == '\t' || r == '\r' }

// Decisions writes what a person wants to know after a run: each criterion with its verdict, what stands in the way,
// the other figures, and where the files are.
func Decisions(w io.Writer, rec *record.Record, folder string) error {
	r := &rec.Results
	var b bytes.Buffer
	study := &r.Plan.Resolved.Study
	fmt.Fprintf(&b, "%s  %s\nrun %d, status %s\n", study.ID, study.Title, rec.Run.Number, study.Status)
	var plain []*record.Statistic
	heading := "\nCriteria\n"
	for i := range r.Statistics {
		s := &r.Statistics[i]
		if len(s.Accept) == 0 {
			plain = append(plain, s)
			continue
		}
		b.WriteString(heading)
		heading = ""
		for k := range s.Accept {
			a := &s.Accept[k]
			b.WriteString(wrapped(fmt.Sprintf("  %s %-9s ", markOf(a.Verdict), a.Verdict), named(s)))
			bound := "no bound"
			if a.Bound != nil {
				bound = fmt.Sprintf("%s %s (%s)", verdictBound(r, s, a), kept(withUnit(boundFigure(s, a), s.Unit)), a.Method)
			}
			b.WriteString(wrapped(hanging,
				fmt.Sprintf("%s; %s; criterion %s", estimateText(s), bound, kept(criterionText(s, a)))))
			if s.Estimate != nil && (a.Verdict != "met" || strings.Contains(a.Why, byCompanion)) {
				b.WriteString(wrapped(hanging, a.Why))
			}
		}
		writeDoubts(&b, s)
	}
	heading = "\nOther figures\n"
	for _, s := range plain {
		b.WriteString(heading)
		heading = ""
		b.WriteString(wrapped("  ○ ", named(s)))
		text := estimateText(s)
		for k := range s.Intervals {
			if i := &s.Intervals[k]; !i.Companion {
				text += "; " + intervalText(s, i)
			}
		}
		b.WriteString(wrapped(hanging, text))
		writeDoubts(&b, s)
	}
	fmt.Fprintf(&b, "\n%s Verdict of the study: %s\n", markOf(r.Verdict), r.Verdict)
	fmt.Fprintf(&b, "  %s/ holds record.json, results.xlsx, appendix.pdf and plan.yaml\n", folder)
	_, err := w.Write(b.Bytes())
	return err
}

// hanging is the indentation of what stands under a line with a verdict.
const hanging = "              "

// named is the label of a statistic with its id, by which the plan and the files name it.
func named(s *record.Statistic) string {
	if s.ID == s.Label {
		return s.Label
	}
	return fmt.Sprintf("%s (%s)", s.Label, s.ID)
}

// estimateText is the estimate with its unit, or why there is none.
func estimateText(s *record.Statistic) string {
	if s.Estimate == nil {
		return "no estimate: " + s.EstimateReason
	}
	return "estimate " + kept(withUnit(estimateFigure(s), s.Unit))
}

// intervalText writes an interval in one clause.
func intervalText(s *record.Statistic, i *record.Interval) string {
	lower, upper := limitFigures(s, i)
	text := boundText(i.Bound, i.Confidence) + " "
	switch {
	case i.Reason != "":
		return fmt.Sprintf("no %s limit: %s", i.Method, i.Reason)
	case i.Bound == spec.Lower:
		text += kept(withUnit(lower, s.Unit))
	case i.Bound == spec.Upper:
		text += kept(withUnit(upper, s.Unit))
	default:
		text += kept(withUnit(lower+" to "+upper, s.Unit))
	}
	return fmt.Sprintf("%s (%s)", text, i.Method)
}

// writeDoubts writes the stops and cautions of a statistic; the notes stand in the workbook and the appendix.
func writeDoubts(b *bytes.Buffer, s *record.Statistic) {
	for _, a := range s.Advisories {
		if a.Severity != advisory.Note {
			b.WriteString(wrapped(hanging+a.Severity+": ", a.Code+". "+a.Text))
		}
	}
}

// Outline writes the plan as it would run, every default made visible, from results without figures.
func Outline(w io.Writer, r *record.Results) error {
	var b bytes.Buffer
	p := &r.Plan.Resolved
	entry := func(name, value string) { b.WriteString(wrapped(fmt.Sprintf("  %-14s ", name), value)) }
	fmt.Fprintf(&b, "Plan %s\n", r.Plan.File)
	entry("study", p.Study.ID)
	entry("title", orElse(p.Study.Title, notStated))
	entry("purpose", orElse(p.Study.Purpose, notStated))
	entry("protocol", orElse(p.Study.Protocol, notStated))
	entry("author", orElse(p.Study.Author, notStated))
	entry("status", p.Study.Status)
	entry("plan digest", r.Plan.SHA256)
	entry("seed", seedText(p))
	if p.Rounding != nil {
		text := p.Rounding.Rule
		if p.Rounding.Rule == "rounded" {
			text += ", ties " + p.Rounding.Ties
		}
		entry("rounding", text)
	}
	for _, a := range p.Amendments {
		seen := "before results were seen"
		if a.ResultsSeen {
			seen = "after results were seen"
		}
		entry(fmt.Sprintf("amendment %d", a.Number), fmt.Sprintf("%s, %s: %s %s", a.Date, seen, a.What, a.Why))
	}
	for i := range r.Sources {
		s := &r.Sources[i]
		fmt.Fprintf(&b, "\nSource %s\n", s.Name)
		entry("file", fmt.Sprintf("%s, %s bytes", s.File, grouped(s.Bytes)))
		stated := "the plan states none"
		if s.Approved == "agrees" {
			stated = "agrees with the plan"
		}
		entry("SHA-256", s.SHA256+" ("+stated+")")
		entry("rows", rowsText(s))
		for _, e := range s.Exclusions {
			rows := countText(len(e.Lines)) + " rows"
			if len(e.Lines) == 1 {
				rows = "1 row"
			}
			entry("excluded", fmt.Sprintf("%s where %s; %s By: %s", rows, e.Where, e.Because, orElse(e.By, notStated)))
		}
		for _, c := range p.Sources[i].Columns {
			entry("column", columnText(c))
		}
		for _, d := range p.Sources[i].Derive {
			entry("derived", withUnit(fmt.Sprintf("%s = %s", d.Name, d.Formula), bracketed(d.Unit)))
		}
		if len(p.Sources[i].Missing) > 0 {
			entry("missing", "the empty cell and "+strings.Join(p.Sources[i].Missing, ", "))
		}
		if len(s.Ignored) > 0 {
			entry("not used", strings.Join(s.Ignored, ", "))
		}
	}
	for i := range r.Statistics {
		s, q := &r.Statistics[i], &p.Statistics[i]
		fmt.Fprintf(&b, "\nStatistic %s\n", s.ID)
		entry("label", s.Label)
		entry("role", s.Role)
		entry("statistic", describe(s))
		entry("given in", orElse(s.Unit, "no unit"))
		entry("rows", fmt.Sprintf("%s read = %s used + %s excluded + %s missing + %s outside", countText(s.Rows.Read),
			countText(s.Rows.Used), countText(s.Rows.Excluded), countText(s.Rows.Missing), countText(s.Rows.Outside)))
		entry("unit", strings.Join(s.Design.Unit, ", then ")+fmt.Sprintf("; %s outermost units", countText(s.Design.Units)))
		if c := s.Compare; c != nil {
			how := "drawn separately"
			if c.Paired {
				how = "paired, drawn jointly"
			}
			entry("groups", fmt.Sprintf("%s: %d rows in %d units; %s: %d rows in %d units; %s", c.Of[0], c.N[0], c.Units[0],
				c.Of[1], c.N[1], c.Units[1], how))
		}
		if len(s.Design.Strata) > 1 {
			var parts []string
			for _, st := range s.Design.Strata {
				parts = append(parts, fmt.Sprintf("%s: %s units, %s rows", st.Name, countText(st.Units), countText(st.Rows)))
			}
			entry("strata", strings.Join(parts, "; "))
		}
		entry("resamples", countText(q.Resampling.Resamples))
		entry("bound", string(q.Bound))
		var levels []string
		for _, c := range q.Confidence {
			levels = append(levels, confidenceText(c.Text))
		}
		entry("confidence", strings.Join(levels, ", "))
		entry("intervals", strings.Join(q.Intervals, ", "))
		companion := "none applies"
		for _, in := range s.Intervals {
			if in.Companion {
				companion = in.Method + ", " + q.Companion
			}
		}
		entry("companion", companion)
		var criteria []string
		if q.Accept.LowerAtLeast != nil {
			criteria = append(criteria, withUnit("lower limit at least "+minus(q.Accept.LowerAtLeast.Text), s.Unit))
		}
		if q.Accept.UpperAtMost != nil {
			criteria = append(criteria, withUnit("upper limit at most "+minus(q.Accept.UpperAtMost.Text), s.Unit))
		}
		entry("criterion", orElse(strings.Join(criteria, "; "), "none"))
	}
	b.WriteString("\nThe plan and the data are in order. Nothing was drawn.\n")
	_, err := w.Write(b.Bytes())
	return err
}

func columnText(c spec.Column) string {
	text := c.Name + ": " + string(c.Type)
	if c.Unit != "" {
		text += ", " + c.Unit
	}
	if c.Decimals >= 0 && c.Type == spec.TypeNumber {
		text += fmt.Sprintf(", %d decimals", c.Decimals)
	}
	if c.Type == spec.TypeNumber {
		text += ", shape " + orElse(c.Shape, "unknown")
	}
	if len(c.Levels) > 0 {
		text += ": " + strings.Join(c.Levels, ", ")
	}
	return text
}

// Catalogue lists what a plan may name.
func Catalogue(w io.Writer) error {
	var b bytes.Buffer
	entry := func(name, summary string) {
		first, _, _ := strings.Cut(summary, ". ")
		b.WriteString(wrapped(fmt.Sprintf("  %-32s  ", name), strings.TrimSuffix(first, ".")+"."))
	}
	b.WriteString("Statistics\n")
	for _, d := range statistic.All() {
		entry(d.Name, d.Summary)
	}
	b.WriteString("\nIntervals\n")
	for _, d := range interval.All() {
		entry(d.Name, d.Summary)
	}
	b.WriteString("\nAdvisories\n")
	for _, d := range advisory.All() {
		entry(d.Code, d.Summary)
	}
	b.WriteString("\nlotproof catalogue NAME shows an entry with formula and source.\n")
	_, err := w.Write(b.Bytes())
	return err
}

// CatalogueEntry writes everything that the catalogue says of one name, whatever it names.
func CatalogueEntry(w io.Writer, name string) (found bool, err error) {
	var b bytes.Buffer
	entry := func(title, text string) {
		if text != "" {
			b.WriteString(wrapped(fmt.Sprintf("  %-12s ", title), text))
		}
	}
	sources := func(list []string) {
		for _, s := range list {
			entry("source", s)
		}
	}
	if d := statistic.Lookup(name); d != nil {
		fmt.Fprintf(&b, "%s (statistic)\n", d.Name)
		entry("what", d.Summary)
		entry("formula", d.Formula)
		entry("where", d.Where)
		entry("assumes", d.Assumptions)
		for _, p := range d.Parameters {
			text := p.Name + ": " + p.Summary
			if p.Default != "" {
				text += " Default " + p.Default + "."
			}
			entry("with", text)
		}
		sources(d.Sources)
	}
	if d := interval.Lookup(name); d != nil {
		fmt.Fprintf(&b, "%s (interval)\n", d.Name)
		entry("what", d.Summary)
		entry("formula", d.Formula)
		entry("where", d.Where)
		entry("limits", d.Limits)
		entry("applies to", orElse(strings.Join(d.Statistics, ", "), "every statistic"))
		sources(d.Sources)
	}
	for _, d := range advisory.All() {
		if strings.EqualFold(d.Code, name) {
			fmt.Fprintf(&b, "%s (advisory)\n", d.Code)
			entry("what", d.Summary)
			entry("what to do", d.Action)
			entry("source", d.Source)
		}
	}
	if b.Len() == 0 {
		return false, nil
	}
	_, err = w.Write(b.Bytes())
	return true, err
}
