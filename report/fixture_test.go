package report

import (
	"fmt"
	"math"
	"strings"

	"lotproof/runner/record"
	"lotproof/runner/source"
	"lotproof/spec"
)

// fixture returns an invented record and its data: a small study with every kind of verdict, a comparison, a companion
// that decides, an interval that cannot be had, a null estimate, and advisories of each severity. Its figures were made
// up to fit together roughly; no test may take them for results.
func fixture() (*record.Record, *source.Data) {
	text := fixturePlan
	plan := spec.Plan{
		File: "plan.yaml", Text: text, SHA256: fixtureDigest("plan"), Language: 1,
		Study: spec.Study{ID: "HB-07", Title: "Peel strength of sterile-barrier pouches after ageing",
			Purpose:  "Show that aged pouches keep a median peel strength of 1.20 N per 15 mm.",
			Protocol: "VP-118 revision C", Status: "draft",
			Disclaimers: []string{"Device safety is judged by the responsible person, not by this report."}},
		Sources: []spec.Source{{Name: "peel", File: "peel.csv", Missing: []string{"n/a"}, Columns: []spec.Column{
			{Name: "pouch", Type: spec.TypeCategory, Decimals: -1},
			{Name: "lot", Type: spec.TypeCategory, Decimals: -1},
			{Name: "arm", Type: spec.TypeCategory, Decimals: -1, Levels: []string{"fresh", "aged"}},
			{Name: "strength", Type: spec.TypeNumber, Unit: "N/15mm", Decimals: 2},
			{Name: "failure mode", Type: spec.TypeCategory, Decimals: -1},
			{Name: "note", Type: spec.TypeText, Decimals: -1},
		}, Exclude: []spec.Exclusion{
			{Where: `note == "void"`, Because: "Grip slipped. Deviation D-07.", By: "laboratory"},
			{Where: `note == "recut"`, Because: "Specimen was cut twice.", By: "not stated"},
		}, Derive: []spec.Derived{{Name: "excess", Formula: "strength - 1.20", Unit: "N/15mm", Decimals: 2}}}},
		Seed:       spec.Seed{Value: 20410117},
		Confidence: []spec.Number{{Text: "0.95", Value: 0.95}},
		Resampling: &spec.Resampling{Unit: []string{"pouch"}, Strata: []string{"lot"}, Resamples: 20000},
		Rounding:   &spec.Rounding{Rule: "absolute", Ties: "even"},
		Amendments: []spec.Amendment{{Number: 1, Date: "2041-02-03", What: "Specimens cut twice are excluded.",
			Why: "The second cut weakens the edge of the seal.", ResultsSeen: false}},
	}
	table := fixtureTable(plan.Sources[0])
	data := &source.Data{Tables: []*source.Table{table}}
	results := record.Results{
		Program: record.Program{Version: "0.1.0", PlanLanguage: 1, Generator: "xoshiro256++/1"},
		Sources: []record.Source{{Name: "peel", File: "peel.csv", Bytes: 4127, SHA256: table.SHA256, Approved: "not stated",
			Ignored: []string{"operator"}, Exclusions: []record.Exclusion{
				{Where: `note == "void"`, Because: "Grip slipped. Deviation D-07.", By: "laboratory", Lines: []int{}},
				{Where: `note == "recut"`, Because: "Specimen was cut twice.", By: "not stated", Lines: []int{}}}}},
		Verdict: "not met",
	}
	for _, r := range table.Rows {
		results.Sources[0].Rows.Read++
		if r.Excluded < 0 {
			results.Sources[0].Rows.Used++
			continue
		}
		results.Sources[0].Rows.Excluded++
		e := &results.Sources[0].Exclusions[r.Excluded]
		e.Lines = append(e.Lines, r.Line)
	}
	add := func(p spec.Statistic, s record.Statistic) {
		p.Source, p.Companion, p.Confidence = "peel", or(p.Companion, "shown"), plan.Confidence
		p.Resampling = spec.Resampling{Unit: s.Design.Unit, Strata: s.Design.By, Resamples: 20000}
		p.ID, p.Label, p.Role, p.Where, p.Name, p.Of, p.With = s.ID, s.Label, s.Role, s.Where, s.Statistic, s.Of, s.With
		p.Decimals = s.Decimals
		plan.Statistics = append(plan.Statistics, p)
		selection := fixtureSelection(table, p)
		data.Selections = append(data.Selections, selection)
		s.Source, s.Rows, s.N = "peel", selection.Counts(), len(selection.Rows)
		results.Statistics = append(results.Statistics, s)
	}
	pouches := record.Design{Unit: []string{"pouch"}, By: []string{"lot"}, Units: 30, SHA256: fixtureDigest("by pouch"),
		Strata: []record.Stratum{{Name: "A", Units: 10, Rows: 20}, {Name: "B", Units: 10, Rows: 20}, {Name: "C", Units: 10,
			Rows: 20}}}
	rows := record.Design{Unit: []string{"row"}, By: []string{}, Units: 58, SHA256: fixtureDigest("by row"),
		Strata: []record.Stratum{{Name: "", Units: 58, Rows: 58}}}

	add(spec.Statistic{Bound: spec.Lower, Intervals: []string{"bca", "percentile"},
		Accept: spec.Accept{LowerAtLeast: &spec.Number{Text: "1.20", Value: 1.2}}},
		record.Statistic{ID: "aged median", Label: "Median peel strength, aged pouches", Role: "primary",
			Where:     `arm == "aged"`,
			Statistic: "median", Of: []string{"strength"}, With: []spec.Setting{}, Unit: "N/15mm", Decimals: 3, Design: pouches,
			Estimate: num(1.31), StandardError: num(0.0213), Bias: num(0.00112), Resamples: 20000,
			Intervals: []record.Interval{
				{Method: "bca", Requested: "bca", Confidence: "0.95", Bound: spec.Lower, Lower: num(1.27), Decides: true,
					MonteCarloError: record.Limits{Lower: num(0.00041)}, Parameters: []record.Value{{Name: "z0", Value: num(0.0132)},
						{Name: "a", Value: num(0.0211)}, {Name: "lower level", Value: num(0.0587)}}},
				{Method: "percentile", Requested: "percentile", Confidence: "0.95", Bound: spec.Lower, Lower: num(1.265),
					MonteCarloError: record.Limits{Lower: num(0.00038)}, Parameters: []record.Value{{Name: "lower rank",
						Value: num(1000)}}},
				{Method: "order statistic", Requested: "companion", Confidence: "0.95", Bound: spec.Lower, Lower: num(1.26),
					Companion: true, Attained: num(0.9587), Parameters: []record.Value{{Name: "lower rank", Value: num(24)}}},
			},
			Accept: []record.Accept{{Criterion: "lower_at_least", Limit: "1.20", Method: "bca", Confidence: "0.95",
				Bound:    num(1.27),
				Compared: "1.27", Verdict: "met", Why: "the bound is on the right side of the criterion"}},
			Advisories: []record.Advisory{{Code: "coarse steps", Severity: "note",
				Text:     "The resamples give only 31 different values, the commonest in 9 % of them, so limits move in steps.",
				Evidence: []record.Value{{Name: "different values", Value: num(31)}},
				Action:   "Read the limits as steps of the measurement.", Source: "Thresholds of this program"}},
			Distribution: fixtureBell(1.311, 0.0213, 20000)})
	add(spec.Statistic{Bound: spec.TwoSided, Intervals: []string{"percentile", "basic"},
		Compare: &spec.Compare{By: "arm", Of: [2]string{"aged", "fresh"}, As: "difference"},
		Accept: spec.Accept{LowerAtLeast: &spec.Number{Text: "-0.15", Value: -0.15},
			UpperAtMost: &spec.Number{Text: "0.15", Value: 0.15}}},
		record.Statistic{ID: "loss", Label: "Loss of median peel strength by ageing", Role: "primary",
			Statistic: "median", Of: []string{"strength"}, With: []spec.Setting{}, Unit: "N/15mm", Decimals: 3, Design: pouches,
			Compare: &record.Compare{By: "arm", Of: [2]string{"aged", "fresh"}, As: "difference", N: [2]int{58, 59},
				Units: [2]int{30, 30}, Estimates: [2]*float64{num(1.31), num(1.42)}},
			Estimate: num(-0.11), StandardError: num(0.031), Bias: num(-0.0004), Resamples: 20000, FailedResamples: 3,
			Failures: []record.Failure{{Reason: "too few observations", Count: 3}},
			Intervals: []record.Interval{
				{Method: "percentile", Requested: "percentile", Confidence: "0.95", Bound: spec.TwoSided, Lower: num(-0.172),
					Upper: num(-0.051), Decides: true, MonteCarloError: record.Limits{Lower: num(0.0006), Upper: num(0.0005)},
					Parameters: []record.Value{{Name: "lower rank", Value: num(500)}, {Name: "upper rank", Value: num(19498)}}},
				{Method: "basic", Requested: "basic", Confidence: "0.95", Bound: spec.TwoSided, Lower: num(-0.169),
					Upper:           num(-0.048),
					MonteCarloError: record.Limits{Lower: num(0.0005), Upper: num(0.0006)}, Parameters: []record.Value{}}},
			Accept: []record.Accept{
				{Criterion: "lower_at_least", Limit: "-0.15", Method: "percentile", Confidence: "0.95", Bound: num(-0.172),
					Compared: "-0.172", Verdict: "not shown", Why: "the estimate is on the right side of the criterion, the bound " +
						"is not"},
				{Criterion: "upper_at_most", Limit: "0.15", Method: "percentile", Confidence: "0.95", Bound: num(-0.051),
					Compared: "-0.051", Verdict: "met", Why: "the bound is on the right side of the criterion"}},
			Advisories: []record.Advisory{},
			// an asymmetric criterion far from the values is part of the picture
			Distribution: fixtureBell(-0.1104, 0.031, 19997)})
	add(spec.Statistic{Bound: spec.Lower, Intervals: []string{"percentile"}, Companion: "decides",
		Accept: spec.Accept{LowerAtLeast: &spec.Number{Text: "1.10", Value: 1.1}}},
		record.Statistic{ID: "aged p10", Label: "10th percentile of peel strength, aged pouches", Role: "primary",
			Where:     `arm == "aged"`,
			Statistic: "quantile", Of: []string{"strength"}, With: []spec.Setting{{Name: "p", Text: "0.1", Number: 0.1},
				{Name: "definition", Text: "7", Number: 7}}, Unit: "N/15mm", Decimals: 3, Design: rows,
			Estimate: num(1.12), StandardError: num(0.024), Bias: num(0.003), Resamples: 20000,
			Intervals: []record.Interval{
				{Method: "percentile", Requested: "percentile", Confidence: "0.95", Bound: spec.Lower, Lower: num(1.09),
					MonteCarloError: record.Limits{Lower: num(0.0003)}, Parameters: []record.Value{{Name: "lower rank",
						Value: num(1000)}}},
				{Method: "order statistic", Requested: "companion", Confidence: "0.95", Bound: spec.Lower, Lower: num(1.05),
					Companion: true, Decides: true, Attained: num(0.9511), Parameters: []record.Value{{Name: "lower rank",
						Value: num(2)}}}},
			Accept: []record.Accept{{Criterion: "lower_at_least", Limit: "1.10", Method: "order statistic", Confidence: "0.95",
				Bound: num(1.05), Compared: "1.05", Verdict: "not shown",
				Why: "the estimate is on the right side of the criterion, the bound is not; decided by the companion, as the " +
					"plan says: stopped by related rows"}},
			Advisories: []record.Advisory{
				{Code: "related rows", Severity: "stop",
					Text: "Rows inside pouch resemble each other (intraclass correlation 0.52). The effective number of units is " +
						"about 38, not 58.",
					Evidence: []record.Value{{Name: "intraclass correlation", Value: num(0.52)}, {Name: "effective number",
						Value: num(38)}},
					Action: "Resample pouches, not rows.", Source: "Kish L. Survey Sampling. Wiley 1965, section 5.4"},
				{Code: "several criteria", Severity: "note", Text: "5 criteria at 95 %: the chance that all bounds hold is at " +
					"least 75 %.",
					Evidence: []record.Value{{Name: "criteria", Value: num(5)}}, Action: "Say in the protocol why each stands alone.",
					Source: "Arithmetic"}},
			Distribution: fixtureSteps()})
	add(spec.Statistic{Bound: spec.Upper, Intervals: []string{"bca"},
		Accept: spec.Accept{UpperAtMost: &spec.Number{Text: "0.10", Value: 0.1}}},
		record.Statistic{ID: "aged SD", Label: "Standard deviation of peel strength, aged pouches", Role: "supporting",
			Where:     `arm == "aged"`,
			Statistic: "standard deviation", Of: []string{"strength"}, With: []spec.Setting{}, Unit: "N/15mm", Decimals: 3,
			Design:   pouches,
			Estimate: num(0.128), StandardError: num(0.0121), Bias: num(-0.002), Resamples: 20000,
			Intervals: []record.Interval{{Method: "bca", Requested: "bca", Confidence: "0.95", Bound: spec.Upper,
				Upper:   num(0.153),
				Decides: true, MonteCarloError: record.Limits{Upper: num(0.0003)}, Parameters: []record.Value{{Name: "z0",
					Value: num(0.102)},
					{Name: "a", Value: num(0.051)}, {Name: "upper level", Value: num(0.978)}}}},
			Accept: []record.Accept{{Criterion: "upper_at_most", Limit: "0.10", Method: "bca", Confidence: "0.95",
				Bound:    num(0.153),
				Compared: "0.153", Verdict: "not met", Why: "estimate and bound are both on the wrong side of the criterion"}},
			Advisories: []record.Advisory{{Code: "spread from few units", Severity: "caution",
				Text: "Resampling bounds of a spread are too low on the upper side, the more so the longer the tails; there " +
					"are 30 units.",
				Evidence: []record.Value{{Name: "units", Value: num(30)}},
				Action:   "Use the studentized method, or take more units rather than more readings a unit.",
				Source:   "Simulation behind this program"}},
			Distribution: fixtureBell(0.126, 0.0121, 20000)})
	add(spec.Statistic{Bound: spec.Upper, Intervals: []string{"Clopper-Pearson"},
		Accept: spec.Accept{UpperAtMost: &spec.Number{Text: "0.05", Value: 0.05}}},
		record.Statistic{ID: "tears", Label: "Share of strips that tear", Role: "supporting", Statistic: "proportion",
			Of:   []string{},
			With: []spec.Setting{{Name: "condition", Text: `failure_mode == "tear"`}},
			Unit: "", Decimals: 4, Design: rows,
			Estimate: num(0.0085), StandardError: num(0.0084), Bias: num(0.0001), Resamples: 20000,
			Intervals: []record.Interval{{Method: "Clopper-Pearson", Requested: "Clopper-Pearson", Confidence: "0.95",
				Bound: spec.Upper,
				Upper: num(0.0399), Decides: true, Parameters: []record.Value{}}},
			Accept: []record.Accept{{Criterion: "upper_at_most", Limit: "0.05", Method: "Clopper-Pearson", Confidence: "0.95",
				Bound: num(0.0399), Compared: "0.0399", Verdict: "met", Why: "the bound is on the right side of the criterion"}},
			Advisories: []record.Advisory{},
			Distribution: &record.Distribution{Edges: []float64{0, 0.01, 0.02, 0.03, 0.04, 0.05}, Counts: []int{7361, 7345,
				3661, 1278, 355},
				Quantiles: []record.Point{{P: 0, Value: 0}, {P: 0.5, Value: 0.0085}, {P: 1, Value: 0.05}}}})
	add(spec.Statistic{Bound: spec.TwoSided, Intervals: []string{"studentized", "normal"}},
		record.Statistic{ID: "spread ratio", Label: "Coefficient of variation, aged over fresh", Role: "supporting",
			Statistic: "coefficient of variation", Of: []string{"strength"}, With: []spec.Setting{}, Unit: "", Decimals: 3,
			Design: pouches,
			Compare: &record.Compare{By: "arm", Of: [2]string{"aged", "fresh"}, As: "ratio", Paired: true, N: [2]int{58, 59},
				Units: [2]int{30, 30}, Estimates: [2]*float64{num(0.0977), num(0.0812)}},
			Estimate: num(1.203), StandardError: num(0.141), Bias: num(0.006), Resamples: 20000,
			Intervals: []record.Interval{
				{Method: "studentized", Requested: "studentized", Confidence: "0.95", Bound: spec.TwoSided,
					Reason:     "on more than 5 % of the resamples the standard error has no value",
					Parameters: []record.Value{}},
				{Method: "normal", Requested: "normal", Confidence: "0.95", Bound: spec.TwoSided, Lower: num(0.921),
					Upper:           num(1.473),
					MonteCarloError: record.Limits{Lower: num(0.0021), Upper: num(0.0021)}, Parameters: []record.Value{}}},
			Accept: []record.Accept{}, Advisories: []record.Advisory{}, Distribution: fixtureBell(1.209, 0.141, 20000)})
	add(spec.Statistic{Bound: spec.Lower, Intervals: []string{"bca"},
		Accept: spec.Accept{LowerAtLeast: &spec.Number{Text: "0", Value: 0}}},
		record.Statistic{ID: "excess", Label: "Geometric mean of the excess over 1.20", Role: "supporting",
			Statistic: "geometric mean", Of: []string{"excess"}, With: []spec.Setting{}, Unit: "N/15mm", Decimals: 3,
			Design:         pouches,
			EstimateReason: "a value or a mean that must be positive is not",
			Intervals:      []record.Interval{},
			Accept: []record.Accept{{Criterion: "lower_at_least", Limit: "0", Confidence: "0.95", Verdict: "not shown",
				Why: "there is no estimate: a value or a mean that must be positive is not"}},
			Advisories: []record.Advisory{}})
	results.Plan = record.Plan{Study: plan.Study.ID, File: "plan.yaml", SHA256: plan.SHA256, Text: text, Resolved: plan}
	for i := range results.Statistics {
		s := &results.Statistics[i]
		if s.Failures == nil {
			s.Failures = []record.Failure{}
		}
	}
	return &record.Record{Version: record.Version, Results: results, ResultsSHA256: fixtureDigest("results"),
		Run: record.Run{Number: 3, Started: "2041-02-17T09:30:00Z", Finished: "2041-02-17T09:30:04Z", System: "linux/amd64",
			Go: "go1.26"}}, data
}

