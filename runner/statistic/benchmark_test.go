package statistic

import (
	"math/rand/v2"
	"strings"
	"testing"
)

// One resample of 200 observations and its estimate. "draw" is the drawing alone, to be taken off the others; where a
// statistic needs sorted values, their sorting is part of it.
func BenchmarkEstimate(b *testing.B) {
	r := rand.New(rand.NewPCG(41, 1))
	const n = 200
	rows := make([]int32, n)
	for i := range rows {
		rows[i] = int32(r.IntN(n))
	}
	resample := func(u subject, do func(*Sample)) func(*testing.B) {
		source := u.sample(r, n)
		var columns [][]float64
		for i := range u.columns {
			columns = append(columns, source.Column(i))
		}
		from, groups := source.Groups()
		var codes []int32
		if from != nil {
			for _, row := range rows {
				codes = append(codes, from[row])
			}
		}
		drawn := NewBase(columns).NewSample()
		return func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				drawn.Draw(rows, codes, groups)
				do(drawn)
			}
		}
	}
	b.Run("draw", resample(subject{columns: 1}, func(*Sample) {}))
	b.Run("draw two columns", resample(subject{columns: 2}, func(*Sample) {}))
	for _, u := range subjects {
		e := bind(b, u.name, u.settings...)
		title := strings.Join(append([]string{u.name}, u.settings...), " ")
		b.Run(title, resample(u, func(s *Sample) {
			if _, err := e.Estimate(s); err != nil {
				b.Fatal(err)
			}
		}))
		if own, ok := e.(StandardErrorer); ok {
			b.Run(title+", standard error", resample(u, func(s *Sample) {
				if _, err := own.StandardError(s, 0); err != nil {
					b.Fatal(err)
				}
			}))
		}
	}
}
