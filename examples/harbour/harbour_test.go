// Package harbour tests that README.md tells the truth about the study.
package harbour

import (
	"bytes"
	"context"
	"encoding/csv"
	"math"
	"os"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"lotproof/runner"
	"lotproof/runner/record"
	"lotproof/spec"
)

func must(t *testing.T, err error) {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
}

func results(t *testing.T) *record.Results {
	t.Helper()
	text, err := os.ReadFile("plan.yaml")
	must(t, err)
	plan, err := spec.Read(bytes.NewReader(text), "plan.yaml", runner.Catalogue())
	must(t, err)
	study, err := runner.Prepare(plan, ".")
	must(t, err)
	r, err := study.Run(context.Background(), runner.Options{})
	must(t, err)
	return r
}

func statistic(t *testing.T, r *record.Results, id string) *record.Statistic {
	t.Helper()
	i := slices.IndexFunc(r.Statistics, func(s record.Statistic) bool { return s.ID == id })
	if i < 0 {
		t.Fatalf("no statistic %q", id)
	}
	return &r.Statistics[i]
}

// tables returns the cells of all tables of README.md whose head begins with the given cells.
func tables(t *testing.T, head ...string) [][]string {
	t.Helper()
	text, err := os.ReadFile("README.md")
	must(t, err)
	var rows [][]string
	inside := false
	for _, line := range strings.Split(string(text), "\n") {
		if !strings.HasPrefix(line, "|") {
			inside = false
			continue
		}
		var cells []string
		for _, cell := range strings.Split(strings.Trim(line, "|"), "|") {
			cells = append(cells, strings.Trim(cell, " *"))
		}
		switch {
		case inside && !strings.HasPrefix(cells[0], "---"):
			rows = append(rows, cells)
		case len(cells) >= len(head) && slices.Equal(cells[:len(head)], head):
			inside = true
		}
	}
	return rows
}

// agrees says whether a figure of README.md is a figure of the run, rounded.
func agrees(text string, v *float64) bool {
	if text == "none" || v == nil {
		return text == "none" && v == nil
	}
	text = strings.Replace(text, "−", "-", 1)
	told, err := strconv.ParseFloat(text, 64)
	_, decimals, _ := strings.Cut(text, ".")
	half := 0.5 * math.Pow(10, -float64(len(decimals)))
	return err == nil && math.Abs(told-*v) <= half*(1+1e-9)
}

// The decisions and the two ways to draw, as README.md prints them, are those of the run.
func TestTablesOfTheReadme(t *testing.T) {
	r := results(t)
	rows := tables(t, "Statistic", "Estimate", "Bound", "Criterion", "Verdict")
	for i := range r.Statistics {
		s := &r.Statistics[i]
		for _, a := range s.Accept {
			if len(rows) == 0 {
				t.Fatalf("no row for %s", s.ID)
			}
			row := rows[0]
			rows = rows[1:]
			criterion := map[string]string{"lower_at_least": "at least ", "upper_at_most": "at most "}[a.Criterion] + a.Limit
			if row[0] != s.ID || !agrees(row[1], s.Estimate) || !agrees(row[2], a.Bound) ||
				strings.Replace(row[3], "−", "-", 1) != criterion || row[4] != a.Verdict {
				t.Errorf("README.md says %q; the run: %s, estimate %v, bound %v, %s, %s",
					row, s.ID, *s.Estimate, value(a.Bound), criterion, a.Verdict)
			}
		}
	}
	if len(rows) > 0 {
		t.Errorf("rows without a criterion: %q", rows)
	}
	if r.Verdict != "not met" {
		t.Errorf("verdict of the study: %s", r.Verdict)
	}

	rows = tables(t, "Statistic", "Drawn")
	if len(rows) != 2 {
		t.Fatalf("%d ways to draw", len(rows))
	}
	var gap [2]float64
	for i, row := range rows {
		s := statistic(t, r, row[0])
		lower := s.Intervals[0].Lower
		gap[i] = *s.Estimate - *lower
		if !strings.HasPrefix(row[1], strconv.Itoa(s.Design.Units)+" ") || !agrees(row[2], s.Estimate) ||
			!agrees(row[3], lower) || !agrees(row[4], &gap[i]) {
			t.Errorf("README.md says %q; the run: %d units, %v, %v", row, s.Design.Units, *s.Estimate, *lower)
		}
	}
	if too := 1 - gap[0]/gap[1]; !(math.Abs(too-0.4) < 0.05) {
		t.Errorf("the wrong way is too narrow by %.2f, said to be two fifths", too)
	}
}

func value(v *float64) any {
	if v == nil {
		return "none"
	}
	return *v
}

