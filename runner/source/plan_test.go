package source

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"lotproof/spec"
)

// What is wrong with the data because of the plan is shown at its place in the plan.
func TestPlacesInPlan(t *testing.T) {
	const text = `lotproof: 1
study: {id: PS-1, title: Invented pouches}
sources:
  book:
    file: book.xlsx
    sheet: Dates
    columns:
      width: {type: number}
  gone:
    file: gone.csv
    columns: {x: {type: number}}
  many:
    file: book.xlsx
    columns: {x: {type: number}}
  peel:
    file: peel.csv
    sha256: 0000000000000000000000000000000000000000000000000000000000000000
    columns:
      arm: {type: category}
      strenth: {type: number}
seed: 1
confidence: 0.95
resampling: {unit: row, resamples: 1000}
statistics:
  - {id: m, source: peel, statistic: mean, of: strenth, interval: percentile}
`
	plan, err := spec.Read(strings.NewReader(text), "plan.yaml", spec.Catalogue{
		Statistics: []spec.StatisticEntry{{Name: "mean", Columns: 1}},
		Intervals:  []spec.IntervalEntry{{Name: "percentile"}}})
	must(t, err)
	dir := t.TempDir()
	must(t, os.WriteFile(filepath.Join(dir, "peel.csv"), []byte("arm,strength\naged,1.3\n"), 0o666))
	must(t, os.WriteFile(filepath.Join(dir, "book.xlsx"), book(t, func(f *excelize.File) {
		_, err := f.NewSheet("Notes")
		must(t, err)
	}), 0o666))
	_, err = Load(plan, dir) // the digest below is that of the program sha256sum
	compare(t, err, []string{
		`plan.yaml:6:12: book.xlsx has no sheet "Dates"; sheets there: "Data", "Notes"`,
		`plan.yaml:10:11: there is no file "gone.csv"; write the path as seen from the plan, with forward slashes`,
		`plan.yaml:13:11: book.xlsx has 2 sheets; name one with sheet: "Data", "Notes"`,
		`plan.yaml:17:13: the data in peel.csv differ from the digest in the plan; find out what changed in the file; if ` +
			`the change is right, write sha256: 22d0a26a5669df847bd2a0095b07a5fb3412e6923fe0f622169a9113668eb4bd`,
		`plan.yaml:20:7: peel.csv has no column "strenth"; did you mean "strength"? headings there: "arm", "strength"`,
	})
}
