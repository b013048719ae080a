package runner_test

import (
	"bytes"
	"context"
	"fmt"
	"os"
	"path/filepath"
	"testing"

	"lotproof/runner"
	"lotproof/runner/record"
	"lotproof/spec"
)

// study reads a plan of the examples.
func study(t testing.TB, path string) *runner.Study {
	t.Helper()
	text, err := os.ReadFile(path)
	must(t, err)
	plan, err := spec.Read(bytes.NewReader(text), filepath.Base(path), runner.Catalogue())
	must(t, err)
	s, err := runner.Prepare(plan, filepath.Dir(path))
	must(t, err)
	return s
}

func must(t testing.TB, err error) {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
}

func run(t testing.TB, s *runner.Study, workers int) *record.Results {
	t.Helper()
	r, err := s.Run(context.Background(), runner.Options{Workers: workers})
	must(t, err)
	return r
}

const harbour = "../examples/harbour/plan.yaml"

// The same bytes with 1, 2, 3 and 16 workers.
func TestWorkersDoNotMatter(t *testing.T) {
	s := study(t, harbour)
	want, err := run(t, s, 1).Digest()
	must(t, err)
	for _, workers := range []int{2, 3, 16} {
		got, err := run(t, s, workers).Digest()
		must(t, err)
		if got != want {
			t.Errorf("%d workers: digest %s, one worker: %s", workers, got, want)
		}
	}
}

// The results of the example, pinned: a regression pin of our own output, the same on every processor and with every
// setting of the compiler. It changes only when a release says that results change, and why.
func TestResultsPinned(t *testing.T) {
	got, err := run(t, study(t, harbour), 0).Digest()
	must(t, err)
	want, err := os.ReadFile("../testdata/harbour.sha256")
	must(t, err)
	if got != string(bytes.TrimSpace(want)) {
		t.Errorf("digest %s, pinned %s", got, bytes.TrimSpace(want))
	}
}

// A statistic has the same figures whatever else the plan asks for.
func TestOtherStatisticsDoNotMatter(t *testing.T) {
	text, err := os.ReadFile(harbour)
	must(t, err)
	whole, err := spec.Read(bytes.NewReader(text), "plan.yaml", runner.Catalogue())
	must(t, err)
	all, err := runner.Prepare(whole, filepath.Dir(harbour))
	must(t, err)
	want := run(t, all, 0)
	for i := range whole.Statistics {
		alone := *whole
		alone.Statistics = whole.Statistics[i : i+1]
		s, err := runner.Prepare(&alone, filepath.Dir(harbour))
		must(t, err)
		got := run(t, s, 0)
		a, b := *want, *got
		a.Statistics, b.Statistics = want.Statistics[i:i+1], got.Statistics
		a.Plan, b.Plan, a.Verdict, b.Verdict = record.Plan{}, record.Plan{}, "", ""
		list, err := record.Differences(&a, &b)
		must(t, err)
		for _, d := range list {
			t.Errorf("alone: %s", d)
		}
	}
}

// A cancelled run ends with the error of its context.
func TestCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if r, err := study(t, harbour).Run(ctx, runner.Options{}); err == nil || r != nil {
		t.Errorf("results %v, error %v", r, err)
	}
}

func BenchmarkHarbour(b *testing.B) {
	s := study(b, harbour)
	for _, workers := range []int{1, 2} {
		b.Run(fmt.Sprintf("workers %d", workers), func(b *testing.B) {
			for b.Loop() {
				run(b, s, workers)
			}
		})
	}
}