const fixturePlan = `lotproof: 1
# Invented study, used by the tests of the reports.
study:
  id: HB-07
  title: Peel strength of sterile-barrier pouches after ageing
  purpose: Show that aged pouches keep a median peel strength of 1.20 N per 15 mm.
  protocol: VP-118 revision C
  status: draft
sources:
  peel:
    file: peel.csv
    missing: [n/a]
seed: 20410117
confidence: 0.95
resampling: {unit: pouch, strata: lot, resamples: 20000}
rounding: {rule: absolute, ties: even}
statistics:
  - id: aged median
    where: arm == "aged"
    statistic: median
    of: strength
    bound: lower
    interval: [bca, percentile]
    accept: {lower_at_least: 1.20}
`

func or(text, otherwise string) string {
	if text == "" {
		return otherwise
	}
	return text
}

func num(v float64) *float64 { return &v }

// fixtureDigest makes something that looks like a SHA-256 and depends on the text.
func fixtureDigest(text string) string {
	h := uint32(2166136261)
	var b strings.Builder
	for i := range 8 {
		for _, c := range []byte(text) {
			h = (h ^ uint32(c) + uint32(i)) * 16777619
		}
		fmt.Fprintf(&b, "%08x", h)
	}
	return b.String()
}

// fixtureTable makes 120 rows: two arms, three lots, ten pouches a lot and arm, two strips a pouch.
func fixtureTable(s spec.Source) *source.Table {
	t := &source.Table{Source: s, Bytes: 4127, SHA256: fixtureDigest("peel.csv"), Ignored: []string{"operator"}}
	texts := make([][]string, 7)
	for i := range 120 {
		arm, lot, pouch := i/60, i/20%3, i/2
		strength := 1.42 - 0.11*float64(arm) + 0.05*float64(i*7%11-5)/5
		cell := fmt.Sprintf("%.2f", strength)
		note, excluded, mode := "", -1, "peel"
		switch i {
		case 17:
			note, excluded = "void", 0
		case 81, 82:
			note, excluded = "recut", 1
		case 50:
			cell = "n/a"
		case 100:
			mode = "tear"
		case 101:
			note = "=1+1" // text that looks like a formula
		}
		for j, v := range []string{fmt.Sprintf("P%03d", pouch+1), string(rune('A' + lot)), []string{"fresh", "aged"}[arm],
			cell, mode, note, ""} {
			texts[j] = append(texts[j], v)
		}
		t.Rows = append(t.Rows, source.Row{Line: i + 2, Excluded: excluded})
	}
	for j, c := range append(s.Columns, spec.Column{Name: "excess", Type: spec.TypeNumber, Unit: "N/15mm", Decimals: 2}) {
		column := source.Column{Name: c.Name, Type: c.Type, Unit: c.Unit, Decimals: c.Decimals, Derived: c.Name == "excess",
			Texts: texts[j], Missing: make([]bool, len(t.Rows))}
		if c.Type == spec.TypeNumber {
			column.Numbers = make([]float64, len(t.Rows))
			for i := range column.Numbers {
				v := math.NaN()
				if texts[3][i] != "n/a" {
					fmt.Sscan(texts[3][i], &v)
					if column.Derived {
						v -= 1.2
					}
				}
				column.Numbers[i], column.Missing[i] = v, math.IsNaN(v)
			}
		}
		t.Columns = append(t.Columns, column)
	}
	return t
}

