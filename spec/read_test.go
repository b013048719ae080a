package spec

import (
	"os"
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
				{Name: "factor", Kind: KindCategory, Summary: "the column whose groups are repeated under the same conditions"}}},
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

func TestPouch(t *testing.T) {
	p := readFile(t, "testdata/pouch.yaml")
	if p.SHA256 == "" {
		t.Error("no digest")
	}
}
