package spec

import (
	"fmt"
	"math/big"
	"slices"
	"strconv"
	"strings"

	"lotproof/spec/expression"
)

var (
	statisticKeys = []string{"id", "label", "role", "source", "where", "statistic", "of", "with", "compare", "bound",
		"confidence", "interval", "companion", "accept", "decimals", "resampling"}
	laterStatisticKeys = []string{"test", "formula"}
	compareKeys        = []string{"by", "of", "as"}
	acceptKeys         = []string{"lower_at_least", "upper_at_most"}
)

func (r *reader) statistics(f field, plan *mapping, byDefault *resamplingFields) {
	ids := map[string]*Statistic{}
	lines := map[string]int{}
	for i, item := range r.items(f, false) {
		item.name = fmt.Sprintf("statistic %d", i+1)
		s := &Statistic{}
		m := r.open(item, statisticKeys, laterStatisticKeys)
		if m == nil {
			continue
		}
		if f, given := m.need("id", "give it a short name of your choice, as in id: aged median"); given {
			s.ID = r.statisticID(f, ids, lines)
		}
		if s.ID != "" {
			m.name = fmt.Sprintf("statistic %q", s.ID)
			ids[plainID(s.ID)], lines[plainID(s.ID)] = s, f.at.Line
		}
		r.statistic(m, s, plan, byDefault)
		r.plan.Statistics = append(r.plan.Statistics, *s)
	}
	if byDefault != nil && !byDefault.used {
		r.unusedDefault(byDefault)
	}
}

// plainID is the form in which ids must differ: as in expressions, and without regard to letter case, because sheets
// and files are named after them.
func plainID(id string) string { return strings.ToLower(strings.ReplaceAll(id, " ", "_")) }

func (r *reader) statisticID(f field, ids map[string]*Statistic, lines map[string]int) string {
	id, ok := r.line(f, maxName)
	if !ok {
		return ""
	}
	if first, twice := ids[plainID(id)]; twice {
		problem := fmt.Sprintf("id %q is given twice; the first is on line %d", id, lines[plainID(id)])
		if first.ID != id {
			problem = fmt.Sprintf("id %q differs from %q on line %d only in letter case, or _ for a blank", id, first.ID,
				lines[plainID(id)])
		}
		r.wrongAt(f.at, problem, "give every statistic an id of its own")
	}
	return id
}

func (r *reader) statistic(m *mapping, s *Statistic, plan *mapping, byDefault *resamplingFields) {
	s.Label, s.Role, s.Companion, s.Bound = s.ID, "primary", "shown", TwoSided
	s.Of, s.With, s.Intervals, s.Confidence = []string{}, []Setting{}, []string{}, []Number{}
	if f, given := m.has("label"); given {
		s.Label, _ = r.line(f, maxLine)
	}
	if f, given := m.has("role"); given {
		s.Role, _ = r.choice(f, []string{"primary", "supporting"})
	}
	if f, given := m.has("companion"); given {
		s.Companion, _ = r.choice(f, []string{"shown", "decides"})
	}
	s.Decimals = m.decimals()
	boundKnown := true
	if f, given := m.has("bound"); given {
		var text string
		text, boundKnown = r.choice(f, []string{string(TwoSided), string(Lower), string(Upper)})
		s.Bound = Bound(text)
	}

	source := r.sourceOf(m, s)
	if f, given := m.has("where"); given && source != nil {
		s.Where = r.condition(f, source)
	} else if given {
		s.Where, _ = r.text(f)
	}
	var entry *StatisticEntry
	if f, given := m.need("statistic", "name what is estimated, as in statistic: median"); given {
		if i := r.entry(f, "statistic", r.catalogue.statisticNames(), laterStatistics); i >= 0 {
			entry = &r.catalogue.Statistics[i]
			s.Name = entry.Name
		}
	}
	r.of(m, s, entry, source)
	r.with(m, s, entry, source)
	compareGiven := false
	if f, given := m.has("compare"); given {
		compareGiven = true
		r.compare(f, s, source)
	}
	r.intervals(m, s, entry, compareGiven)
	r.levels(m, s, plan)
	r.accept(m, s, plan, boundKnown)

	var own *resamplingFields
	if f, given := m.has("resampling"); given {
		if own = r.resampling(f); own == nil {
			return
		}
	}
	if _, wrong := plan.fields["resampling"]; wrong && byDefault == nil {
		return // the default is reported already
	}
	merged := r.merge(own, byDefault, m.path)
	if !merged.unitGiven {
		r.wrongAt(m.at, fmt.Sprintf("no resampling unit is stated for %s", m.name), "write what is drawn, as in "+
			"resampling: {unit: pouch}, or unit: row if rows are independent")
	}
	if !merged.resamplesGiven {
		r.wrongAt(m.at, fmt.Sprintf("the number of resamples is not stated for %s", m.name), "write it, as in "+
			"resampling: {resamples: 20000}")
	}
	if source != nil {
		r.units(merged, source)
	}
	if merged.resamples > 0 && boundKnown {
		r.enough(merged.resamples, merged.resamplesAt, s.Confidence, s.Bound)
	}
	s.Resampling = Resampling{Unit: names(merged.unit), Strata: names(merged.strata), Resamples: merged.resamples}
}

