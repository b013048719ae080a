package statistic

import (
	"math/big"
)

// A ratio is a decimal number such as a probability or a trimmed share, exactly. Ranks are found from it in integers: in
// binary, 0.1·30 is not 3.
type ratio struct{ num, den int64 }

// newRatio reads the digits of a plan. Digits that do not fit into 9 decimals are rounded to them; no sample is so large
// that more could move a rank by one.
func newRatio(text string) ratio {
	r, ok := new(big.Rat).SetString(text)
	if !ok {
		panic("statistic: not a decimal: " + text) // spec checks every number
	}
	const limit = 1_000_000_000
	if r.Denom().IsInt64() && r.Denom().Int64() <= limit {
		return ratio{r.Num().Int64(), r.Denom().Int64()}
	}
	r.Mul(r, big.NewRat(limit, 1))
	whole := new(big.Int).Quo(r.Num(), r.Denom())
	return ratio{whole.Int64(), limit}
}

// floorOf returns ⌊n·r⌋.
func (r ratio) floorOf(n int) int { return int(int64(n) * r.num / r.den) }

// A place is the position of a quantile among n ordered values: between rank low and the next one, num/den of the way.
type place struct {
	low      int
	num, den int64
}

// quantilePlace returns the position of quantile p by one of the nine definitions of Hyndman and Fan 1996.
func quantilePlace(definition, n int, p ratio) place {
	a, b, m := p.num, p.den, int64(n)
	var num, den int64
	switch definition {
	case 1, 2, 4: // n·p
		num, den = m*a, b
	case 3: // n·p − ½
		num, den = 2*m*a-b, 2*b
	case 5: // n·p + ½
		num, den = 2*m*a+b, 2*b
	case 6: // (n+1)·p
		num, den = (m+1)*a, b
	case 7: // (n−1)·p + 1
		num, den = (m-1)*a+b, b
	case 8: // (n+⅓)·p + ⅓
		num, den = 3*m*a+a+b, 3*b
	default: // 9: (n+¼)·p + ⅜
		num, den = 8*m*a+2*a+3*b, 8*b
	}
	low := num / den
	rest := num % den
	if rest < 0 {
		low--
		rest += den
	}
	switch definition {
	case 1: // the next rank unless n·p is whole
		rest = stepUp(rest, den)
	case 2: // half way if n·p is whole, else the next rank
		if rest == 0 {
			rest, den = 1, 2
		} else {
			rest = den
		}
	case 3: // the even rank if half way, else the next one
		if rest == 0 && low%2 == 0 {
			rest = 0
		} else {
			rest = den
		}
	}
	if rest == den {
		low, rest = low+1, 0
	}
	if low < 1 {
		return place{1, 0, 1}
	}
	if low >= m {
		return place{n, 0, 1}
	}
	return place{int(low), rest, den}
}

func stepUp(rest, den int64) int64 {
	if rest == 0 {
		return 0
	}
	return den
}

// at returns the value at the place in ascending values.
func (p place) at(sorted []float64) float64 {
	low := sorted[p.low-1]
	if p.num == 0 {
		return low
	}
	high := sorted[p.low]
	if 2*p.num == p.den {
		return low/2 + high/2
	}
	return low + float64(float64(p.num)/float64(p.den)*(high-low))
}

// rank returns the place as a real number.
func (p place) rank() float64 { return float64(p.low) + float64(p.num)/float64(p.den) }
