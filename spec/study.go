package spec

import (
	"fmt"
	"math/big"
	"regexp"
	"strings"
	"time"
)

var (
	planKeys = []string{"lotproof", "study", "sources", "seed", "confidence", "resampling", "rounding", "statistics",
		"amendments"}
	laterPlanKeys = []string{"families"}
	studyKeys     = []string{"id", "title", "purpose", "protocol", "author", "status", "disclaimers"}
	amendmentKeys = []string{"number", "date", "what", "why", "results_seen"}
	roundingKeys  = []string{"rule", "ties"}
)

// readPlan reads the outermost mapping.
func (r *reader) readPlan(root *node) {
	m := r.open(field{node: root, at: Position{root.Line, root.Column}, name: "the plan"}, planKeys, laterPlanKeys)
	if m == nil {
		return
	}
	m.name = "" // a missing key is missing in the plan as a whole
	if f, given := m.need("lotproof", "begin the plan with lotproof: 1, the version of the plan language"); given {
		if n, ok := r.whole(f, 0, 1<<31-1); ok && n != 1 {
			r.wrongAt(f.at, fmt.Sprintf("version %d of the plan language is not known", n), "write lotproof: 1, and see "+
				"whether a newer program is meant")
		}
		r.plan.Language = 1
	}
	if f, given := m.need("study", "write study: and below it, indented, id: and title:"); given {
		r.study(f)
	}
	if f, given := m.need("seed", "write a whole number, or seed: derived to take it from the plan itself"); given {
		r.seed(f)
	}
	r.plan.Confidence = []Number{}
	if f, given := m.has("confidence"); given {
		r.plan.Confidence = r.confidence(f)
	}
	if f, given := m.has("rounding"); given {
		r.rounding(f)
	}
	r.plan.Amendments = []Amendment{}
	if f, given := m.has("amendments"); given {
		r.amendments(f)
	}
	r.plan.Sources = []Source{}
	if f, given := m.need("sources", "write sources: and below it a name of your choice with file: and columns:"); given {
		r.sources(f)
	}
	var resampling *resamplingFields
	if f, given := m.has("resampling"); given {
		if resampling = r.resampling(f); resampling != nil {
			r.plan.Resampling = &Resampling{names(resampling.unit), names(resampling.strata), resampling.resamples}
		}
	}
	r.plan.Statistics = []Statistic{}
	if f, given := m.need("statistics",
		"write statistics: and below it a list, each entry with id:, statistic:, of:"); given {
		r.statistics(f, m, resampling)
	}
}

func (r *reader) study(f field) {
	m := r.open(f, studyKeys, nil)
	if m == nil {
		return
	}
	s := &r.plan.Study
	if f, given := m.need("id", "name the study with letters, digits, . _ or -"); given {
		s.ID = r.studyID(f)
	}
	for _, text := range []struct {
		key  string
		to   *string
		long bool
	}{{"title", &s.Title, false}, {"purpose", &s.Purpose, true}, {"protocol", &s.Protocol, false},
		{"author", &s.Author, false}} {
		if f, given := m.has(text.key); given && text.long {
			*text.to, _ = r.text(f)
		} else if given {
			*text.to, _ = r.line(f, maxLine)
		}
	}
	s.Status = "draft"
	if f, given := m.has("status"); given {
		s.Status, _ = r.choice(f, []string{"draft", "approved"})
	}
	s.Disclaimers = []string{}
	if f, given := m.has("disclaimers"); given {
		for _, item := range r.items(f, true) {
			if text, ok := r.text(item); ok {
				s.Disclaimers = append(s.Disclaimers, text)
			}
		}
	}
}

// maxStudyID is how long a study id may be; it names a folder, and paths have a limit on some systems.
const maxStudyID = 64

var (
	studyID = regexp.MustCompile(`^[A-Za-z0-9._-]+$`)
	// devices are the names that no file or folder can have on Windows, whatever follows a point.
	devices = regexp.MustCompile(`(?i)^(con|prn|aux|nul|com[0-9]|lpt[0-9])(\.|$)`)
)

func (r *reader) studyID(f field) string {
	f.name = "study id"
	id, ok := r.line(f, maxStudyID)
	if !ok {
		return ""
	}
	wrong := func(problem, fix string) string {
		r.wrongAt(f.at, fmt.Sprintf("study id %q %s", id, problem), fix)
		return ""
	}
	switch {
	case !studyID.MatchString(id):
		return wrong("holds other characters than letters, digits, . _ and -",
			"write it with these; it names the output folder")
	case id[0] == '.' || id[0] == '-':
		return wrong("begins with "+id[:1], "begin it with a letter or a digit; it names the output folder")
	case strings.HasSuffix(id, "."):
		return wrong("ends with a point", "take the point out; it names the output folder")
	case devices.MatchString(id):
		return wrong("is a reserved name on Windows", "choose another; it names the output folder")
	}
	return id
}

func (r *reader) seed(f field) {
	if f.is("derived") {
		r.plan.Seed.Derived = true // the value follows when the whole plan is known to be right
		return
	}
	const mostSeed = 1<<64 - 1
	if f.node.Kind == scalarNode && !strings.ContainsAny(f.node.Value, "0123456789") {
		r.choice(f, []string{"a whole number", "derived"})
		return
	}
	r.plan.Seed.Value, _ = r.whole(f, 0, mostSeed)
}