// Each trap is named by its advisory, with the severity that README.md tells, and nothing else stops an interval. The
// list of smaller remarks in README.md names every other advisory of the run, and no further one.
func TestTrapsAreNamed(t *testing.T) {
	r := results(t)
	var stops, remarks []string
	for _, s := range r.Statistics {
		for _, a := range s.Advisories {
			if a.Severity == "stop" {
				stops = append(stops, s.ID+": "+a.Code)
			} else {
				remarks = append(remarks, a.Code)
			}
		}
	}
	readme, err := os.ReadFile("README.md")
	must(t, err)
	var told []string
	for _, match := range regexp.MustCompile(`(?m)^- \*([A-Z][a-z -]*)\*: `).FindAllStringSubmatch(string(readme), -1) {
		told = append(told, strings.ToLower(match[1]))
	}
	slices.Sort(told)
	slices.Sort(remarks)
	if remarks = slices.Compact(remarks); !slices.Equal(told, remarks) {
		t.Errorf("README.md remarks on %q, the run on %q", told, remarks)
	}
	want := []string{"p10 12 weeks: quantile out of reach", "mean by strips: pseudo-replication"}
	if !slices.Equal(stops, want) {
		t.Errorf("stops %q, want %q", stops, want)
	}
}

// What README.md does with a pocket calculator, done here from the files alone. The probability that the smallest of n
// lies below the quantile p is 1 − (1−p)ⁿ: common practice, no single source.
func TestPocketCalculator(t *testing.T) {
	r := results(t)
	smallest := map[string]float64{}
	units := map[string]int{}
	for _, row := range file(t, "pouches.csv") {
		if row["valid_strips"] == "0" {
			continue
		}
		v := number(t, row["weakest"])
		if units[row["age"]]++; units[row["age"]] == 1 || v < smallest[row["age"]] {
			smallest[row["age"]] = v
		}
	}
	rows := tables(t, "Pouches", "Probability")
	for _, row := range rows {
		n := number(t, row[0])
		percent := 100 * (1 - math.Pow(0.9, n))
		if !agrees(strings.TrimSuffix(row[1], " %"), &percent) || (percent >= 95) != (row[2] == "the smallest") {
			t.Errorf("README.md says %q; it is %.2f %%", row, percent)
		}
	}
	if len(rows) != 3 {
		t.Errorf("%d numbers of pouches", len(rows))
	}
	for _, age := range []string{"fresh", "6 weeks", "12 weeks"} {
		s := statistic(t, r, "p10 "+age)
		if s.N != units[age] {
			t.Errorf("%s: n %d, in the file %d", age, s.N, units[age])
		}
		lower, attained := s.Intervals[0].Lower, s.Intervals[0].Attained
		if reach := 1 - math.Pow(0.9, float64(units[age])); reach < 0.95 {
			if lower != nil {
				t.Errorf("%s: bound %v, but %d pouches reach %.4f only", age, *lower, units[age], reach)
			}
		} else if lower == nil || *lower != smallest[age] || math.Abs(*attained-reach) > 1e-12 {
			t.Errorf("%s: bound %v attained %v, want %v and %v", age, value(lower), value(attained), smallest[age], reach)
		}
	}

	sum, count := map[string]float64{}, map[string]float64{}
	var peel, valid float64
	var aged []float64
	for _, row := range file(t, "strips.csv") {
		if row["status"] == "void" {
			count[row["void_reason"]]++
			continue
		}
		v := number(t, row["strength"])
		sum[row["age"]] += v
		count[row["age"]]++
		if row["age"] == "12 weeks" {
			aged = append(aged, v)
		}
		valid++
		if row["failure_mode"] == "peel" {
			peel++
		}
	}
	if count["grip slipped"] != 3 || count["cut not square"] != 1 || count["pouch torn when opened"] != 8 {
		t.Errorf("void strips: %v", count)
	}
	close := func(id string, want float64) {
		t.Helper()
		if got := *statistic(t, r, id).Estimate; !(math.Abs(got-want) <= 1e-12) {
			t.Errorf("%s: %v, by hand %v", id, got, want)
		}
	}
	close("peel share", peel/valid)
	close("kept share", sum["12 weeks"]/count["12 weeks"]/(sum["fresh"]/count["fresh"]))

	// The bound that strips as units would have: the largest k with P(at least k of n below the percentile) ≥ 0.95.
	slices.Sort(aged)
	k, term, below := 0, math.Pow(0.9, float64(len(aged))), 0.0
	for below += term; 1-below >= 0.95; below += term {
		k++
		term *= float64(len(aged)-k+1) / float64(k) * 0.1 / 0.9
	}
	if k != 6 || aged[k-1] != 1.45 {
		t.Errorf("by strips the bound would be number %d, %v; README.md says the sixth, 1.45", k, aged[k-1])
	}
}

func file(t *testing.T, name string) []map[string]string {
	t.Helper()
	f, err := os.Open(name)
	must(t, err)
	defer f.Close()
	lines, err := csv.NewReader(f).ReadAll()
	must(t, err)
	var rows []map[string]string
	for _, line := range lines[1:] {
		row := map[string]string{}
		for i, name := range lines[0] {
			row[name] = line[i]
		}
		rows = append(rows, row)
	}
	return rows
}

func number(t *testing.T, text string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(text, 64)
	must(t, err)
	return v
}
