package interval

import (
	"math"

	"lotproof/runner/numeric"
)

var student = Definition{
	Name:       "t",
	Statistics: []string{"mean"},
	Compare:    true,
	Classical:  true,
	Summary: "The classical interval of a mean: the mean plus and minus the t quantile times its standard error. " +
		"For the difference " +
		"of two independent groups the variances are not pooled and the degrees of freedom follow Welch and " +
		"Satterthwaite. " +
		"Strata are not taken into account.",
	Formula: "x̄ ± t(n−1)·s/√n;  x̄₁ − x̄₂ ± t(ν)·√(s₁²/n₁ + s₂²/n₂)",
	Where: "x̄ is the mean, s the standard deviation and n the number of observations of a group, t(ν) the " +
		"quantile of Student's " +
		"distribution, ν = (s₁²/n₁ + s₂²/n₂)² / ( (s₁²/n₁)²/(n₁−1) + (s₂²/n₂)²/(n₂−1) )",
	Limits: "Exact for independent normal observations only; for skewed data with few units one of its sides " +
		"covers too little.",
	Sources: []string{"Student. The probable error of a mean. Biometrika 6 (1908) 1–25",
		"Welch BL. The generalization of “Student’s” problem when several different population variances are " +
			"involved. Biometrika 34 (1947) 28–35"},
	limits: func(in *Input) Result {
		if in.Sample == nil {
			return refuse(dependent)
		}
		p, _ := in.tail().Float64()
		var centre, variance, df float64
		if in.Sample.As == "" {
			n, mean, s2 := moments(in.Sample.Sorted)
			if n < 2 {
				return refuse("it needs two observations")
			}
			centre, variance, df = mean, s2/n, n-1
		} else {
			if in.Sample.As != "difference" {
				return refuse("it has no form for the ratio of two groups")
			}
			n1, mean1, first := moments(in.Sample.Groups[0])
			n2, mean2, second := moments(in.Sample.Groups[1])
			if n1 < 2 || n2 < 2 {
				return refuse("it needs two observations in each group")
			}
			first, second = first/n1, second/n2
			centre, variance = mean1-mean2, first+second
			df = float64(variance*variance) / (float64(first*first)/(n1-1) + float64(second*second)/(n2-1))
		}
		if variance == 0 {
			return refuse("the observations have no spread")
		}
		t := -numeric.StudentQuantile(df, p)
		reach := float64(t * math.Sqrt(variance))
		r := exactly(centre-reach, centre+reach)
		r.Parameters = []Parameter{{"standard error", math.Sqrt(variance)}, {"degrees of freedom", df}, {"t", t}}
		return r
	},
}

const dependent = "rows that are drawn together are not independent, which this method needs"

// moments returns number, mean and variance (divisor n − 1), by the corrected two-pass algorithm.
func moments(x []float64) (n, mean, variance float64) {
	n = float64(len(x))
	sum := 0.0
	for _, v := range x {
		sum += v
	}
	mean = sum / n
	var squares, residue float64
	for _, v := range x {
		d := v - mean
		squares += float64(d * d)
		residue += d
	}
	squares -= float64(residue*residue) / n
	return n, mean, squares / (n - 1)
}
