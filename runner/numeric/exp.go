package numeric

import "math"

// ln2High + ln2Low is ln 2; ln2High has few digits, so that small whole multiples of it are exact.
const (
	ln2High = 6.93147180369123816490e-01
	ln2Low  = 1.90821492927058770002e-10
	log2e   = 1.44269504088896338700e+00
)

// Exp returns e to the power x. Too large an x gives +Inf, too small an x gives 0.
func Exp(x float64) float64 {
	const (
		p1 = 1.66666666666666657415e-01
		p2 = -2.77777777770155933842e-03
		p3 = 6.61375632143793436117e-05
		p4 = -1.65339022054652515390e-06
		p5 = 4.13813679705723846039e-08
	)
	switch {
	case math.IsNaN(x):
		return x
	case x > 7.09782712893383973096e+02:
		return math.Inf(1)
	case x < -7.45133219101941108420e+02:
		return 0
	}
	k := math.Round(float64(log2e * x))
	high := x - float64(k*ln2High)
	low := float64(k * ln2Low)
	r := high - low
	t := float64(r * r)
	c := r - float64(t*(p1+float64(t*(p2+float64(t*(p3+float64(t*(p4+float64(t*p5)))))))))
	y := 1 - ((low - float64(r*c)/(2-c)) - high)
	return math.Ldexp(y, int(k))
}