// sourceOf returns the source of a statistic, or nil.
func (r *reader) sourceOf(m *mapping, s *Statistic) *Source {
	known := make([]string, len(r.plan.Sources))
	for i := range r.plan.Sources {
		known[i] = r.plan.Sources[i].Name
	}
	f, given := m.has("source")
	if !given {
		if len(known) == 1 {
			s.Source = known[0]
			return &r.plan.Sources[0]
		}
		if len(known) > 1 {
			r.wrongAt(m.at, fmt.Sprintf(`key "source" is missing in %s`, m.name),
				"name one of the sources: "+expression.List(known))
		}
		return nil
	}
	name, ok := r.line(f, maxName)
	if !ok {
		return nil
	}
	s.Source = name
	if i := slices.Index(known, name); i >= 0 {
		return &r.plan.Sources[i]
	}
	if len(known) > 0 {
		fix := "sources here: " + expression.List(known)
		if near := expression.Nearest(name, known); near != "" {
			fix = fmt.Sprintf("did you mean %q? ", near) + fix
		}
		r.wrongAt(f.at, fmt.Sprintf("there is no source %q", quotable(name)), fix)
	}
	return nil
}

func (r *reader) of(m *mapping, s *Statistic, entry *StatisticEntry, source *Source) {
	f, given := m.has("of")
	if !given {
		if entry != nil && entry.Columns > 0 {
			m.need("of", "name "+columnCount(entry.Columns))
		}
		return
	}
	if entry != nil && entry.Columns == 0 {
		fix := "take of out"
		if len(entry.Parameters) > 0 {
			fix += fmt.Sprintf("; %s is stated in with: {%s: …}", entry.Name, entry.Parameters[0].Name)
		}
		r.wrongAt(f.at, fmt.Sprintf("%s takes no column", entry.Name), fix)
		return
	}
	columns := r.names(f)
	if given := max(1, len(f.node.Content)); entry != nil && len(columns) > 0 && given != entry.Columns {
		r.wrongAt(f.at, fmt.Sprintf("%s takes another number of columns than %d", entry.Name, given),
			"name "+columnCount(entry.Columns))
	}
	for _, n := range columns {
		s.Of = append(s.Of, n.name)
		if source != nil {
			r.columnOf(n, source, "column to be analysed", TypeNumber)
		}
	}
}

func columnCount(n int) string {
	if n == 1 {
		return "one number column"
	}
	return "two number columns, as in of: [first, second]"
}

// with reads the parameters, in the order of the catalogue.
func (r *reader) with(m *mapping, s *Statistic, entry *StatisticEntry, source *Source) {
	f, given := m.has("with")
	if entry == nil {
		return
	}
	known := make([]string, len(entry.Parameters))
	for i, p := range entry.Parameters {
		known[i] = p.Name
	}
	var w *mapping
	if given && len(known) == 0 {
		r.wrongAt(f.at, fmt.Sprintf("%s takes no parameter", entry.Name), "take with out")
		return
	} else if given {
		if w = r.open(f, known, nil); w == nil {
			return
		}
	}
	for _, p := range entry.Parameters {
		var f field
		given := false
		if w != nil {
			f, given = w.has(p.Name)
		}
		switch {
		case given:
			if setting, ok := r.setting(f, p, entry, source); ok {
				s.With = append(s.With, setting)
			}
		case p.Default != "":
			value, _ := strconv.ParseFloat(p.Default, 64)
			s.With = append(s.With, Setting{Name: p.Name, Text: p.Default, Number: value})
		case w != nil && w.meant[p.Name]:
		default:
			at := m.at
			if w != nil {
				at = w.at
			}
			r.wrongAt(at, fmt.Sprintf("%s needs the parameter %q", entry.Name, p.Name), fmt.Sprintf("write with: {%s: …}, %s",
				p.Name, p.Summary))
		}
	}
}

