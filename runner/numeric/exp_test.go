package numeric

import (
	"crypto/sha256"
	"encoding/binary"
	"encoding/hex"
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// exactExp is e^x to 200 bits: the Taylor series of x/2¹⁰, squared ten times.
func exactExp(x float64) *big.Float {
	const bits = 260
	y := new(big.Float).SetPrec(bits).SetMantExp(new(big.Float).SetPrec(bits).SetFloat64(x), -10)
	sum, term := new(big.Float).SetPrec(bits).SetInt64(1), new(big.Float).SetPrec(bits).SetInt64(1)
	for k := int64(1); k < 120; k++ {
		term.Mul(term, y)
		term.Quo(term, new(big.Float).SetInt64(k))
		sum.Add(sum, term)
	}
	for range 10 {
		sum.Mul(sum, sum)
	}
	return sum
}

// ulps returns the distance of got from the exact value in units of the last place of got.
func ulps(got float64, exact *big.Float) float64 {
	d := new(big.Float).SetPrec(260).SetFloat64(got)
	d.Sub(d, exact)
	f, _ := d.Float64()
	return math.Abs(f) / (math.Nextafter(math.Abs(got), math.Inf(1)) - math.Abs(got))
}

// Exp within 1.5 units of the last place of a series in 260-bit arithmetic; Log within 1.5 units, by e^Log(x)/x − 1.
func TestExpLogExact(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 3))
	worst, worstLog := 0.0, 0.0
	for range 2000 {
		x := (r.Float64() - 0.5) * 1400
		worst = max(worst, ulps(Exp(x), exactExp(x)))
		y := math.Exp((r.Float64() - 0.5) * 100)
		l := Log(y)
		// log y = l + log(y/e^l) ≈ l + (y/e^l − 1)
		ratio := new(big.Float).SetPrec(260).Quo(new(big.Float).SetPrec(260).SetFloat64(y), exactExp(l))
		ratio.Sub(ratio, big.NewFloat(1))
		rest, _ := ratio.Float64()
		worstLog = max(worstLog, math.Abs(rest)/(math.Nextafter(math.Abs(l), math.Inf(1))-math.Abs(l)))
	}
	if worst > 1.5 || worstLog > 1.5 {
		t.Errorf("Exp is off by %.2f, Log by %.2f units of the last place", worst, worstLog)
	}
}

func TestExpLogEdges(t *testing.T) {
	for _, tt := range []struct{ got, want float64 }{
		{Exp(0), 1}, {Exp(math.Inf(1)), math.Inf(1)}, {Exp(math.Inf(-1)), 0}, {Exp(800), math.Inf(1)}, {Exp(-800), 0},
		{Log(1), 0}, {Log(0), math.Inf(-1)}, {Log(math.Inf(1)), math.Inf(1)},
	} {
		if tt.got != tt.want {
			t.Errorf("%v, want %v", tt.got, tt.want)
		}
	}
	if !math.IsNaN(Log(-1)) || !math.IsNaN(Exp(math.NaN())) || !math.IsNaN(Log(math.NaN())) {
		t.Error("NaN expected")
	}
}

// Do not change; old records depend on it. The digest is over the bits of every function on fixed grids, and is the
// same on every processor: the build runs this test under emulation too.
func TestBitsPinned(t *testing.T) {
	h := sha256.New()
	put := func(v float64) {
		if math.IsNaN(v) {
			v = 0 // the bits of a NaN differ between processors
		}
		var b [8]byte
		binary.BigEndian.PutUint64(b[:], math.Float64bits(v))
		h.Write(b[:])
	}
	for i := -2000; i <= 2000; i++ {
		x := float64(float64(i) * 0.37109375)
		put(Exp(x))
		put(Log(x + 743))
		put(Log1p(x / 1000))
		put(NormalCDF(x / 40))
		put(NormalDensity(x / 40))
	}
	for i := 1; i < 400; i++ {
		p := float64(i) / 400
		put(NormalQuantile(p))
		put(NormalQuantile(p * 1e-9))
	}
	for _, a := range []float64{0.5, 1, 3.25, 29, 300.5, 12345} {
		for i := 1; i < 40; i++ {
			p := float64(i) / 40
			put(ChiSquareQuantile(a, p))
			put(StudentQuantile(a, p))
			put(BetaQuantile(a, 7.5, p))
			put(IncompleteBeta(a, 20, p))
			lower, upper := IncompleteGamma(a, float64(a*p)*2)
			put(lower)
			put(upper)
		}
	}
	if got := hex.EncodeToString(h.Sum(nil)); got != "a94617f9de203d1ef2bbfbb35334f9cf737396c4122079d59a3c75bbff974944" {
		t.Errorf("digest of the bits: %s", got)
	}
}

// Do not change; old records depend on it. The same for a + b above 20,000, for probabilities near 0, ½ and 1, and for
// large arguments of Log1p.
func TestExtremeBitsPinned(t *testing.T) {
	h := sha256.New()
	put := func(v float64) {
		var b [8]byte
		binary.BigEndian.PutUint64(b[:], math.Float64bits(v))
		h.Write(b[:])
	}
	for i := 1; i < 40; i++ {
		p := float64(i) / 40
		for _, q := range []float64{math.Ldexp(p, -20), 0.5 + math.Ldexp(p, -8), 1 - math.Ldexp(p, -20)} {
			for _, a := range []float64{0.5, 29, 3e4, 1e6} {
				put(StudentQuantile(a, q))
				put(ChiSquareQuantile(a, q))
				put(BetaQuantile(a, 7.5, q))
				put(BetaQuantile(3.25, a, q))
				put(IncompleteBeta(a, 4e4, a/(a+4e4)*(1+q/100)))
			}
		}
		put(Log1p(math.Ldexp(p, 20*i)))
	}
	if got := hex.EncodeToString(h.Sum(nil)); got != "a8c14ba455a5b7f2bbb49946d39349e62ec4426f9d6a5140a799e3caf0d7e338" {
		t.Errorf("digest of the bits: %s", got)
	}
}
