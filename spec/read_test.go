package spec

import (
	"encoding/json"
	"os"
	"reflect"
	"strings"
	"testing"
)

// testCatalogue is a small catalogue with every kind of entry.
func testCatalogue() Catalogue {
	return Catalogue{
		Statistics: []StatisticEntry{
			{Name: "mean", Columns: 1},
			{Name: "median", Columns: 1},
			{Name: "trimmed mean", Columns: 1, Parameters: []Parameter{
				{Name: "trim", Kind: KindNumber, Min: 0, Max: 0.5, MinIncluded: true, Summary: "the share cut off at each end"}}},
			{Name: "quantile", Columns: 1, Parameters: []Parameter{
				{Name: "p", Kind: KindNumber, Min: 0, Max: 1, Summary: "the share below it"},
				{Name: "definition", Kind: KindWhole, Min: 1, Max: 9, Default: "7", Summary: "the definition, 1 to 9"}}},
			{Name: "proportion", Columns: 0, Parameters: []Parameter{
				{Name: "condition", Kind: KindCondition, Summary: "the condition that is counted"}}},
			{Name: "Pearson correlation", Columns: 2},
			{Name: "repeatability standard deviation", Columns: 1, Parameters: []Parameter{
				{Name: "factor", Kind: KindCategory, Summary: "the column whose groups are repeated"}}},
		},
		Intervals: []IntervalEntry{
			{Name: "percentile", Compare: true},
			{Name: "bca", Compare: true},
			{Name: "order statistic", Statistics: []string{"median", "quantile"}},
			{Name: "t", Statistics: []string{"mean"}},
		},
	}
}

func must(t testing.TB, err error) {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
}

func readFile(t testing.TB, name string) *Plan {
	t.Helper()
	f, err := os.Open(name)
	must(t, err)
	defer f.Close()
	p, err := Read(f, name, testCatalogue())
	must(t, err)
	return p
}

func read(text string) (*Plan, error) {
	return Read(strings.NewReader(text), "plan.yaml", testCatalogue())
}

// equal compares two values and shows them as JSON, field by field, if they differ.
func equal(t *testing.T, what string, got, want any) {
	t.Helper()
	if !reflect.DeepEqual(got, want) {
		g, err := json.MarshalIndent(got, "", " ")
		must(t, err)
		w, err := json.MarshalIndent(want, "", " ")
		must(t, err)
		t.Errorf("%s\n got %s\nwant %s", what, g, w)
	}
}

// The smallest plan: everything that it leaves out is written out in the Plan.
func TestDefaults(t *testing.T) {
	p := readFile(t, "testdata/small.yaml")
	text, err := os.ReadFile("testdata/small.yaml")
	must(t, err)
	if p.positions = nil; p.Text != string(text) {
		t.Error("the text of the plan is not kept")
	}
	p.Text = ""
	level := []Number{{"0.95", 0.95}}
	equal(t, "small.yaml", p, &Plan{
		File: "testdata/small.yaml",
		// By Python 3 with PyYAML, as described at digest.
		SHA256:   "0ccb6bd0fc08138c7238e8ce4374e762cacc91d3725ba098840dcf4de0dd1b81",
		Language: 1,
		Study:    Study{ID: "S-1", Status: "draft", Disclaimers: []string{}},
		Sources: []Source{{Name: "peel", File: "peel.csv", Missing: []string{}, Exclude: []Exclusion{}, Derive: []Derived{},
			Columns: []Column{
				{Name: "arm", Type: TypeCategory, Decimals: -1, Levels: []string{"fresh", "aged"}},
				{Name: "note", Type: TypeText, Decimals: -1, Levels: []string{}},
				{Name: "pouch", Type: TypeCategory, Decimals: -1, Levels: []string{}},
				{Name: "strength", Type: TypeNumber, Decimals: -1, Levels: []string{}, Shape: "unknown"},
				{Name: "width", Type: TypeNumber, Decimals: -1, Levels: []string{}, Shape: "unknown"},
			}}},
		Seed:       Seed{Value: 1},
		Confidence: level,
		Resampling: &Resampling{Unit: []string{"pouch"}, Strata: []string{}, Resamples: 1000},
		Statistics: []Statistic{{ID: "m", Label: "m", Role: "primary", Source: "peel", Name: "mean", Of: []string{"strength"},
			With: []Setting{}, Bound: TwoSided, Confidence: level, Intervals: []string{"percentile"}, Companion: "shown",
			Decimals: -1, Resampling: Resampling{Unit: []string{"pouch"}, Strata: []string{}, Resamples: 1000}}},
		Amendments: []Amendment{},
	})
}

