package statistic

import (
	"errors"
	"math"
	"math/big"
	"math/rand/v2"
	"slices"
	"strconv"
	"testing"

	"gonum.org/v1/gonum/stat"
)

// subject is one statistic with settings, and how it answers to x → a·x + b, with a > 0.
type subject struct {
	name     string
	settings []string
	columns  int
	factor   bool
	shift    float64 // the value moves by shift·b
	scale    float64 // and is multiplied by a to this power
	ratio    bool    // no simple law under a shift
}

var subjects = []subject{
	{"mean", nil, 1, false, 1, 1, false},
	{"median", nil, 1, false, 1, 1, false},
	{"trimmed mean", []string{"0.15"}, 1, false, 1, 1, false},
	{"geometric mean", nil, 1, false, 0, 1, true},
	{"quantile", []string{"0.1", "6"}, 1, false, 1, 1, false},
	{"quantile", []string{"0.9", "3"}, 1, false, 1, 1, false},
	{"standard deviation", nil, 1, false, 0, 1, false},
	{"variance", nil, 1, false, 0, 2, false},
	{"coefficient of variation", nil, 1, false, 0, 0, true},
	{"interquartile range", nil, 1, false, 0, 1, false},
	{"median absolute deviation", []string{"1.4826"}, 1, false, 0, 1, false},
	{"proportion", []string{"x"}, 1, false, 1, 1, false}, // as the mean of its column
	{"Pearson correlation", nil, 2, false, 0, 0, false},
	{"Spearman correlation", nil, 2, false, 0, 0, false},
	{"slope", nil, 2, false, 0, 0, false}, // both columns are moved alike
	{"intercept", nil, 2, false, 0, 1, true},
	{"repeatability standard deviation", []string{"g"}, 1, true, 0, 1, false},
}

// draws returns n positive observations with ties, in steps of 1/8, so that shifts and scales by powers of 2 are exact.
func draws(r *rand.Rand, n int) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = math.Round(8*(30+6*r.NormFloat64())) / 8
	}
	return x
}

// sample returns a sample of n rows for the subject.
func (u subject) sample(r *rand.Rand, n int) *Sample {
	columns := [][]float64{draws(r, n)}
	if u.columns == 2 {
		columns = append(columns, draws(r, n))
	}
	if !u.factor {
		return NewSample(columns, n, nil, 0)
	}
	codes := make([]int32, n)
	for i := range codes {
		codes[i] = int32(r.IntN(1 + n/3))
	}
	codes[1] = codes[0] // at least one level with two readings
	return NewSample(columns, n, codes, 1+n/3)
}

func near(got, want, tolerance float64) bool {
	return math.Abs(got-want) <= tolerance*math.Max(1, math.Abs(want))
}

// Every statistic of the catalogue takes part in the laws.
func TestSubjects(t *testing.T) {
	for _, d := range All() {
		if !slices.ContainsFunc(subjects, func(u subject) bool { return u.name == d.Name }) {
			t.Errorf("statistic %q takes no part in the laws", d.Name)
		}
	}
}

// Locations follow the zero and the unit of the measurement, spreads the unit alone, correlations neither.
func TestShiftAndScale(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	for _, u := range subjects {
		e := bind(t, u.name, u.settings...)
		for range 200 {
			s := u.sample(r, 4+r.IntN(30))
			a, b := math.Ldexp(1, r.IntN(9)-4), float64(r.IntN(64)-32)
			if u.ratio {
				b = 0
			}
			var moved [][]float64
			for i := range u.columns {
				column := slices.Clone(s.Column(i))
				for j := range column {
					column[j] = a*column[j] + b
				}
				moved = append(moved, column)
			}
			codes, groups := s.Groups()
			want := estimate(t, e, s)*math.Pow(a, u.scale) + u.shift*b
			if got := estimate(t, e, NewSample(moved, s.N(), codes, groups)); !near(got, want, 1e-12) {
				t.Fatalf("%s %v of %v·x + %v is %.17g, want %.17g; x = %v", u.name, u.settings, a, b, got, want,
					s.Column(0))
			}
		}
	}
}