func (r *reader) setting(f field, p Parameter, entry *StatisticEntry, source *Source) (Setting, bool) {
	s := Setting{Name: p.Name}
	switch p.Kind {
	case KindCondition:
		if source != nil {
			s.Text = r.condition(f, source)
		}
		return s, s.Text != ""
	case KindCategory:
		text, ok := r.line(f, maxName)
		if ok && source != nil {
			r.columnOf(named{text, f.at}, source, p.Name, TypeCategory)
		}
		s.Text = text
		return s, ok
	case KindWhole:
		n, ok := r.whole(f, uint64(p.Min), uint64(p.Max))
		s.Text, s.Number = strconv.FormatUint(n, 10), float64(n)
		return s, ok
	}
	n, ok := r.number(f)
	if !ok {
		return s, false
	}
	if n.Value < p.Min || n.Value == p.Min && !p.MinIncluded || n.Value >= p.Max {
		least := "greater than"
		if p.MinIncluded {
			least = "at least"
		}
		r.wrongAt(f.at, fmt.Sprintf("%s %s of %s is out of range", p.Name, n.Text, entry.Name),
			fmt.Sprintf("write a number %s %s and less than %s", least, short(p.Min), short(p.Max)))
		return s, false
	}
	s.Text, s.Number = n.Text, n.Value
	return s, true
}