// A plan with every key.
func TestEveryKey(t *testing.T) {
	p := readFile(t, "testdata/pouch.yaml")
	equal(t, "study", p.Study, Study{
		ID:    "PS-2041",
		Title: "Peel strength of sterile-barrier pouches after ageing",
		Purpose: "Show that aged pouches keep a median peel strength of 1.20 N per 15 mm.\n" +
			"The study is invented.",
		Protocol: "VP-118 revision C", Author: "not stated", Status: "approved",
		Disclaimers: []string{"Device safety is judged by the responsible person, not by this report."},
	})
	none := []string{}
	equal(t, "sources", p.Sources, []Source{
		{
			Name: "peel", File: "data/peel.csv", Missing: []string{"NA", "n/a"},
			SHA256: "5f2c0000000000000000000000000000000000000000000000000000000000aa",
			Columns: []Column{
				{"arm", TypeCategory, "", -1, []string{"fresh", "aged"}, ""},
				{"failure mode", TypeCategory, "", -1, none, ""},
				{"lot", TypeCategory, "", -1, none, ""},
				{"note", TypeText, "", -1, none, ""},
				{"pouch", TypeCategory, "", -1, none, ""},
				{"strength", TypeNumber, "N/15mm", 2, none, "skewed"},
				{"width", TypeNumber, "mm", -1, none, "unknown"},
			},
			Exclude: []Exclusion{
				{`note == "void"`, "Grip slipped. Deviation D-07.", "lab"},
				{`strength > 9 and not (failure_mode in ["tear", "burst"])`, "Unit mixed up.", "lab"},
			},
			Derive: []Derived{
				{"excess", "strength - 1.20", "", -1},
				{"per width", "15 * strength / width", "N/15mm", 3},
			},
		},
		{
			Name: "second", File: "second.xlsx", Sheet: "Results", Missing: none, Exclude: []Exclusion{}, Derive: []Derived{},
			Columns: []Column{{"day", TypeText, "", -1, none, ""}, {"reading", TypeNumber, "", -1, none, "unknown"}},
		},
	})
	levels := []Number{{"0.95", 0.95}, {"0.90", 0.9}}
	byDefault := Resampling{Unit: []string{"pouch"}, Strata: []string{"lot"}, Resamples: 20000}
	equal(t, "seed", p.Seed, Seed{Value: 20410117})
	equal(t, "confidence", p.Confidence, levels)
	equal(t, "resampling", p.Resampling, &byDefault)
	equal(t, "rounding", p.Rounding, &Rounding{"rounded", "even"})
	noSetting := []Setting{}
	want := []Statistic{
		{
			ID: "aged median", Label: "Median peel strength, aged pouches", Role: "supporting", Source: "peel",
			Where: `arm == "aged"`, Name: "median", Of: []string{"strength"}, With: noSetting, Bound: Lower,
			Confidence: []Number{{"0.99", 0.99}}, Intervals: []string{"bca", "order statistic"}, Companion: "decides",
			Accept: Accept{LowerAtLeast: &Number{"1.20", 1.2}}, Decimals: 2, Resampling: byDefault,
		},
		{
			ID: "loss", Label: "loss", Role: "primary", Source: "peel", Name: "quantile", Of: []string{"per width"},
			With:    []Setting{{"p", "0.1", 0.1}, {"definition", "7", 7}},
			Compare: &Compare{By: "arm", Of: [2]string{"aged", "fresh"}, As: "difference"}, Bound: TwoSided,
			Confidence: levels, Intervals: []string{"bca"}, Companion: "shown", Decimals: -1,
			Accept:     Accept{LowerAtLeast: &Number{"-0.15", -0.15}, UpperAtMost: &Number{"1.5e-1", 0.15}},
			Resampling: Resampling{Unit: []string{"lot", "pouch", Row}, Strata: none, Resamples: 1999},
		},
		{
			ID: "share of peels", Label: "share of peels", Role: "primary", Source: "peel", Name: "proportion", Of: none,
			With: []Setting{{"condition", `failure_mode == "peel"`, 0}}, Bound: Upper, Confidence: levels,
			Intervals: []string{"percentile"}, Companion: "shown", Decimals: -1, Resampling: byDefault,
		},
		{
			ID: "association", Label: "association", Role: "primary", Source: "peel", Name: "Pearson correlation",
			Of: []string{"width", "strength"}, With: noSetting, Bound: TwoSided, Confidence: levels,
			Intervals: []string{"bca"}, Companion: "shown", Decimals: -1, Resampling: byDefault,
		},
		{
			ID: "repeatability", Label: "repeatability", Role: "primary", Source: "peel",
			Name: "repeatability standard deviation", Of: []string{"strength"}, With: []Setting{{"factor", "pouch", 0}},
			Bound: TwoSided, Confidence: levels, Intervals: []string{"percentile"}, Companion: "shown", Decimals: -1,
			Resampling: byDefault,
		},
		{
			ID: "reading", Label: "reading", Role: "primary", Source: "second", Name: "quantile", Of: []string{"reading"},
			With: []Setting{{"p", "0.5", 0.5}, {"definition", "6", 6}}, Bound: TwoSided, Confidence: levels,
			Intervals: []string{"percentile"}, Companion: "shown", Decimals: -1,
			Resampling: Resampling{Unit: []string{"day"}, Strata: none, Resamples: 20000},
		},
	}
	if len(p.Statistics) != len(want) {
		t.Fatalf("%d statistics, want %d", len(p.Statistics), len(want))
	}
	for i := range want {
		equal(t, want[i].ID, p.Statistics[i], want[i])
	}
	equal(t, "amendments", p.Amendments, []Amendment{{1, "2041-02-03", "Second source added.",
		"Asked for by the sponsor.", false}})
}

