package report

import (
	"bytes"
	"io"
	"strings"
	"testing"
	"unicode/utf8"

	"lotproof/runner/advisory"
	"lotproof/runner/interval"
	"lotproof/runner/record"
	"lotproof/runner/statistic"
)

func TestDecisions(t *testing.T) {
	rec, _ := fixture()
	var b bytes.Buffer
	must(t, Decisions(&b, rec, "runs/HB-07/0003"))
	golden(t, "decisions.txt", b.Bytes())
	narrow(t, b.String())
}

// What check prints holds no figure that only a run can give.
func TestOutline(t *testing.T) {
	rec, _ := fixture()
	r := &rec.Results
	for i := range r.Statistics {
		s := &r.Statistics[i]
		s.Estimate, s.StandardError, s.Bias, s.EstimateReason, s.Accept, s.Distribution = nil, nil, nil, "", nil, nil
		s.Advisories = nil
		for k := range s.Intervals {
			in := &s.Intervals[k]
			*in = record.Interval{Method: in.Method, Confidence: in.Confidence, Bound: in.Bound, Companion: in.Companion}
		}
	}
	var b bytes.Buffer
	must(t, Outline(&b, r))
	golden(t, "outline.txt", b.Bytes())
	narrow(t, b.String())
	if !strings.HasSuffix(b.String(), "Nothing was drawn.\n") {
		t.Error("the end does not say that nothing was drawn")
	}
}

// Every name in the list has an entry, which holds the formula and every source, and names are found in any case.
func TestCatalogue(t *testing.T) {
	var list bytes.Buffer
	must(t, Catalogue(&list))
	narrow(t, list.String())
	needed := map[string][]string{}
	for _, d := range statistic.All() {
		needed[d.Name] = append([]string{d.Summary, d.Formula, d.Where, d.Assumptions}, d.Sources...)
		for _, p := range d.Parameters {
			needed[d.Name] = append(needed[d.Name], p.Name+": "+p.Summary)
		}
	}
	for _, d := range interval.All() {
		needed[d.Name] = append([]string{d.Summary, d.Formula, d.Where, d.Limits}, d.Sources...)
	}
	for _, d := range advisory.All() {
		needed[d.Code] = []string{d.Summary, d.Action, d.Source}
	}
	words := func(text string) string { return strings.Join(strings.Fields(text), " ") }
	for name, texts := range needed {
		if !strings.Contains(list.String(), "\n  "+name+" ") {
			t.Errorf("%s is not in the list", name)
		}
		var b bytes.Buffer
		found, err := CatalogueEntry(&b, strings.ToUpper(name))
		must(t, err)
		if !found {
			t.Errorf("there is no entry for %s", name)
		}
		entry := words(strings.ReplaceAll(b.String(), "\n  with  ", "\n"))
		for _, text := range texts {
			if !strings.Contains(entry, words(text)) {
				t.Errorf("the entry of %s does not say %q:\n%s", name, text, b.String())
			}
		}
	}
	found, err := CatalogueEntry(io.Discard, "no such name")
	must(t, err)
	if found {
		t.Error("an entry is found for a name that is not in the catalogue")
	}
}

// narrow fails on a line that is wider than promised, unless it is one word that cannot be broken.
func narrow(t *testing.T, text string) {
	t.Helper()
	for _, line := range strings.Split(text, "\n") {
		if utf8.RuneCountInString(line) > lineWidth && len(strings.Fields(line)) > 1 {
			t.Errorf("wider than %d characters: %s", lineWidth, line)
		}
	}
}
