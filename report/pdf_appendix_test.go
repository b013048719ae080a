package report

import (
	"bytes"
	"flag"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"testing"

	"lotproof/runner/record"
	"lotproof/runner/source"
	"lotproof/spec"
)

var show = flag.String("show", "", "write the appendix of the fixture to this file, to be looked at")

func TestAppendixText(t *testing.T) {
	rec, data := fixture()
	d := layOut(rec, data)
	checkPages(t, d)
	if *show != "" {
		var b bytes.Buffer
		must(t, Appendix(&b, rec, data))
		must(t, os.WriteFile(*show, b.Bytes(), 0o666))
	}
	golden(t, "appendix.txt", []byte(d.text()))
}

// Equal bytes: twice in a row and while other appendices are written at the same time.
func TestAppendixRepeats(t *testing.T) {
	rec, data := fixture()
	var first bytes.Buffer
	must(t, Appendix(&first, rec, data))
	outs := make([]bytes.Buffer, 4)
	var group sync.WaitGroup
	for i := range outs {
		group.Go(func() {
			rec, data := fixture()
			if err := Appendix(&outs[i], rec, data); err != nil {
				t.Error(err)
			}
		})
	}
	group.Wait()
	for i := range outs {
		if !bytes.Equal(first.Bytes(), outs[i].Bytes()) {
			t.Errorf("copy %d differs from the first", i)
		}
	}
}

// The appendix is a function of its arguments, and leaves them as they were.
func TestAppendixLeavesRecordAlone(t *testing.T) {
	rec, data := fixture()
	before := fmt.Sprintf("%#v", rec.Results.Statistics)
	must(t, Appendix(io.Discard, rec, data))
	if after := fmt.Sprintf("%#v", rec.Results.Statistics); before != after {
		t.Error("the record was changed")
	}
}

func TestAppendixReportsWriteErrors(t *testing.T) {
	rec, data := fixture()
	if err := Appendix(failing{}, rec, data); err == nil {
		t.Error("a full disk was not reported")
	}
}

type failing struct{}

func (failing) Write([]byte) (int, error) { return 0, io.ErrShortWrite }

