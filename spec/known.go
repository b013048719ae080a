package spec

import (
	"fmt"
	"slices"
	"strings"

	"lotproof/spec/expression"
)

// laterStatistics and laterIntervals are names of the plan language that a catalogue of this version may lack.
var (
	laterStatistics = []string{"winsorized mean", "Hodges-Lehmann", "robust mean", "Gini mean difference",
		"robust standard deviation", "skewness", "excess kurtosis", "rate", "Pp", "Ppk", "quantile Pp", "quantile Ppk",
		"fraction nonconforming", "ratio of means", "Kendall correlation", "concordance correlation", "prediction at x",
		"inverse prediction", "residual standard deviation", "Theil-Sen slope", "Deming slope", "Deming intercept",
		"Passing-Bablok slope", "Passing-Bablok intercept", "mean difference", "limits of agreement", "kappa",
		"weighted kappa", "sensitivity", "specificity", "area under the ROC curve", "Hodges-Lehmann shift",
		"probability of superiority", "standardized mean difference", "intermediate precision standard deviation",
		"reproducibility standard deviation", "variance component", "intraclass correlation", "share of study variation",
		"similarity factor f2", "time to limit", "exponential mean life", "Weibull shape", "Weibull scale",
		"Weibull quantile life", "Kaplan-Meier mean", "Kaplan-Meier quantile", "lognormal maximum-likelihood mean",
		"lognormal maximum-likelihood quantile", "regression on order statistics mean"}
	laterIntervals = []string{"recommended", "abc", "calibrated", "expanded percentile", "exact percentile", "Welch",
		"Fisher z"}
)

// sameName compares trade names: without regard to letter case, and with _ for a blank.
func sameName(a, b string) bool {
	return strings.EqualFold(strings.ReplaceAll(a, "_", " "), strings.ReplaceAll(b, "_", " "))
}

// entry finds a trade name in the catalogue and returns its place there, or −1 after noting the mistake. kind is
// "statistic" or "interval".
func (r *reader) entry(f field, kind string, known, later []string) int {
	name, ok := r.line(f, maxLine)
	if !ok {
		return -1
	}
	if i := slices.IndexFunc(known, func(k string) bool { return sameName(k, name) }); i >= 0 {
		return i
	}
	list := kind + "s here: " + expression.List(known)
	if i := slices.IndexFunc(later, func(k string) bool { return sameName(k, name) }); i >= 0 {
		r.wrongAt(f.at, fmt.Sprintf("%s %q is not available in this version", kind, name), list)
		return -1
	}
	if near := expression.Nearest(name, known); near != "" {
		list = fmt.Sprintf("did you mean %q? ", near) + list
	} else if near := expression.Nearest(name, later); near != "" {
		r.wrongAt(f.at, fmt.Sprintf("%s %q is not known, and %s is not available in this version", kind,
			quotable(name), near),
			list)
		return -1
	}
	r.wrongAt(f.at, fmt.Sprintf("%s %q is not known", kind, quotable(name)), list)
	return -1
}

func (c Catalogue) statisticNames() []string {
	out := make([]string, len(c.Statistics))
	for i, e := range c.Statistics {
		out[i] = e.Name
	}
	return out
}

func (c Catalogue) intervalNames() []string {
	out := make([]string, len(c.Intervals))
	for i, e := range c.Intervals {
		out[i] = e.Name
	}
	return out
}

// fitting returns the names of the intervals that apply to a statistic.
func (c Catalogue) fitting(statistic string, compare bool) []string {
	var out []string
	for _, e := range c.Intervals {
		if e.applies(statistic) && (!compare || e.Compare) {
			out = append(out, e.Name)
		}
	}
	return out
}

func (e IntervalEntry) applies(statistic string) bool {
	return len(e.Statistics) == 0 || slices.Contains(e.Statistics, statistic)
}
