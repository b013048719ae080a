package report

import (
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"
)

func TestTicks(t *testing.T) {
	tests := []struct {
		name      string
		low, high float64
		most      int
		want      string
		exponent  int
	}{
		{"around zero", -0.2, 0.2, 4, "−0.2 −0.1 0.0 0.1 0.2", 0},
		{"zero without a sign", -1e-9, 1, 5, "0.0 0.2 0.4 0.6 0.8 1.0", 0},
		{"thirds of tenths", 0, 0.7, 7, "0.0 0.1 0.2 0.3 0.4 0.5 0.6 0.7", 0},
		{"large", 0, 4e6, 4, "0 1 2 3 4", 6},
		{"small", 0, 3e-7, 3, "0 1 2 3", -7},
		{"counts", 0, 1700, 4, "0 500 1000 1500", 0},
		{"narrow, far from zero", 1000.001, 1000.003, 4, "1000.0010 1000.0015 1000.0020 1000.0025 1000.0030", 0},
		{"no range", 1, 1, 4, "", 0},
		{"not a number", math.NaN(), 1, 4, "", 0},
		{"the whole range of numbers", -math.MaxFloat64, math.MaxFloat64, 4, "−1 0 1", 308},
		{"smallest numbers", 0, 5e-324, 4, "", 0},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			got, exponent := ticks(tt.low, tt.high, tt.most)
			var labels []string
			for _, k := range got {
				labels = append(labels, k.label)
				if k.value < tt.low || k.value > tt.high {
					t.Errorf("tick %s at %g is off the axis", k.label, k.value)
				}
			}
			if text := strings.Join(labels, " "); text != tt.want || exponent != tt.exponent {
				t.Errorf("ticks %q with 10^%d, want %q with 10^%d", text, exponent, tt.want, tt.exponent)
			}
		})
	}
}

// Law: wherever values lie, no label of a usual width covers another label or the staff of another value, and all stand
// within the figure.
func TestFlagsNeverOverlap(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	for trial := range 20000 {
		var flags []pennant
		for range 1 + random.IntN(5) {
			f := pennant{x: 30 + 150*random.Float64(), width: 12 + 20*random.Float64()}
			if random.IntN(4) == 0 {
				f.x = 30 + 150*float64(random.IntN(4))/3 // coincidences and edges
			}
			flags = append(flags, f)
		}
		lanes := arrange(flags, 30, 186)
		if lanes > len(flags) {
			t.Fatalf("trial %d: %d lanes for %d flags", trial, lanes, len(flags))
		}
		for i, p := range flags {
			from, to := p.span()
			if from < 30 || to > 186 {
				t.Fatalf("trial %d: label from %.2f to %.2f", trial, from, to)
			}
			for j, q := range flags {
				a, b := q.span()
				if i < j && p.lane == q.lane && from < b && a < to {
					t.Fatalf("trial %d: labels overlap: %+v", trial, flags)
				}
				if i != j && q.lane >= p.lane && q.x > from && q.x < to {
					t.Fatalf("trial %d: a staff crosses a label: %+v", trial, flags)
				}
			}
		}
	}
}

func TestArrangeUsesOneLaneWhereLabelsFit(t *testing.T) {
	flags := []pennant{{x: 100, width: 20}, {x: 40, width: 20}, {x: 180, width: 20}}
	if lanes := arrange(flags, 30, 186); lanes != 1 {
		t.Errorf("%d lanes, want 1", lanes)
	}
	if x := []float64{flags[0].x, flags[1].x, flags[2].x}; !slices.IsSorted(x) {
		t.Errorf("staffs at %v are not in order", x)
	}
	if !flags[2].left {
		t.Error("the label at the right edge stands on the right")
	}
}

func TestScaleSurvivesExtremes(t *testing.T) {
	for _, s := range []scale{{-math.MaxFloat64, math.MaxFloat64, 10, 20}, {0, 5e-324, 10, 20}, {3, 3, 10, 20},
		{-1, 1, 10, 20}} {
		for _, v := range []float64{s.low, s.high, s.low/2 + s.high/2} {
			if x := s.at(v); !(x >= 10 && x <= 20) {
				t.Errorf("%+v: %g stands at %g", s, v, x)
			}
		}
	}
}

// Labels so wide that some staff must pass behind one still do not cover each other.
func TestWideFlagsStandInLanesOfTheirOwn(t *testing.T) {
	flags := []pennant{{x: 62, width: 39}, {x: 100, width: 47}, {x: 130, width: 40}, {x: 159, width: 33}}
	if lanes := arrange(flags, 30, 186); lanes != 4 {
		t.Errorf("%d lanes, want 4", lanes)
	}
	for i, f := range flags {
		if f.lane != i {
			t.Errorf("flag %d stands in lane %d", i, f.lane)
		}
	}
}
