package record

import (
	"bytes"
	"crypto/sha256"
	"encoding/json"
	"errors"
	"fmt"
	"strings"
	"testing"

	"lotproof/spec"
)

func sample(t *testing.T) *Record {
	t.Helper()
	lower, error := 1.25, 0.0004
	estimate := 0.1 + 0.2
	results := &Results{Verdict: "met",
		Plan: Plan{Study: "S", Text: "a: <b> & \"c\"\n", Resolved: spec.Plan{Confidence: []spec.Number{{Text: "0.950", Value: 0.95}},
			Seed: spec.Seed{Value: 1<<64 - 1}}},
		Statistics: []Statistic{
			{ID: "first", Estimate: &estimate, Intervals: []Interval{{Method: "bca", Confidence: "0.95", Lower: &lower,
				MonteCarloError: Limits{Lower: &error}}}},
			{ID: "second", EstimateReason: "too few observations"},
		}}
	r, err := New(results, Run{Number: 3, Started: "2041-01-01T00:00:00Z"})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func written(t *testing.T, r *Record) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := r.Write(&b); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// What was written reads back to the same bytes and the same figures.
func TestWriteReadWrite(t *testing.T) {
	first := written(t, sample(t))
	r, err := Read(bytes.NewReader(first))
	if err != nil {
		t.Fatal(err)
	}
	if again := written(t, r); !bytes.Equal(again, first) {
		t.Errorf("first:\n%s\nagain:\n%s", first, again)
	}
	if got := *r.Results.Statistics[0].Estimate; got != 0.1+0.2 {
		t.Errorf("estimate %v", got)
	}
	if !bytes.HasSuffix(first, []byte("}\n")) || bytes.HasSuffix(first, []byte("\n\n")) {
		t.Error("the record does not end with one newline")
	}
}

// The digest is the SHA-256 of the compact JSON of the results, computed here a second time from the record file itself:
// the value of "results" without the white space that indents it.
func TestDigestIsOfCompactJSON(t *testing.T) {
	r := sample(t)
	var file struct {
		Results json.RawMessage `json:"results"`
	}
	if err := json.Unmarshal(written(t, r), &file); err != nil {
		t.Fatal(err)
	}
	var b bytes.Buffer
	if err := json.Compact(&b, file.Results); err != nil {
		t.Fatal(err)
	}
	if got := fmt.Sprintf("%x", sha256.Sum256(b.Bytes())); got != r.ResultsSHA256 {
		t.Errorf("digest %s, record has %s", got, r.ResultsSHA256)
	}
}

// Every single changed byte of a record is found: as no record, or as an altered one.
func TestEveryByteCounts(t *testing.T) {
	whole := written(t, sample(t))
	for i := range whole {
		changed := bytes.Clone(whole)
		changed[i] ^= 1
		_, err := Read(bytes.NewReader(changed))
		if err == nil {
			t.Errorf("byte %d changed from %q to %q was not found: "+
				"%s", i, whole[i], changed[i], changed[max(0, i-30):min(len(whole), i+30)])
		}
	}
	for _, text := range []string{"", "{}", "[]", "null", string(whole[:len(whole)/2]), string(whole) + "x",
		strings.Replace(string(whole), `"lotproof_record": 1`, `"lotproof_record": 2`, 1)} {
		if _, err := Read(strings.NewReader(text)); err == nil {
			t.Errorf("%.40q passes for a record", text)
		}
	}
	_, err := Read(strings.NewReader(strings.Replace(string(whole), `"lotproof_record": 1`, `"lotproof_record": 2`, 1)))
	if !errors.Is(err, ErrVersion) {
		t.Errorf("another layout: %v", err)
	}
	altered, err := Read(bytes.NewReader(bytes.Replace(whole, []byte(`"first"`), []byte(`"worst"`), 1)))
	if !errors.Is(err, ErrAltered) || altered == nil || altered.Results.Statistics[0].ID != "worst" {
		t.Errorf("an altered record: %v", err)
	}
}

// Differences are named in words, to the last digit.
func TestDifferences(t *testing.T) {
	a, b := sample(t).Results, sample(t).Results
	list, err := Differences(&a, &b)
	if err != nil || len(list) != 0 {
		t.Fatalf("equal results differ: %v %v", list, err)
	}
	other, estimate := 1.2500000000000002, 4.0
	b.Statistics[0].Intervals[0].Lower = &other
	b.Statistics[1].Estimate = &estimate
	b.Statistics[1].Advisories = []Advisory{{Code: "few units"}}
	b.Verdict = "not met"
	list, err = Differences(&a, &b)
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	for _, d := range list {
		got = append(got, d.String())
	}
	want := `statistic "first", interval "bca" at "0.95", lower: was 1.25, is 1.2500000000000002
statistic "second", estimate: was null, is 4
statistic "second", advisories: was null, is an entry of 1 parts
verdict: was "met", is "not met"`
	if text := strings.Join(got, "\n"); text != want {
		t.Errorf("got\n%s\nwant\n%s", text, want)
	}
}