// Whatever a record holds, there is an appendix, no text covers another, and nothing leaves the page.
func TestAppendixUnusual(t *testing.T) {
	long := strings.Repeat("peel strength after ageing at elevated temperature, ", 6) // 306 characters
	tests := []struct {
		name   string
		change func(r *record.Record, d *source.Data)
		shows  string // text that must appear
	}{
		{"no criteria", func(r *record.Record, d *source.Data) {
			for i := range r.Results.Statistics {
				r.Results.Statistics[i].Accept = []record.Accept{}
			}
			r.Results.Verdict = "no criterion"
		}, "no criterion"},
		{"no statistics", func(r *record.Record, d *source.Data) {
			r.Results.Statistics, r.Results.Plan.Resolved.Statistics, d.Selections = nil, nil, nil
			r.Results.Verdict = "no criterion"
		}, "no criterion"},
		{"an empty record", func(r *record.Record, d *source.Data) { *r, *d = record.Record{}, source.Data{} }, "not stated"},
		{"every estimate null", func(r *record.Record, d *source.Data) {
			for i := range r.Results.Statistics {
				s := &r.Results.Statistics[i]
				s.Estimate, s.StandardError, s.Bias, s.Distribution, s.Intervals = nil, nil, nil, nil, nil
				s.EstimateReason = "too few observations"
				for j := range s.Accept {
					s.Accept[j].Bound, s.Accept[j].Verdict = nil, "not shown"
				}
			}
		}, "too few observations"},
		{"long texts", func(r *record.Record, d *source.Data) {
			p := &r.Results.Plan.Resolved
			p.Study.Title, p.Study.Purpose, p.Study.ID = long, long, strings.Repeat("STUDY-", 50)
			for i := range r.Results.Statistics {
				s := &r.Results.Statistics[i]
				s.Label, s.Unit, s.Where, s.ID = long, long, long, strings.Repeat("x", 300)
				p.Statistics[i].Label, p.Statistics[i].ID = s.Label, s.ID
				for j := range s.Accept {
					s.Accept[j].Why = long
				}
			}
			r.Results.Sources[0].File = strings.Repeat("folder/", 60) + "peel.csv"
			r.Results.Sources[0].Exclusions[0].Because = long
		}, "elevated temperature"},
		{"words without blanks", func(r *record.Record, d *source.Data) {
			word := strings.Repeat("W", 300)
			r.Results.Plan.Resolved.Study.Title = word
			for i := range r.Results.Statistics {
				r.Results.Statistics[i].Label, r.Results.Statistics[i].Unit = word, word
				r.Results.Plan.Resolved.Statistics[i].Label = word
			}
		}, "WWWW"},
		{"other scripts", func(r *record.Record, d *source.Data) {
			p := &r.Results.Plan.Resolved
			p.Study.Title, p.Study.Author = "Прочность швов, αντοχή, 強度, חוזק", "Żółć Ωμέγα"
			for i := range r.Results.Statistics {
				r.Results.Statistics[i].Label = "強度 αντοχή прочность 😀"
				p.Statistics[i].Label = r.Results.Statistics[i].Label
			}
		}, "⟨U+5F37 U+5EA6⟩"},
		{"sixty statistics", func(r *record.Record, d *source.Data) {
			s, p, l := r.Results.Statistics, r.Results.Plan.Resolved.Statistics, d.Selections
			for i := range 60 {
				k := i % 7
				r.Results.Statistics = append(r.Results.Statistics[:i:i], s[k])
				r.Results.Plan.Resolved.Statistics = append(r.Results.Plan.Resolved.Statistics[:i:i], p[k])
				d.Selections = append(d.Selections[:i:i], l[k])
			}
		}, "3.61"},
		{"empty distribution", func(r *record.Record, d *source.Data) {
			r.Results.Statistics[0].Distribution = &record.Distribution{}
			r.Results.Statistics[1].Distribution = &record.Distribution{Edges: []float64{1, 2}, Counts: []int{0}}
			r.Results.Statistics[2].Distribution = &record.Distribution{Edges: []float64{1}, Counts: []int{3}}
		}, ""},
		{"one bin", func(r *record.Record, d *source.Data) {
			r.Results.Statistics[0].Distribution = &record.Distribution{Edges: []float64{1.2, 1.4}, Counts: []int{20000}}
		}, ""},
		{"identical values", func(r *record.Record, d *source.Data) {
			for i := range r.Results.Statistics {
				s := &r.Results.Statistics[i]
				v := num([]float64{0, 1.31, -7e300, math.SmallestNonzeroFloat64}[i%4])
				s.Estimate, s.StandardError, s.Bias = v, num(0), num(0)
				s.Distribution = &record.Distribution{Edges: []float64{*v, *v}, Counts: []int{20000}}
				for j := range s.Intervals {
					s.Intervals[j].Lower, s.Intervals[j].Upper = v, v
				}
			}
		}, ""},
		{"largest and smallest numbers", func(r *record.Record, d *source.Data) {
			for i := range r.Results.Statistics {
				s := &r.Results.Statistics[i]
				v := []float64{math.MaxFloat64, -math.MaxFloat64, math.SmallestNonzeroFloat64, -1e-300, 123456789012345680}[i%5]
				s.Estimate, s.StandardError, s.Bias = num(v), num(math.Abs(v)), num(v)
				s.Distribution = &record.Distribution{Edges: []float64{-math.MaxFloat64, 0, math.MaxFloat64},
					Counts: []int{math.MaxInt, 1}}
				for j := range s.Intervals {
					s.Intervals[j].Lower, s.Intervals[j].Upper = num(-math.MaxFloat64), num(v)
				}
			}
		}, ""},
		{"a limit that is no number", func(r *record.Record, d *source.Data) {
			r.Results.Statistics[0].Accept[0].Limit = "?"
		}, ""},
		{"thousands of excluded rows", func(r *record.Record, d *source.Data) {
			lines := make([]int, 5000)
			for i := range lines {
				lines[i] = 2 + 3*i
			}
			r.Results.Sources[0].Exclusions[0].Lines = lines
		}, "14999"},
		{"a long plan with long lines", func(r *record.Record, d *source.Data) {
			r.Results.Plan.Text = strings.Repeat("# "+long+"\n\tkey: \"\x00\u202e強\"\r\n", 200)
		}, "⟨U+0000 U+202E U+5F37⟩"},
		{"no time", func(r *record.Record, d *source.Data) { r.Run = record.Run{} }, ""},
		{"missing data", func(r *record.Record, d *source.Data) { *d = source.Data{} }, ""},
		{"many sources", func(r *record.Record, d *source.Data) {
			for i := range 30 {
				s := r.Results.Sources[0]
				s.Name = fmt.Sprintf("source %d", i)
				r.Results.Sources = append(r.Results.Sources, s)
				d.Tables = append(d.Tables, d.Tables[0])
			}
		}, "source 29"},
		{"unknown names", func(r *record.Record, d *source.Data) {
			for i := range r.Results.Statistics {
				r.Results.Statistics[i].Statistic = "no such statistic"
				for j := range r.Results.Statistics[i].Intervals {
					r.Results.Statistics[i].Intervals[j].Method = "no such interval"
				}
			}
			r.Results.Verdict = "?"
		}, "no such interval"},
		{"one criterion", func(r *record.Record, d *source.Data) {
			for i := range r.Results.Statistics[1:] {
				r.Results.Statistics[i+1].Accept = []record.Accept{}
			}
		}, "3.1"},
		{"bound nil in the plan", func(r *record.Record, d *source.Data) {
			for i := range r.Results.Statistics {
				for j := range r.Results.Statistics[i].Intervals {
					in := &r.Results.Statistics[i].Intervals[j]
					in.Lower, in.Upper, in.Reason = nil, nil, "no reason that fits on one short line was found for this interval"
					in.Bound = spec.TwoSided
				}
			}
		}, "short"},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			rec, data := fixture()
			tt.change(rec, data)
			d := layOut(rec, data)
			checkPages(t, d)
			if text := d.text(); !strings.Contains(text, tt.shows) {
				t.Errorf("%q does not appear", tt.shows)
			}
			var one, two bytes.Buffer
			must(t, d.write(&one))
			must(t, Appendix(&two, rec, data))
			if !bytes.Equal(one.Bytes(), two.Bytes()) {
				t.Error("a second appendix differs")
			}
			if *show != "" {
				name := filepath.Join(filepath.Dir(*show), strings.ReplaceAll(tt.name, " ", "_")+".pdf")
				must(t, os.WriteFile(name, one.Bytes(), 0o666))
			}
		})
	}
}

