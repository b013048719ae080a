package statistic

import "math/big"

// A ratio is a decimal number such as a probability or a trimmed share, exactly. Ranks are found from it in whole
// numbers: in binary, 0.1·30 is not 3.
type ratio struct {
	num, den int64
	long     *big.Rat // instead of num and den where they would be too long; never changed
}

// newRatio reads the digits of a plan.
func newRatio(text string) ratio {
	r, ok := new(big.Rat).SetString(text)
	if !ok {
		panic("statistic: not a decimal: " + text) // spec checks every number
	}
	const limit = 1_000_000_000 // times 8·n this still is an int64, for all n that fit into memory
	if r.Denom().IsInt64() && r.Denom().Int64() <= limit {
		return ratio{num: r.Num().Int64(), den: r.Denom().Int64()}
	}
	return ratio{long: r}
}

// floorOf returns ⌊n·r⌋.
func (r ratio) floorOf(n int) int {
	if r.long == nil {
		return int(int64(n) * r.num / r.den)
	}
	product := new(big.Int).Mul(big.NewInt(int64(n)), r.long.Num())
	return int(product.Quo(product, r.long.Denom()).Int64())
}

// A place is the position of a quantile among n ordered values: from rank low, the share up of the way to the next one,
// 0 ≤ up < 1.
type place struct {
	low int
	up  float64
}

// positions are those of the nine definitions of Hyndman and Fan 1996, ((each·n + once)·p + add) / over.
var positions = [9]struct{ each, once, add, over int64 }{
	{1, 0, 0, 1},  // n·p
	{1, 0, 0, 1},  // n·p
	{2, 0, -1, 2}, // n·p − ½
	{1, 0, 0, 1},  // n·p
	{2, 0, 1, 2},  // n·p + ½
	{1, 1, 0, 1},  // (n+1)·p
	{1, -1, 1, 1}, // (n−1)·p + 1
	{3, 1, 1, 3},  // (n+⅓)·p + ⅓
	{8, 2, 3, 8},  // (n+¼)·p + ⅜
}

// quantilePlace returns the position of quantile p by one of the nine definitions of Hyndman and Fan 1996.
func quantilePlace(definition, n int, p ratio) place {
	low, up, whole := position(definition, n, p)
	switch definition {
	case 1: // the next rank unless n·p is whole
		if !whole {
			up = 1
		}
	case 2: // half way if n·p is whole, else the next rank
		if up = 1; whole {
			up = 0.5
		}
	case 3: // of the ranks round n·p the nearer one; half way between them, the even one
		if !whole || low%2 != 0 {
			up = 1
		}
	}
	if up == 1 {
		low, up = low+1, 0
	}
	switch {
	case low < 1:
		return place{1, 0}
	case low >= n:
		return place{n, 0}
	}
	return place{low, up}
}

// position returns the whole part and the rest of the position, and whether the rest is exactly 0; the rest alone is
// rounded.
func position(definition, n int, p ratio) (low int, rest float64, whole bool) {
	c := positions[definition-1]
	times := c.each*int64(n) + c.once
	if p.long == nil {
		num, den := times*p.num+c.add*p.den, c.over*p.den
		quotient, remainder := num/den, num%den
		if remainder < 0 {
			quotient--
			remainder += den
		}
		return int(quotient), float64(remainder) / float64(den), remainder == 0
	}
	num := new(big.Int).Mul(big.NewInt(times), p.long.Num())
	num.Add(num, new(big.Int).Mul(big.NewInt(c.add), p.long.Denom()))
	den := new(big.Int).Mul(big.NewInt(c.over), p.long.Denom())
	quotient, remainder := new(big.Int).DivMod(num, den, new(big.Int))
	rest, _ = new(big.Rat).SetFrac(remainder, den).Float64()
	return int(quotient.Int64()), rest, remainder.Sign() == 0
}

// at returns the value at the place in ascending values.
func (p place) at(sorted []float64) float64 {
	low := sorted[p.low-1]
	if p.up == 0 {
		return low
	}
	high := sorted[p.low]
	if p.up == 0.5 {
		return halfWay(low, high)
	}
	return low + float64(p.up*(high-low))
}

// halfWay returns the mean of two values, which cannot overflow. A compiler may turn a half into a product, so each is
// rounded by itself like every other product.
func halfWay(a, b float64) float64 { return float64(a/2) + float64(b/2) }
