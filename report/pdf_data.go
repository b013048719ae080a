package report

import (
	"strconv"
	"strings"

	"lotproof/runner/record"
	"lotproof/spec"
)

// dataPart says what was read, what was taken out and why, and how the rows of each statistic add up.
func (a *appendix) dataPart() {
	f := a.flow
	f.add(a.section(0, "Data and exclusions", "data")...)
	for i := range a.results.Sources {
		s := &a.results.Sources[i]
		f.add(a.section(1, "Source "+s.Name, "source "+s.Name)...)
		f.add(pairs([][2]cell{
			pair("File", s.File, "not stated"),
			pair("Size", grouped(s.Bytes)+" bytes", ""),
			{cellText(quiet, "Digest (SHA-256)"), {runs: digestRuns(s.SHA256)}},
			pair("Digest in the plan", s.Approved, "not stated"),
			pair("Rows", rowsText(s), ""),
			pair("Cells that mean no value", missingMarks(a.plan, s.Name), ""),
			pair("Columns not declared", strings.Join(s.Ignored, ", "), "none"),
		}, 0)...)
		a.columns(i)
		a.exclusions(s)
	}
	a.ledger()
}

// missingMarks lists the cell texts of a source that mean no value.
func missingMarks(p *spec.Plan, source string) string {
	marks := []string{"the empty cell"}
	for _, s := range p.Sources {
		if s.Name == source {
			marks = append(marks, s.Missing...)
		}
	}
	return strings.Join(marks, ", ")
}

// columns lists the declared columns of a source as read.
func (a *appendix) columns(i int) {
	if i >= len(a.data.Tables) || a.data.Tables[i] == nil {
		return
	}
	t := table{columns: []column{{title: "Column"}, {title: "Type"}, {title: "Unit"},
		{title: "Missing values", align: right}, {title: "Note"}}, size: small.size, before: 1}
	formulas := map[string]string{}
	for _, d := range a.data.Tables[i].Source.Derive {
		formulas[d.Name] = d.Formula
	}
	for _, c := range a.data.Tables[i].Columns {
		missing := 0
		for _, m := range c.Missing {
			if m {
				missing++
			}
		}
		note := cell{}
		if c.Derived {
			note = cell{runs: []run{{text: "derived: ", style: small}, {text: formulas[c.Name], style: code}}}
		}
		t.rows = append(t.rows, []cell{cellText(small, c.Name), cellText(small, string(c.Type)),
			cellText(small, orDash(c.Unit)), cellText(small, grouped(int64(missing))), note})
	}
	over := caption(a.tableLabel(), "Columns of "+a.results.Sources[i].Name+" as read.", 4)
	a.flow.add(tableWithCaption(over, t)...)
}

// tableWithCaption sets the caption above the table and keeps it with the first row.
func tableWithCaption(caption []atom, t table) []atom {
	for i := range caption {
		caption[i].keep = true
	}
	return append(caption, t.atoms()...)
}

func orDash(text string) string {
	if text == "" {
		return "–"
	}
	return text
}

// exclusions lists the rules of a source, also those that took out no row.
func (a *appendix) exclusions(s *record.Source) {
	if len(s.Exclusions) == 0 {
		a.flow.add(prose("No rows were excluded.")...)
		return
	}
	t := table{columns: []column{{title: "Rule: rows where", most: 46}, {title: "Reason"}, {title: "Stated by", most: 28},
		{title: "Rows", align: right}, {title: "Lines of the file", least: 25, most: 40}}, size: small.size, before: 1}
	for _, e := range s.Exclusions {
		t.rows = append(t.rows, []cell{cellText(code, e.Where), cellText(small, e.Because), cellText(small, e.By),
			cellText(small, grouped(int64(len(e.Lines)))), cellText(small, lineRanges(e.Lines))})
	}
	over := caption(a.tableLabel(), "Rows excluded from every analysis of "+s.Name+", with the reason.", 4)
	a.flow.add(tableWithCaption(over, t)...)
}

// lineRanges writes ascending line numbers, joining neighbours: 3, 17–19.
func lineRanges(lines []int) string {
	if len(lines) == 0 {
		return "–"
	}
	var parts []string
	for i := 0; i < len(lines); {
		j := i
		for j+1 < len(lines) && lines[j+1] == lines[j]+1 {
			j++
		}
		switch j - i {
		case 0:
			parts = append(parts, strconv.Itoa(lines[i]))
		case 1:
			parts = append(parts, strconv.Itoa(lines[i]), strconv.Itoa(lines[j]))
		default:
			parts = append(parts, strconv.Itoa(lines[i])+"–"+strconv.Itoa(lines[j]))
		}
		i = j + 1
	}
	return strings.Join(parts, ", ")
}

// ledger says for each statistic how its rows add up.
func (a *appendix) ledger() {
	if len(a.results.Statistics) == 0 {
		return
	}
	t := table{columns: []column{{title: "Statistic"}, {title: "Source", most: 24}, {title: "Rows where", most: 46},
		{title: "Read", align: right}, {title: "Used", align: right}, {title: "Excluded", align: right},
		{title: "Missing", align: right}, {title: "Outside", align: right}},
		size: small.size, before: 1}
	for i := range a.results.Statistics {
		s := &a.results.Statistics[i]
		row := []cell{{runs: []run{{text: s.Label, style: small.in(accent), to: statisticName(i)}}},
			cellText(small, s.Source), cellText(code, orDash(s.Where))}
		for _, n := range []int{s.Rows.Read, s.Rows.Used, s.Rows.Excluded, s.Rows.Missing, s.Rows.Outside} {
			row = append(row, cellText(small, grouped(int64(n))))
		}
		t.rows = append(t.rows, row)
	}
	a.flow.add(a.section(1, "Row ledger", "ledger")...)
	a.flow.add(prose("Of the rows read for a statistic, used + excluded + missing + outside = read. Missing: a needed " +
		"column has no value. Outside: the condition or the comparison of the statistic does not select the row.")...)
	a.flow.add(tableWithCaption(caption(a.tableLabel(), "Rows of each statistic.", 3), t)...)
}