// fixtureSelection makes the row ledger of a statistic of the fixture.
func fixtureSelection(t *source.Table, p spec.Statistic) *source.Selection {
	s := &source.Selection{Table: t}
	arm, strength := t.Column("arm"), t.Column("strength")
	for i, r := range t.Rows {
		state, lacks := source.Used, ""
		switch {
		case r.Excluded >= 0:
			state = source.Excluded
		case p.Where != "" && arm.Texts[i] != "aged":
			state = source.Outside
		case len(p.Of) > 0 && strength.Missing[i]:
			state, lacks = source.Missing, p.Of[0]
		default:
			s.Rows = append(s.Rows, i)
			if p.Compare != nil {
				s.Group = append(s.Group, map[string]int{"aged": 0, "fresh": 1}[arm.Texts[i]])
			}
		}
		s.States, s.Lacks = append(s.States, state), append(s.Lacks, lacks)
	}
	return s
}

// fixtureBell makes a bell-shaped histogram of 40 bins around the middle.
func fixtureBell(middle, width float64, resamples int) *record.Distribution {
	d := &record.Distribution{}
	weights, sum := make([]float64, 40), 0.0
	for i := range weights {
		z := (float64(i) - 19.5) / 5.2
		weights[i] = math.Exp(-z*z/2) * (1 + 0.12*math.Sin(float64(3*i)))
		sum += weights[i]
	}
	left := resamples
	for i, w := range weights {
		d.Edges = append(d.Edges, middle+(float64(i)-20)/5.2*width)
		n := int(w / sum * float64(resamples))
		if i == 20 {
			n = 0
		}
		d.Counts = append(d.Counts, n)
		left -= n
	}
	d.Counts[20] = left
	d.Edges = append(d.Edges, middle+20/5.2*width)
	for _, p := range []float64{0, 0.025, 0.05, 0.25, 0.5, 0.75, 0.95, 0.975, 1} {
		d.Quantiles = append(d.Quantiles, record.Point{P: p, Value: middle + width*(4*p-2)})
	}
	return d
}

// fixtureSteps makes the histogram of a statistic that takes few values.
func fixtureSteps() *record.Distribution {
	d := &record.Distribution{Edges: []float64{1.03}, Quantiles: []record.Point{{P: 0, Value: 1.03}, {P: 0.5,
		Value: 1.12}, {P: 1, Value: 1.23}}}
	for i := range 40 {
		n := 0
		if i%4 == 1 {
			n = []int{40, 310, 1800, 4200, 5600, 4100, 2500, 1050, 320, 80}[i/4]
		}
		d.Edges = append(d.Edges, 1.03+0.005*float64(i+1))
		d.Counts = append(d.Counts, n)
	}
	return d
}
