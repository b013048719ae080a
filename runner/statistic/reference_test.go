package statistic

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"testing"

	"lotproof/runner/internal/reference"
	"lotproof/spec"
)

func must(t testing.TB, err error) {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
}

// bind returns the estimator of a statistic of the catalogue; settings are texts in the order of its parameters, and
// defaults fill what is not given.
func bind(t testing.TB, name string, settings ...string) Estimator {
	t.Helper()
	d := Lookup(name)
	if d == nil {
		t.Fatalf("no statistic %q", name)
	}
	var with []spec.Setting
	for i, p := range d.Parameters {
		text := p.Default
		if i < len(settings) {
			text = settings[i]
		}
		number, _ := strconv.ParseFloat(text, 64)
		with = append(with, spec.Setting{Name: p.Name, Text: text, Number: number})
	}
	return d.New(with)
}

func sampleOf(columns ...[]float64) *Sample { return NewSample(columns, len(columns[0]), nil, 0) }

func estimate(t testing.TB, e Estimator, s *Sample) float64 {
	t.Helper()
	v, err := e.Estimate(s)
	must(t, err)
	return v
}

// TestReference checks every estimator against certified values (NIST StRD), published data and two independent
// programs; the source of each is in the case and printed when it fails.
func TestReference(t *testing.T) {
	checks := map[string]func(*testing.T, reference.Case){}
	one := func(id, name string, settings ...string) {
		checks[id] = func(t *testing.T, c reference.Case) {
			d := reference.Data(t, c.Data)
			var columns [][]float64
			for _, column := range c.Columns {
				columns = append(columns, d.Numbers(column))
			}
			v := estimate(t, bind(t, name, settings...), sampleOf(columns...))
			c.Compare(t, reference.Figures{reference.Value: v}, 0)
		}
	}
	for _, set := range []string{"lottery", "michelso", "numacc1", "numacc3"} {
		one("nist-"+set+"-mean", "mean")
		one("nist-"+set+"-sd", "standard deviation")
	}
	one("chem-trim0.1", "trimmed mean", "0.1")
	one("chem-trim0.25", "trimmed mean", "0.25")
	one("rivers-trim0.2", "trimmed mean", "0.2")
	one("chem-mad", "median absolute deviation")
	one("chem-mad14826", "median absolute deviation", "1.4826")
	one("chem-geo", "geometric mean")
	one("aircondit-geo", "geometric mean")
	one("rivers-cv", "coefficient of variation")
	one("aircondit-cv", "coefficient of variation")
	one("rivers-iqr7", "interquartile range", "7")
	one("law-pearson", "Pearson correlation")
	one("cars-pearson", "Pearson correlation")
	one("cars-spearman", "Spearman correlation")
	one("pefr-spearman", "Spearman correlation")

	for definition := 1; definition <= 9; definition++ {
		checks[fmt.Sprintf("galaxies-quantile-%d", definition)] = func(t *testing.T, c reference.Case) {
			s := sampleOf(reference.Data(t, c.Data).Numbers(c.Columns[0]))
			got := reference.Figures{}
			for name := range c.Expected {
				p := strings.TrimPrefix(name, "p")
				got[name] = estimate(t, bind(t, "quantile", p, strconv.Itoa(definition)), s)
			}
			c.Compare(t, got, 0)
		}
	}

	line := func(slope string, without ...string) func(*testing.T, reference.Case) {
		return func(t *testing.T, c reference.Case) {
			d := reference.Data(t, c.Data)
			x, y := d.Numbers(c.Columns[0]), d.Numbers(c.Columns[1])
			if slope == "slope:x" { // the response stands first in this file
				x, y = y, x
			}
			s := sampleOf(x, y)
			c.Compare(t, reference.Figures{slope: estimate(t, bind(t, "slope"), s),
				"intercept": estimate(t, bind(t, "intercept"), s)}, 0, without...)
		}
	}
	checks["nist-norris-coef"] = line("slope:x")
	checks["cars-ols"] = line("slope", "se_slope", "se_intercept", "residual_sd")

	repeats := func(t *testing.T, c reference.Case) float64 {
		d := reference.Data(t, c.Data)
		x := d.Numbers(c.Columns[1])
		codes, groups := d.Codes(c.Columns[0])
		s := NewSample([][]float64{x}, len(x), codes, groups)
		return estimate(t, bind(t, "repeatability standard deviation"), s)
	}
	for _, set := range []string{"sirstv", "smls01", "smls04"} {
		checks["nist_"+set+"-resid-sd"] = func(t *testing.T, c reference.Case) {
			c.Compare(t, reference.Figures{reference.Value: repeats(t, c)}, 0)
		}
	}
	for _, set := range []string{"rail", "chickwts", "coop"} {
		checks[set+"-anova"] = func(t *testing.T, c reference.Case) {
			s := repeats(t, c)
			c.Compare(t, reference.Figures{"ms_within": s * s}, 0, "ms_between", "F")
		}
	}

	checks["law-inflcor"] = func(t *testing.T, c reference.Case) {
		d := reference.Data(t, c.Data)
		s := sampleOf(d.Numbers(c.Columns[0]), d.Numbers(c.Columns[1]))
		e := bind(t, "Pearson correlation").(Influencer)
		l := make([]float64, s.N())
		must(t, e.Influence(s, estimate(t, e, s), l))
		var squares, cubes float64
		for _, v := range l {
			squares += v * v
			cubes += v * v * v
		}
		c.Compare(t, reference.Figures{"first": l[0], "last": l[len(l)-1], "sum_of_squares": squares,
			"se": math.Sqrt(squares) / float64(len(l)), "a": cubes / (6 * squares * math.Sqrt(squares))}, 0)
	}

	// The influence values of the trimmed mean are Winsorised deviations times n/(n−2g), so their sum of squares gives
	// the Winsorised variance back.
	checks["chem-wvar0.1"] = func(t *testing.T, c reference.Case) {
		s := sampleOf(reference.Data(t, c.Data).Numbers(c.Columns[0]))
		e := bind(t, "trimmed mean", "0.1").(Influencer)
		l := make([]float64, s.N())
		must(t, e.Influence(s, estimate(t, e, s), l))
		n, g := float64(s.N()), math.Floor(float64(s.N())/10)
		squares := 0.0
		for _, v := range l {
			squares += v * v
		}
		c.Compare(t, reference.Figures{reference.Value: squares * (n - 2*g) / n * (n - 2*g) / n / (n - 1)}, 0)
	}

	// The standard error of the median is the one of its exact bootstrap law, for odd n (7, 9, 141) and for even n (6,
	// 12, 24), where the median lies between two order statistics.
	for _, id := range []string{"mouse-treatment", "mouse-control", "rivers", "bod", "aircondit", "chem"} {
		checks[id+"-median-exact-boot"] = func(t *testing.T, c reference.Case) {
			d := reference.Data(t, c.Data)
			if group, ok := strings.CutPrefix(id, "mouse-"); ok {
				d = d.Where("group", group)
			}
			s := sampleOf(d.Numbers(c.Columns[0]))
			e := bind(t, "median").(StandardErrorer)
			v := estimate(t, e, s)
			if want := c.Number(t, "median"); v != want {
				t.Errorf("%s: median %.17g, want %.17g", c.ID, v, want)
			}
			se, err := e.StandardError(s, v)
			must(t, err)
			// The other figures are checked through the engine.
			c.Compare(t, reference.Figures{"se": se}, 0, "mean", "lower", "upper")
		}
	}
	reference.Run(t, "statistic", checks)
}