var plainConfidence = regexp.MustCompile(`^0\.[0-9]{1,20}$`)

// Bounds of a confidence level. Below one half a limit is not on its side of the estimate; above the upper one no
// practicable number of resamples or units is enough.
var (
	leastConfidence = big.NewRat(1, 2)
	mostConfidence  = big.NewRat(9999, 10000)
)

// confidence reads one level or several.
func (r *reader) confidence(f field) []Number {
	levels := []Number{}
	for _, item := range r.items(f, true) {
		if n, ok := r.level(item); ok {
			for _, other := range levels {
				if other.Value == n.Value {
					r.wrongAt(item.at, fmt.Sprintf("confidence %s is given twice", n.Text), "keep one")
				}
			}
			levels = append(levels, n)
		}
	}
	return levels
}

func (r *reader) level(f field) (Number, bool) {
	if f.node.Kind == scalarNode && f.node.Style == 0 {
		value := strings.TrimSpace(strings.TrimSuffix(f.node.Value, "%"))
		one := big.NewRat(1, 1)
		if level, given := new(big.Rat).SetString(value); given && decimal.MatchString(value) && len(value) <= 20 &&
			(value != f.node.Value || level.Cmp(one) >= 0 || level.Sign() <= 0) {
			fix := "write a level below 1, as in 0.95"
			if share := percent(value); share != "" && level.Cmp(one) > 0 {
				fix = "write " + share
			}
			r.wrongAt(f.at, fmt.Sprintf("confidence %s is not between 0 and 1", f.node.Value), fix)
			return Number{}, false
		}
	}
	n, ok := r.number(f)
	if !ok {
		return Number{}, false
	}
	if !plainConfidence.MatchString(n.Text) {
		r.wrongAt(f.at, fmt.Sprintf("confidence %s is not a plain decimal", n.Text), "write it as in 0.95")
		return Number{}, false
	}
	exact, _ := new(big.Rat).SetString(n.Text)
	if exact.Cmp(leastConfidence) < 0 || exact.Cmp(mostConfidence) > 0 {
		r.wrongAt(f.at, fmt.Sprintf("confidence %s is out of range", n.Text), "write a level from 0.5 to 0.9999")
		return Number{}, false
	}
	return n, true
}

func (r *reader) rounding(f field) {
	m := r.open(f, roundingKeys, nil)
	if m == nil {
		return
	}
	r.plan.Rounding = &Rounding{}
	f, given := m.need("rule", "write rule: absolute to compare the unrounded limit, or rule: rounded")
	if !given {
		return
	}
	rule, ok := r.choice(f, []string{"absolute", "rounded"})
	r.plan.Rounding.Rule = rule
	ties, given := m.has("ties")
	if given {
		r.plan.Rounding.Ties, _ = r.choice(ties, []string{"even", "away"})
	}
	switch {
	case ok && rule == "absolute" && given:
		r.wrongAt(ties.at, "ties have no meaning with rule absolute, which rounds nothing",
			"take ties out, or write rule: rounded")
	case ok && rule == "rounded" && !given:
		r.wrongAt(m.at, `key "ties" is missing in rounding`,
			"write ties: even or ties: away, for a value half-way between two")
	}
}

func (r *reader) amendments(f field) {
	before := ""
	for i, item := range r.items(f, false) {
		item.name = fmt.Sprintf("amendment %d", i+1)
		m := r.open(item, amendmentKeys, nil)
		if m == nil {
			continue
		}
		a := Amendment{Number: i + 1}
		if f, given := m.need("number", fmt.Sprintf("write number: %d", i+1)); given {
			if n, ok := r.whole(f, 1, maxItems); ok && n != uint64(i+1) {
				r.wrongAt(f.at, fmt.Sprintf("amendment number %d is out of order", n), fmt.Sprintf("write %d; amendments are "+
					"numbered 1, 2, … in the order of the plan", i+1))
			}
		}
		if f, given := m.need("date", "write the day as in date: 2041-02-03"); given {
			if a.Date = r.date(f); a.Date != "" && a.Date < before {
				r.wrongAt(f.at, fmt.Sprintf("date %s is before that of the amendment above, %s", a.Date, before),
					"write amendments in the order in which they were made")
			}
			before = max(before, a.Date)
		}
		if f, given := m.need("what", "say what was changed"); given {
			a.What, _ = r.text(f)
		}
		if f, given := m.need("why", "say why it was changed"); given {
			a.Why, _ = r.text(f)
		}
		if f, given := m.need("results_seen", "write yes or no: whether any result was known at the time"); given {
			a.ResultsSeen, _ = r.yes(f)
		}
		r.plan.Amendments = append(r.plan.Amendments, a)
	}
}

// date returns a day of the calendar, written YYYY-MM-DD.
func (r *reader) date(f field) string {
	text, ok := r.line(f, maxLine)
	if !ok {
		return ""
	}
	day, err := time.Parse(time.DateOnly, text)
	if err != nil || day.Year() < 1 {
		r.wrongAt(f.at, fmt.Sprintf("date %q is not a day of the calendar", quotable(text)),
			"write year, month and day as in 2041-02-03")
		return ""
	}
	return text
}