// The order of the rows has no influence beyond rounding, and none at all where only ranks count.
func TestOrderOfRows(t *testing.T) {
	r := rand.New(rand.NewPCG(2, 1))
	for _, u := range subjects {
		e := bind(t, u.name, u.settings...)
		tolerance := 1e-12
		switch u.name {
		case "median", "quantile", "interquartile range", "median absolute deviation":
			tolerance = 0
		}
		for range 100 {
			n := 4 + r.IntN(30)
			s := u.sample(r, n)
			var columns [][]float64
			order := r.Perm(n)
			for i := range u.columns {
				column := make([]float64, n)
				for j, k := range order {
					column[j] = s.Column(i)[k]
				}
				columns = append(columns, column)
			}
			from, groups := s.Groups()
			var codes []int32
			if from != nil {
				for _, k := range order {
					codes = append(codes, from[k])
				}
			}
			want := estimate(t, e, s)
			if got := estimate(t, e, NewSample(columns, n, codes, groups)); !near(got, want, tolerance) {
				t.Fatalf("%s: %.17g in another order, %.17g before", u.name, got, want)
			}
		}
	}
}

// On a drawn sample everything is as on a plain sample of the same values, bit for bit, and Sorted is sorted; one
// Sample serves draws of different length.
func TestDrawnIsPlain(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 1))
	for _, u := range subjects {
		e := bind(t, u.name, u.settings...)
		source := u.sample(r, 25)
		var columns [][]float64
		for i := range u.columns {
			columns = append(columns, source.Column(i))
		}
		from, groups := source.Groups()
		drawn := NewBase(columns).NewSample()
		for range 200 {
			rows := make([]int32, 3+r.IntN(40))
			var codes []int32
			for i := range rows {
				rows[i] = int32(r.IntN(25))
				if from != nil {
					codes = append(codes, from[rows[i]])
				}
			}
			drawn.Draw(rows, codes, groups)
			var plain [][]float64
			for i := range u.columns {
				column := make([]float64, len(rows))
				for j, row := range rows {
					column[j] = columns[i][row]
				}
				plain = append(plain, column)
				sorted := slices.Sorted(slices.Values(column))
				if got := drawn.Sorted(i); !slices.Equal(got, sorted) {
					t.Fatalf("%s: sorted %v, want %v", u.name, got, sorted)
				}
			}
			want, wantErr := e.Estimate(NewSample(plain, len(rows), codes, groups))
			got, err := e.Estimate(drawn)
			if got != want || !errors.Is(err, wantErr) {
				t.Fatalf("%s: drawn %v, %v; plain %v, %v", u.name, got, err, want, wantErr)
			}
		}
	}
}

// The median absolute deviation against its definition, with sorting.
func TestMADByDefinition(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 1))
	middle := func(x []float64) float64 {
		x = slices.Sorted(slices.Values(x))
		n := len(x)
		return (x[(n-1)/2] + x[n/2]) / 2
	}
	e := bind(t, "median absolute deviation")
	for range 5000 {
		x := draws(r, 1+r.IntN(12))
		if r.IntN(3) == 0 {
			x[0] = 1000
		}
		centre := middle(x)
		var distance []float64
		for _, v := range x {
			distance = append(distance, math.Abs(v-centre))
		}
		if got, want := estimate(t, e, sampleOf(x)), middle(distance); got != want {
			t.Fatalf("MAD of %v is %v, want %v", x, got, want)
		}
	}
}

