package advisory

import (
	"fmt"
	"slices"
	"strconv"

	"lotproof/runner/numeric"
	"lotproof/runner/record"
	"lotproof/runner/statistic"
	"lotproof/spec"
)

func parse(text string) (float64, error) { return strconv.ParseFloat(text, 64) }

var pseudoReplication = Definition{
	Code: "pseudo-replication",
	Summary: "Rows that belong together are drawn as if they were independent: for every category or text column " +
		"that groups whole resampling " +
		"units and is neither a stratum nor part of the comparison, the intraclass correlation of what the units " +
		"contribute to the statistic: " +
		"their influence values, or the observations where a quantile has none. Above 0.05 with a design effect " +
		"above 1.2 and P < 0.025 in the " +
		"analysis of variance it is a stop with 5 groups or more, a caution with fewer. Not checked for a Spearman " +
		"correlation.",
	Action: "Name the group as the resampling unit, or draw within its levels as strata if they are all there is.",
	Source: "Design effect 1 + (m−1)·ICC: Kish L. Survey Sampling. Wiley 1965, section 5.4 (cited from memory); " +
		"thresholds of this program",
	Every: true,
	check: func(in *Input) *finding {
		if in.Contribution == nil {
			return nil
		}
		var gravest *finding
		for i := range in.Table.Columns {
			c := &in.Table.Columns[i]
			if c.Derived || c.Type == spec.TypeNumber || in.accounted(c.Name) {
				continue
			}
			f := in.clustered(c.Name, c.Texts)
			if f != nil && (gravest == nil || f.severity == Stop && gravest.severity != Stop) {
				gravest = f
			}
		}
		return gravest
	},
}

// accounted says whether the draw already takes account of a column.
func (in *Input) accounted(name string) bool {
	r := in.Plan.Resampling
	for k, parameter := range statistic.Lookup(in.Plan.Name).Parameters {
		if parameter.Kind == spec.KindCategory && in.Plan.With[k].Text == name {
			return true // the factor of the statistic itself
		}
	}
	return slices.Contains(r.Unit, name) || slices.Contains(r.Strata, name) || in.Plan.Compare != nil && in.Plan.Compare.By == name
}

// clustered looks at one grouping column. The values compared are means over outermost units, taken as deviations from
// the mean of their stratum and group of comparison, so that what the design already separates does not count.
func (in *Input) clustered(name string, texts []string) *finding {
	units := 0
	for _, u := range in.UnitOf {
		units = max(units, int(u)+1)
	}
	sum, count := make([]float64, units), make([]float64, units)
	class := make([]string, units)
	group := make([]string, units)
	known := make([]bool, units)
	for i, row := range in.Selection.Rows {
		u := in.UnitOf[i]
		if known[u] && group[u] != texts[row] {
			return nil // a unit reaches over several groups: the column lies within units, not around them
		}
		known[u], group[u] = true, texts[row]
		sum[u] += in.Contribution[i]
		count[u]++
		class[u] = in.class(i, row)
	}
	classSum, classCount := map[string]float64{}, map[string]float64{}
	for u := range units {
		sum[u] /= count[u]
		classSum[class[u]] += sum[u]
		classCount[class[u]]++
	}
	type cell struct{ group, class string }
	index := map[cell]int{}
	var n, total []float64
	at := make([]int, units)
	for u := range units {
		sum[u] -= classSum[class[u]] / classCount[class[u]]
		key := cell{group[u], class[u]}
		k, seen := index[key]
		if !seen {
			k = len(n)
			index[key] = k
			n, total = append(n, 0), append(total, 0)
		}
		at[u] = k
		n[k]++
		total[k] += sum[u]
	}
	k, all := float64(len(n)), float64(units)
	classes := float64(len(classCount))
	if k-classes < 1 || all-k < 1 {
		return nil // no groups to compare, or every group has one unit
	}
	var between, within, squares float64
	for i := range n {
		mean := total[i] / n[i]
		between += float64(n[i] * float64(mean*mean))
		squares += float64(n[i] * n[i])
	}
	for u := range units {
		d := sum[u] - total[at[u]]/n[at[u]]
		within += float64(d * d)
	}
	betweenMean, withinMean := between/(k-classes), within/(all-k)
	size := (all - squares/all) / (k - 1)
	if !(betweenMean > withinMean) {
		return nil
	}
	icc := (betweenMean - withinMean) / (betweenMean + float64((size-1)*withinMean))
	effect := 1 + float64((size-1)*icc)
	x := float64((all-k)*withinMean) / (float64((all-k)*withinMean) + float64((k-classes)*betweenMean))
	p := numeric.IncompleteBeta((all-k)/2, (k-classes)/2, x) // upper tail of F
	if icc <= 0.05 || effect <= 1.2 || p >= 0.025 {
		return nil
	}
	what := "Units"
	if in.Independent {
		what = "Rows"
	}
	f := &finding{severity: Stop, evidence: []record.Value{value("intraclass correlation", icc), value("design effect", effect),
		value("groups", k), value("effective units", all/effect), value("P", p)},
		text: fmt.Sprintf("%s inside %q resemble each other (intraclass correlation %.2f) but are drawn as "+
			"independent. The effective number is about %.0f, not %.0f.",
			what, name, icc, all/effect, all)}
	if k < 5 {
		f.severity = Caution
		f.text = fmt.Sprintf("The levels of %q differ more than what lies within them (intraclass correlation "+
			"%.2f); the draw takes no account of it.", name, icc)
	}
	return f
}

// class names the stratum and the group of comparison of a row.
func (in *Input) class(i, row int) string {
	key := ""
	for _, name := range in.Plan.Resampling.Strata {
		key += in.Table.Column(name).Texts[row] + "\x00"
	}
	if in.Selection.Group != nil {
		key += strconv.Itoa(in.Selection.Group[i])
	}
	return key
}
