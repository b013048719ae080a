package runner

import (
	"cmp"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"lotproof/runner/internal/reference"
)

// Ten boys wore one shoe of either material. Written one row a shoe, with the boy as unit and the materials compared,
// the units span both groups and must be drawn jointly: everything is then as for the ten differences, whose exact laws
// are among the cases. Drawn separately, the standard error would be about ten times as large.
func TestPairedIsDrawnJointly(t *testing.T) {
	d := reference.Data(t, "shoes.csv")
	var text strings.Builder
	text.WriteString("boy,material,wear\n")
	a, b := d.Texts("A"), d.Texts("B")
	for i := range a {
		fmt.Fprintf(&text, "%d,A,%s\n", i, a[i])
	}
	for i := range b {
		fmt.Fprintf(&text, "%d,B,%s\n", i, b[i])
	}
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "long.csv"), []byte(text.String()), 0o666); err != nil {
		t.Fatal(err)
	}
	s := setup{"long.csv", "boy: {type: category}, material: {type: category}, wear: {type: number}", "", "boy",
		"statistic: mean, of: wear, compare: {by: material, of: [B, A], as: difference}", allMethods}
	const resamples = 99999
	r := only(t, s.preparedIn(t, dir, resamples, 7))
	if !r.Compare.Paired || r.Design.Units != 10 {
		t.Errorf("paired %t, %d units; want 10 pairs", r.Compare.Paired, r.Design.Units)
	}
	reference.Find(t, "shoes-diff-boot-se").Compare(t, reference.Figures{"se": *r.StandardError}, resamples)
	for id, name := range map[string]string{"percentile": "percentile", "basic": "basic", "studentised": "studentized"} {
		reference.Find(t, "shoes-diff-"+id).Compare(t, limits(t, r, name), resamples)
	}
	checkBCa(t, reference.Find(t, "shoes-diff-bca"), r, resamples)
	// No t limits as companion: the two groups are not independent.
	for _, in := range r.Intervals {
		if in.Companion {
			t.Errorf("companion %s on paired groups", in.Method)
		}
	}
}

// A rail that is drawn twice brings its readings as two levels of the factor, not as one of six. The pooled variance of
// a resample of whole rails is then the mean of the variances of the rails drawn, and its law is known exactly from the
// 462 multisets of six rails.
func TestRepeatabilityOfDrawnUnits(t *testing.T) {
	d := reference.Data(t, "rail.csv")
	x := d.Numbers("travel")
	codes, groups := d.Codes("rail")
	within := make([]float64, groups)
	for g := range groups {
		var mean float64
		for i, c := range codes {
			if int(c) == g {
				mean += x[i] / 3
			}
		}
		for i, c := range codes {
			if int(c) == g {
				within[g] += (x[i] - mean) * (x[i] - mean) / 2
			}
		}
	}
	var law []atom
	var list func(g, left int, sum, share float64)
	factorial := []float64{1, 1, 2, 6, 24, 120, 720}
	list = func(g, left int, sum, share float64) {
		if g == groups-1 {
			v := math.Sqrt((sum + float64(left)*within[g]) / 6)
			law = append(law, atom{v, share / factorial[left] * 720 / math.Pow(6, 6)})
			return
		}
		for k := 0; k <= left; k++ {
			list(g+1, left-k, sum+float64(k)*within[g], share/factorial[k])
		}
	}
	list(0, 6, 0, 1)
	slices.SortFunc(law, func(a, b atom) int { return cmp.Compare(a.value, b.value) })
	var total, mean, squares float64
	for _, p := range law {
		total += p.share
		mean += p.share * p.value
		squares += p.share * p.value * p.value
	}
	if len(law) != 462 || math.Abs(total-1) > 1e-12 {
		t.Fatalf("%d multisets, probability %v", len(law), total)
	}
	sd := math.Sqrt(squares - mean*mean)

	const resamples = 99999
	s := setups["rail-cluster"]
	s.statistic = "statistic: repeatability standard deviation, of: travel, with: {factor: rail}"
	s.intervals = "percentile"
	r := s.run(t, resamples, 5)
	if want := math.Sqrt(reference.Find(t, "rail-anova").Expected["ms_within"]); math.Abs(*r.Estimate-want) > 1e-9 {
		t.Errorf("repeatability %v, want %v", *r.Estimate, want)
	}
	if got := *r.Estimate + *r.Bias; math.Abs(got-mean) > 5*sd/math.Sqrt(resamples) {
		t.Errorf("mean of the resample values %v, want %v", got, mean)
	}
	if math.Abs(*r.StandardError/sd-1) > 5/math.Sqrt(2*resamples) {
		t.Errorf("standard error %v, want %v", *r.StandardError, sd)
	}
	checkPercentiles(t, "repeatability", law, r, resamples)
}
