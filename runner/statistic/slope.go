package statistic

import (
	"math"

	"lotproof/spec"
)

var slope = Definition{
	Name:        "slope",
	Columns:     2,
	MinN:        2,
	Summary:     "The slope of the least-squares line of the second column on the first.",
	Formula:     "b = Σ(xᵢ−x̄)(yᵢ−ȳ) / Σ(xᵢ−x̄)²",
	Where:       "xᵢ is the first and yᵢ the second column, x̄, ȳ are their means",
	Assumptions: "The relation is a straight line; the first column has no error of measurement.",
	Sources:     []string{draper},
	Unit: func(units []string) string {
		if units[0] == units[1] || units[1] == "" && units[0] == "" {
			return ""
		}
		top := units[1]
		if top == "" {
			top = "1"
		}
		if units[0] == "" {
			return top
		}
		return top + " per " + units[0]
	},
	New: func([]spec.Setting) Estimator { return lineOf{} },
}

const draper = "Draper NR, Smith H. Applied Regression Analysis. 3rd edition, Wiley 1998, chapter 1"

type lineOf struct{ intercept bool }

func (l lineOf) Estimate(s *Sample) (float64, error) {
	if s.N() < 2 {
		return 0, ErrTooFew
	}
	m := moments(s.Column(0), s.Column(1))
	if m.xx == 0 {
		return 0, ErrNoSpread
	}
	if math.IsInf(m.xx, 1) {
		return 0, ErrNotFinite // else the slope would pass for 0
	}
	b := m.xy / m.xx
	if l.intercept {
		return number(m.y - float64(b*m.x))
	}
	return number(b)
}

// Influence is (x − x̄)·e/m_xx for the slope and e − x̄·L(b) for the intercept, with residuals e and the mean square
// m_xx of x about its mean.
func (l lineOf) Influence(s *Sample, _ float64, out []float64) error {
	x, y := s.Column(0), s.Column(1)
	m := moments(x, y)
	if m.xx == 0 {
		return ErrNoSpread
	}
	b, mean := m.xy/m.xx, m.xx/float64(len(x))
	for i := range x {
		dx := x[i] - m.x
		e := y[i] - m.y - float64(b*dx)
		out[i] = float64(dx*e) / mean
		if l.intercept {
			out[i] = e - float64(m.x*out[i])
		}
	}
	return nil
}