// Both reports cite the same literature, numbered alike.
func TestAppendixCitesTheReferences(t *testing.T) {
	rec, data := fixture()
	a := newAppendix(rec, data)
	a.compose()
	if want := references(&rec.Results); !slices.Equal(a.cited, want) {
		t.Errorf("cited:\n%s\nwant:\n%s", strings.Join(a.cited, "\n"), strings.Join(want, "\n"))
	}
}

// Links lead somewhere: each names a target, and the sections that earlier pages refer to have the number they say.
func TestAppendixLinks(t *testing.T) {
	rec, data := fixture()
	d := layOut(rec, data)
	for i := range d.pages {
		for _, a := range d.pages[i].areas {
			if _, known := d.targets[a.to]; !known {
				t.Errorf("page %d: link to %q leads nowhere", i+1, a.to)
			}
		}
	}
	a := newAppendix(rec, data)
	titles := map[string]string{}
	for _, e := range d.outline {
		titles[e.to] = e.title
		if _, known := d.targets[e.to]; !known {
			t.Errorf("outline: %q leads nowhere", e.title)
		}
	}
	for i := range rec.Results.Statistics {
		if want := a.resultNumber(i) + "  "; !strings.HasPrefix(titles[statisticName(i)], want) {
			t.Errorf("statistic %d is referred to as %s and titled %q", i, want, titles[statisticName(i)])
		}
	}
}

func TestLineRanges(t *testing.T) {
	tests := []struct {
		in   []int
		want string
	}{{nil, "–"}, {[]int{7}, "7"}, {[]int{7, 8}, "7, 8"}, {[]int{2, 7, 8, 9, 11}, "2, 7–9, 11"}}
	for _, tt := range tests {
		if got := lineRanges(tt.in); got != tt.want {
			t.Errorf("%v: %q, want %q", tt.in, got, tt.want)
		}
	}
}

func BenchmarkAppendix(b *testing.B) {
	rec, data := fixture()
	for b.Loop() {
		if err := Appendix(io.Discard, rec, data); err != nil {
			b.Fatal(err)
		}
	}
}
