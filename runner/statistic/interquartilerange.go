package statistic

import "lotproof/spec"

var interquartileRange = Definition{
	Name:    "interquartile range",
	Columns: 1,
	Parameters: []spec.Parameter{{Name: "definition", Kind: spec.KindWhole, Min: 1, Max: 9, Default: "7",
		Summary: "Which of the nine definitions of a quantile of Hyndman and Fan (1996)."}},
	MinN:        1,
	Summary:     "The distance between the quartiles.",
	Formula:     "IQR = x(0.75) − x(0.25)",
	Where:       "x(p) is the quantile p",
	Assumptions: "None on the shape. With ties it moves in steps of the measurement.",
	Sources:     []string{hyndmanFan},
	Unit:        sameUnit,
	Bounds:      nonNegative,
	New:         func(with []spec.Setting) Estimator { return iqrOf{int(with[0].Number)} },
}

type iqrOf struct{ definition int }

func (q iqrOf) Estimate(s *Sample) (float64, error) {
	if s.N() < 1 {
		return 0, ErrTooFew
	}
	sorted := s.Sorted(0)
	high := quantilePlace(q.definition, s.N(), ratio{num: 3, den: 4}).at(sorted)
	return number(high - quantilePlace(q.definition, s.N(), ratio{num: 1, den: 4}).at(sorted))
}
