package report

import (
	"math"
	"strconv"
	"strings"
)

// A scale maps values to millimetres.
type scale struct {
	low, high float64 // values
	from, to  float64 // millimetres
}

// at returns where v stands. The difference is halved, so that it cannot overflow.
func (s scale) at(v float64) float64 {
	half := float64(s.high/2) - float64(s.low/2)
	if half == 0 {
		return (s.from + s.to) / 2
	}
	return s.from + float64((float64(v/2)-float64(s.low/2))/half*(s.to-s.from))
}

// holds says whether v lies on the scale.
func (s scale) holds(v float64) bool { return v >= s.low && v <= s.high }

// A tick is a place on an axis and its label.
type tick struct {
	value float64
	label string
}

// ticks returns at most `most`+1 ticks at multiples of 1, 2 or 5 times a power of ten. Labels are made from whole
// numbers, so that zero has no sign and no label ends in 0000001. With very large or very small values the labels are
// to be multiplied by the power of ten returned as exponent.
func ticks(low, high float64, most int) (out []tick, exponent int) {
	if !(low < high) || most < 1 || math.IsInf(low, 0) || math.IsInf(high, 0) {
		return nil, 0
	}
	raw := high/float64(most) - low/float64(most)
	if raw == 0 {
		return nil, 0
	}
	mantissa, e := decimalExponent(raw)
	multiple := int64(10)
	for _, m := range []int64{1, 2, 5} {
		if mantissa <= float64(m)*(1+1e-6) {
			multiple = m
			break
		}
	}
	if multiple == 10 {
		multiple, e = 1, e+1
	}
	unit := powerOfTen(e)
	step := float64(multiple) * unit
	if step == 0 || math.IsInf(step, 0) {
		return nil, 0
	}
	first, last := math.Ceil(low/step-1e-9), math.Floor(high/step+1e-9)
	if math.Abs(first) > 1e15 || math.Abs(last) > 1e15 || last-first > float64(most)+1 {
		return nil, 0
	}
	if _, largest := decimalExponent(max(math.Abs(low), math.Abs(high))); largest >= 6 || largest <= -4 {
		exponent = largest
	}
	for k := int64(first); k <= int64(last); k++ {
		value := float64(k) * step
		out = append(out, tick{min(max(value, low), high), shifted(k*multiple, e-exponent)})
	}
	return out, exponent
}

// decimalExponent writes v > 0 as mantissa × 10^exponent with 1 ≤ mantissa < 10.
func decimalExponent(v float64) (mantissa float64, exponent int) {
	if v == 0 || math.IsInf(v, 0) || math.IsNaN(v) {
		return v, 0
	}
	m, e, _ := strings.Cut(strconv.FormatFloat(v, 'e', -1, 64), "e")
	mantissa, _ = strconv.ParseFloat(m, 64)
	exponent, _ = strconv.Atoi(e)
	return mantissa, exponent
}

func powerOfTen(e int) float64 {
	v, _ := strconv.ParseFloat("1e"+strconv.Itoa(e), 64)
	return v
}

// shifted writes n × 10^e, e ≤ 0 for decimals, with a true minus sign.
func shifted(n int64, e int) string {
	sign := ""
	if n < 0 {
		sign, n = "−", -n
	}
	digits := strconv.FormatInt(n, 10)
	if n == 0 {
		e = min(e, 0)
	}
	if e >= 0 {
		return sign + digits + strings.Repeat("0", e)
	}
	if len(digits) <= -e {
		digits = strings.Repeat("0", -e-len(digits)+1) + digits
	}
	return sign + digits[:len(digits)+e] + "." + digits[len(digits)+e:]
}

// superscript writes a whole number in raised figures.
func superscript(n int) string {
	return strings.NewReplacer("-", "⁻", "0", "⁰", "1", "¹", "2", "²", "3", "³", "4", "⁴", "5", "⁵", "6", "⁶", "7", "⁷",
		"8", "⁸", "9", "⁹").Replace(strconv.Itoa(n))
}

// fittingTicks returns as many ticks as their labels have room for.
func fittingTicks(s scale, st style, most int) ([]tick, int) {
	for ; most >= 1; most-- {
		out, exponent := ticks(s.low, s.high, most)
		fits := true
		for i := 1; i < len(out); i++ {
			gap := s.at(out[i].value) - s.at(out[i-1].value)
			half := float64((st.face.width(out[i].label, st.size) + st.face.width(out[i-1].label, st.size)) / 2)
			if half+2 > gap {
				fits = false
			}
		}
		if fits {
			return out, exponent
		}
	}
	return nil, 0
}