// The places of quantiles against the nine definitions of Hyndman and Fan (1996, table 1 and section 3: with m from the
// table, j = ⌊np + m⌋ and g = np + m − j), in rational arithmetic, for every p in steps of 1/40 and n to 60.
func TestQuantilePlaces(t *testing.T) {
	x := make([]float64, 60)
	for i := range x {
		x[i] = float64(i * i)
	}
	one := big.NewRat(1, 1)
	for definition := 1; definition <= 9; definition++ {
		for n := 1; n <= 60; n++ {
			for k := 1; k < 40; k++ {
				p := big.NewRat(int64(k), 40)
				m := map[int]*big.Rat{1: new(big.Rat), 2: new(big.Rat), 3: big.NewRat(-1, 2), 4: new(big.Rat),
					5: big.NewRat(1, 2), 6: p, 7: new(big.Rat).Sub(one, p),
					8: new(big.Rat).Quo(new(big.Rat).Add(p, one), big.NewRat(3, 1)),
					9: new(big.Rat).Add(new(big.Rat).Quo(p, big.NewRat(4, 1)), big.NewRat(3, 8))}[definition]
				at := new(big.Rat).Add(new(big.Rat).Mul(p, big.NewRat(int64(n), 1)), m)
				// Euclidean division: the floor, as the divisor is positive.
				j := int(new(big.Int).Div(at.Num(), at.Denom()).Int64())
				g, _ := new(big.Rat).Sub(at, big.NewRat(int64(j), 1)).Float64()
				switch definition {
				case 1:
					if g > 0 {
						g = 1
					}
				case 2:
					if g > 0 {
						g = 1
					} else {
						g = 0.5
					}
				case 3:
					if g > 0 || j%2 != 0 {
						g = 1
					}
				}
				low, high := x[min(max(j, 1), n)-1], x[min(max(j+1, 1), n)-1]
				want := (1-g)*low + g*high
				text := strconv.FormatFloat(float64(k)/40, 'f', -1, 64)
				e := bind(t, "quantile", text, strconv.Itoa(definition))
				if got := estimate(t, e, sampleOf(x[:n])); !near(got, want, 1e-14) {
					t.Fatalf("definition %d, n %d, p %s: %v, want %v (j %d, g %v)", definition, n, text, got, want,
						j, g)
				}
			}
		}
	}
}

// Rank 3 of 30 for p = 0.1 by definition 1, although 0.1·30 is above 3 in binary; the same for the share of a trimmed
// mean: 0.29·100 is below 29 in binary.
func TestDecimalRanks(t *testing.T) {
	x := make([]float64, 100)
	for i := range x {
		x[i] = float64(i+1) * float64(i+1)
	}
	if got := estimate(t, bind(t, "quantile", "0.1", "1"), sampleOf(x[:30])); got != 9 {
		t.Errorf("quantile 0.1 of 30 is %v, want the third value, 9", got)
	}
	want := stat.Mean(x[29:71], nil)
	if got := estimate(t, bind(t, "trimmed mean", "0.29"), sampleOf(x)); !near(got, want, 1e-14) {
		t.Errorf("mean trimmed by 0.29 of 100 is %v, want %v", got, want)
	}
}

// A general-purpose library as second computation: gonum's mean, standard deviation, variance, geometric mean,
// correlation, regression line and empirical quantile (definition 1).
func TestSecondComputation(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 1))
	for range 300 {
		n := 3 + r.IntN(50)
		x, y := draws(r, n), draws(r, n)
		s := sampleOf(x, y)
		intercept, slope := stat.LinearRegression(x, y, nil, false)
		mean, sd := stat.MeanStdDev(x, nil)
		want := map[string]float64{"mean": mean, "standard deviation": sd, "variance": sd * sd,
			"coefficient of variation": sd / mean, "geometric mean": stat.GeometricMean(x, nil),
			"Pearson correlation": stat.Correlation(x, y, nil), "slope": slope, "intercept": intercept,
			"quantile": stat.Quantile(0.3, stat.Empirical, slices.Sorted(slices.Values(x)), nil)}
		for name, v := range want {
			var settings []string
			if name == "quantile" {
				settings = []string{"0.3", "1"}
			}
			if got := estimate(t, bind(t, name, settings...), s); !near(got, v, 1e-11) {
				t.Fatalf("%s is %.17g, gonum has %.17g; n = %d", name, got, v, n)
			}
		}
	}
}

// Estimate allocates nothing on a drawn sample once its scratch is there.
func TestNoAllocations(t *testing.T) {
	r := rand.New(rand.NewPCG(6, 1))
	for _, u := range subjects {
		e := bind(t, u.name, u.settings...)
		source := u.sample(r, 40)
		var columns [][]float64
		for i := range u.columns {
			columns = append(columns, source.Column(i))
		}
		codes, groups := source.Groups()
		drawn := NewBase(columns).NewSample()
		rows := make([]int32, 40)
		for i := range rows {
			rows[i] = int32(r.IntN(40))
		}
		if n := testing.AllocsPerRun(20, func() {
			drawn.Draw(rows, codes, groups)
			if _, err := e.Estimate(drawn); err != nil {
				t.Errorf("%s: %v", u.name, err)
			}
		}); n != 0 {
			t.Errorf("%s allocates %v times a resample", u.name, n)
		}
	}
}