func short(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

func (r *reader) compare(f field, s *Statistic, source *Source) {
	m := r.open(f, compareKeys, nil)
	if m == nil {
		return
	}
	m.name = "compare"
	c := &Compare{}
	s.Compare = c
	var by *Column
	if f, given := m.need("by", "name the category column that tells the two groups apart"); given {
		if text, ok := r.line(f, maxName); ok && source != nil {
			c.By = text
			r.columnOf(named{text, f.at}, source, "column to compare by", TypeCategory)
			by = findColumn(source, text)
		}
	}
	if f, given := m.need("of", "name the two levels, as in of: [aged, fresh]"); given {
		items := r.items(f, false)
		if len(items) > 0 && len(items) != 2 {
			r.wrongAt(f.at, fmt.Sprintf("two groups are compared, and of names %d", len(items)), "name two levels, as in of: "+
				"[aged, fresh]")
			items = nil
		}
		for i, item := range items {
			item.name = "level"
			text, ok := r.line(item, maxLine)
			if !ok {
				continue
			}
			c.Of[i] = text
			if i == 1 && text == c.Of[0] {
				r.wrongAt(item.at, fmt.Sprintf("level %q is compared with itself", text), "name two different levels")
			}
			if by != nil && len(by.Levels) > 0 && !slices.Contains(by.Levels, text) {
				fix := "levels: " + expression.List(by.Levels)
				if near := expression.Nearest(text, by.Levels); near != "" {
					fix = fmt.Sprintf("did you mean %q? ", near) + fix
				}
				r.wrongAt(item.at, fmt.Sprintf("%q is not a level of column %s", quotable(text), by.Name), fix)
			}
		}
	}
	if f, given := m.need("as", "write as: difference, the first minus the second, or as: ratio"); given {
		c.As, _ = r.choice(f, []string{"difference", "ratio"})
	}
}

func (r *reader) intervals(m *mapping, s *Statistic, entry *StatisticEntry, compare bool) {
	name := s.Name
	if entry == nil {
		name = ""
	}
	fitting := r.catalogue.intervalNames()
	if entry != nil {
		fitting = r.catalogue.fitting(name, compare)
	}
	f, given := m.need("interval", "name one method or a list, of which the first decides; intervals for it: "+
		expression.List(fitting))
	if !given {
		return
	}
	for _, item := range r.items(f, true) {
		i := r.entry(item, "interval", r.catalogue.intervalNames(), laterIntervals)
		if i < 0 {
			continue
		}
		e := r.catalogue.Intervals[i]
		switch {
		case slices.Contains(s.Intervals, e.Name):
			r.wrongAt(item.at, fmt.Sprintf("interval %q is given twice", e.Name), "keep one")
			continue
		case entry != nil && !e.applies(name):
			r.wrongAt(item.at, fmt.Sprintf("interval %q does not apply to %s", e.Name, name), "intervals for it: "+
				expression.List(fitting))
		case entry != nil && compare && !e.Compare:
			r.wrongAt(item.at, fmt.Sprintf("interval %q does not apply to a comparison of two groups", e.Name),
				"intervals for it: "+expression.List(fitting))
		}
		s.Intervals = append(s.Intervals, e.Name)
	}
}

// levels settles the confidence of a statistic.
func (r *reader) levels(m *mapping, s *Statistic, plan *mapping) {
	if f, given := m.has("confidence"); given {
		s.Confidence = r.confidence(f)
		return
	}
	if _, given := plan.has("confidence"); !given {
		r.wrongAt(m.at, fmt.Sprintf("no confidence is stated for %s", m.name), "write confidence: 0.95, for it or for the "+
			"whole plan")
		return
	}
	s.Confidence = append(s.Confidence, r.plan.Confidence...)
	r.plan.positions[m.path+".confidence"] = r.plan.positions["confidence"]
	for i := range s.Confidence {
		r.plan.positions[fmt.Sprintf("%s.confidence[%d]", m.path, i)] = r.plan.positions[fmt.Sprintf("confidence[%d]", i)]
	}
}

func (r *reader) accept(m *mapping, s *Statistic, plan *mapping, boundKnown bool) {
	f, given := m.has("accept")
	if !given {
		return
	}
	a := r.open(f, acceptKeys, nil)
	if a == nil {
		return
	}
	if len(f.node.Content) == 0 {
		r.wrongAt(a.at, "accept holds no criterion",
			"write lower_at_least: or upper_at_most: with a number, or take accept out")
	}
	if _, given := plan.has("rounding"); !given {
		r.wrongAt(a.at, fmt.Sprintf("%s has a criterion, and the plan has no rounding rule", m.name),
			"write rounding: {rule: absolute} in the outermost place, or rule: rounded with ties")
	}
	limit := func(key string, against, other Bound) *Number {
		f, given := a.has(key)
		if !given {
			return nil
		}
		if boundKnown && s.Bound == against {
			r.wrongAt(f.at, fmt.Sprintf("%s is judged by the %s bound, and bound is %s", key, other, against),
				fmt.Sprintf("write bound: %s, or bound: two-sided", other))
		}
		n, ok := r.number(f)
		if !ok {
			return nil
		}
		return &n
	}
	s.Accept.LowerAtLeast = limit("lower_at_least", Upper, Lower)
	s.Accept.UpperAtMost = limit("upper_at_most", Lower, Upper)
	if lower, upper := s.Accept.LowerAtLeast, s.Accept.UpperAtMost; lower != nil && upper != nil {
		l, _ := new(big.Rat).SetString(lower.Text)
		u, _ := new(big.Rat).SetString(upper.Text)
		if l.Cmp(u) >= 0 {
			r.wrongAt(a.at, fmt.Sprintf("lower_at_least %s is not below upper_at_most %s, so no interval can meet both",
				lower.Text, upper.Text), "exchange or correct them")
		}
	}
}

// unusedDefault checks the plan's default resampling where every statistic overrides it: its columns must exist
// somewhere.
func (r *reader) unusedDefault(s *resamplingFields) {
	for _, n := range append(slices.Clone(s.unit), s.strata...) {
		if n.name == Row {
			continue
		}
		found := slices.ContainsFunc(r.plan.Sources, func(source Source) bool {
			return r.broken[source.Name] || findColumn(&source, n.name) != nil
		})
		if !found && len(r.plan.Sources) > 0 {
			r.wrongAt(n.at, fmt.Sprintf("no source declares a column %q", quotable(n.name)),
				"correct the name, or declare the column")
		}
	}
}
