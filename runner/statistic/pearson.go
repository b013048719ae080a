package statistic

import (
	"math"

	"lotproof/spec"
)

var pearson = Definition{
	Name:    "Pearson correlation",
	Columns: 2,
	MinN:    2,
	Summary: "The product-moment correlation of two columns.",
	Formula: "r = Σ(xᵢ−x̄)(yᵢ−ȳ) / √( Σ(xᵢ−x̄)² · Σ(yᵢ−ȳ)² )",
	Where:   "xᵢ, yᵢ are pairs of observations, x̄, ȳ their means",
	Assumptions: "It measures a straight-line relation, depends on the range that was sampled, and follows single " +
		"far points.",
	Sources: []string{"ISO 3534-1:2006, Statistics — Vocabulary and symbols — Part 1, 1.23"},
	Unit:    noUnit,
	Bounds:  correlationRange,
	New:     func([]spec.Setting) Estimator { return pearsonOf{} },
}

type pearsonOf struct{}

func (pearsonOf) Estimate(s *Sample) (float64, error) { return correlation(s.Column(0), s.Column(1)) }

// correlation returns the product-moment correlation of x and y; rounding is kept from carrying it past 1.
func correlation(x, y []float64) (float64, error) {
	if len(x) < 2 {
		return 0, ErrTooFew
	}
	m := moments(x, y)
	if m.xx == 0 || m.yy == 0 {
		return 0, ErrNoSpread
	}
	if math.IsInf(m.xx, 1) || math.IsInf(m.yy, 1) {
		return 0, ErrNotFinite // else anything over infinity would pass for 0
	}
	return number(min(max(m.xy/float64(math.Sqrt(m.xx)*math.Sqrt(m.yy)), -1), 1))
}

// Influence is z_x·z_y − r·(z_x² + z_y²)/2 with z standardised by the divisor n.
func (pearsonOf) Influence(s *Sample, value float64, out []float64) error {
	x, y := s.Column(0), s.Column(1)
	m := moments(x, y)
	n := float64(len(x))
	sx, sy := math.Sqrt(m.xx/n), math.Sqrt(m.yy/n)
	if sx == 0 || sy == 0 {
		return ErrNoSpread
	}
	for i := range x {
		u, v := (x[i]-m.x)/sx, (y[i]-m.y)/sy
		out[i] = float64(u*v) - float64(float64(value*(float64(u*u)+float64(v*v)))/2)
	}
	return nil
}

// centredMoments are means and centred sums of two columns.
type centredMoments struct{ x, y, xx, yy, xy float64 }

func moments(x, y []float64) centredMoments {
	var m centredMoments
	n := float64(len(x))
	var sumX, sumY float64
	for i := range x {
		sumX += x[i]
		sumY += y[i]
	}
	m.x, m.y = sumX/n, sumY/n
	var residueX, residueY float64
	for i := range x {
		dx, dy := x[i]-m.x, y[i]-m.y
		m.xx += float64(dx * dx)
		m.yy += float64(dy * dy)
		m.xy += float64(dx * dy)
		residueX += dx
		residueY += dy
	}
	m.xx = max(0, m.xx-float64(residueX*residueX)/n)
	m.yy = max(0, m.yy-float64(residueY*residueY)/n)
	m.xy -= float64(residueX*residueY) / n
	return m
}