// What cannot be estimated is a reason, never a number that is not finite.
func TestReasons(t *testing.T) {
	huge := math.MaxFloat64
	tests := []struct {
		name    string
		columns [][]float64
		codes   []int32
		want    error
	}{
		{"mean", [][]float64{{}}, nil, ErrTooFew},
		{"median", [][]float64{{}}, nil, ErrTooFew},
		{"trimmed mean", [][]float64{{}}, nil, ErrTooFew},
		{"geometric mean", [][]float64{{}}, nil, ErrTooFew},
		{"quantile", [][]float64{{}}, nil, ErrTooFew},
		{"interquartile range", [][]float64{{}}, nil, ErrTooFew},
		{"median absolute deviation", [][]float64{{}}, nil, ErrTooFew},
		{"standard deviation", [][]float64{{5}}, nil, ErrTooFew},
		{"variance", [][]float64{{5}}, nil, ErrTooFew},
		{"coefficient of variation", [][]float64{{5}}, nil, ErrTooFew},
		{"Pearson correlation", [][]float64{{5}, {6}}, nil, ErrTooFew},
		{"Spearman correlation", [][]float64{{5}, {6}}, nil, ErrTooFew},
		{"slope", [][]float64{{5}, {6}}, nil, ErrTooFew},
		{"intercept", [][]float64{{5}, {6}}, nil, ErrTooFew},
		{"repeatability standard deviation", [][]float64{{5, 6}}, []int32{0, 1}, ErrTooFew},
		{"geometric mean", [][]float64{{3, 0}}, nil, ErrNotPositive},
		{"geometric mean", [][]float64{{3, -1}}, nil, ErrNotPositive},
		{"coefficient of variation", [][]float64{{-1, 1}}, nil, ErrNotPositive},
		{"coefficient of variation", [][]float64{{-3, 1}}, nil, ErrNotPositive},
		{"Pearson correlation", [][]float64{{1, 2}, {3, 3}}, nil, ErrNoSpread},
		{"Spearman correlation", [][]float64{{3, 3}, {1, 2}}, nil, ErrNoSpread},
		{"slope", [][]float64{{3, 3}, {1, 2}}, nil, ErrNoSpread},
		{"mean", [][]float64{{huge, huge}}, nil, ErrNotFinite},
		{"standard deviation", [][]float64{{-huge, huge}}, nil, ErrNotFinite},
		{"coefficient of variation", [][]float64{{1, huge}}, nil, ErrNotFinite},
		{"interquartile range", [][]float64{{-huge, huge, -huge, huge}}, nil, ErrNotFinite},
		{"slope", [][]float64{{1, 2}, {-huge, huge}}, nil, ErrNotFinite},
		{"slope", [][]float64{{-huge, huge}, {1, 2}}, nil, ErrNotFinite},
		{"intercept", [][]float64{{-huge, huge}, {1, 2}}, nil, ErrNotFinite},
		{"Pearson correlation", [][]float64{{1, 2}, {-huge, huge}}, nil, ErrNotFinite},
		{"repeatability standard deviation", [][]float64{{-huge, huge}}, []int32{0, 0}, ErrNotFinite},
	}
	for _, tt := range tests {
		s := NewSample(tt.columns, len(tt.columns[0]), tt.codes, 2)
		settings := map[string][]string{"quantile": {"0.5"}, "trimmed mean": {"0.1"}}[tt.name]
		got, err := bind(t, tt.name, settings...).Estimate(s)
		if !errors.Is(err, tt.want) {
			t.Errorf("%s of %v is %v, %v; want %q", tt.name, tt.columns, got, err, tt.want)
		}
		if !slices.Contains(Reasons, tt.want) {
			t.Errorf("%q is not listed", tt.want)
		}
	}
}