// Later packages point into the plan by path; the text at the place is what they mean.
func TestPosition(t *testing.T) {
	p := readFile(t, "testdata/pouch.yaml")
	lines := strings.Split(p.Text, "\n")
	for _, tt := range []struct{ path, text string }{
		{"study.id", "PS-2041"},
		{"study.disclaimers[0]", "Device safety"},
		{"sources.peel", "peel:"},
		{"sources.peel.file", "data/peel.csv"},
		{"sources.peel.sheet", "peel:"}, // left out: the source
		{"sources.peel.sha256", "5F2C"},
		{"sources.second.sheet", "Results"},
		{"sources.peel.columns.strength", "strength: {"},
		{"sources.peel.columns.failure mode.type", "category}"},
		{"sources.peel.columns.arm.levels[1]", "aged]"},
		{"sources.peel.exclude[0].where", "'note =="},
		{"sources.peel.exclude[1]", "where: strength > 9"},
		{"sources.peel.derive.excess", "strength - 1.20"},
		{"sources.peel.derive.per width", "per width: {"},
		{"sources.peel.derive.per width.formula", "15 * strength"},
		{"seed", "20410117"},
		{"confidence[1]", "0.90]"},
		{"resampling.unit[0]", "pouch"},
		{"rounding.ties", "even"},
		{"statistics[0]", "id: aged median"},
		{"statistics[0].of[0]", "strength"},
		{"statistics[0].accept.lower_at_least", "1.20}"},
		{"statistics[0].with.p", "id: aged median"}, // left out: the statistic
		{"statistics[0].confidence[0]", "0.99"},
		{"statistics[0].resampling", "resampling:"},
		{"statistics[0].resampling.strata[0]", "lot"}, // the plan's default
		{"statistics[1].with.p", "0.1}"},
		{"statistics[1].compare.of[1]", "fresh]"},
		{"statistics[1].confidence[1]", "0.90]"},
		{"statistics[1].resampling.unit[2]", "row]"},
		{"statistics[5].resampling.resamples", "20000"},
		{"statistics[2].interval[0]", "percentile"},
		{"amendments[0].date", "2041-02-03"},
		{"nowhere.at[7].all", "# An invented study"},
	} {
		at := p.Position(tt.path)
		if at.Line < 1 || at.Line > len(lines) || at.Column < 1 || !strings.HasPrefix(lines[at.Line-1][at.Column-1:],
			tt.text) {
			t.Errorf("%s: place %d:%d, want that of %q", tt.path, at.Line, at.Column, tt.text)
		}
	}
	e := p.Mistake("statistics[0].of[0]", "the column is empty", "fill it")
	if want := "testdata/pouch.yaml:56:9: the column is empty; fill it"; e.Error() != want {
		t.Errorf("got %s, want %s", e, want)
	}
}
