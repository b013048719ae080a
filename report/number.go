package report

import (
	"math"
	"math/big"
	"strconv"
	"strings"

	"lotproof/runner/record"
	"lotproof/spec"
)

// The signs of a figure that is not there: one that was asked for and cannot be had, and one that was not asked for.
const (
	noFigure = "none"
	notAsked = "–"
)

// The criteria, as a record names them.
const (
	atLeast = "lower_at_least"
	atMost  = "upper_at_most"
)

// judgedDigits is how many significant digits of a figure the runner compares with a criterion. Printed with all of
// them, a figure cannot contradict its verdict.
const judgedDigits = 15

// fixedText writes v with a fixed number of decimals and a real minus sign. What is rounded is the decimal of 15
// digits that was judged, a half away from zero: so do spreadsheet programs, and the workbook shows the same digits
// as the appendix. 1.545 becomes 1.55, although its binary number is a little less. Figures that would need more than
// 15 digits before or after the point are written with a power of ten.
func fixedText(v float64, decimals int) string {
	text := judgedDecimal(v).FloatString(max(decimals, 0))
	if math.Abs(v) >= 1e15 || decimals > 15 {
		text = withPower(v, decimals)
	}
	if strings.Trim(text, "-0.") == "" {
		text = strings.TrimPrefix(text, "-") // no sign before a zero
	}
	return strings.ReplaceAll(text, "-", "−")
}

// withPower writes v as a mantissa and a power of ten, to the same last decimal.
func withPower(v float64, decimals int) string {
	if v == 0 {
		return "0"
	}
	digits := min(max(exponent(v, judgedDigits)+1+decimals, 1), judgedDigits)
	mantissa, power, _ := strings.Cut(strconv.FormatFloat(v, 'e', digits-1, 64), "e")
	if strings.Contains(mantissa, ".") {
		mantissa = strings.TrimRight(strings.TrimRight(mantissa, "0"), ".")
	}
	n, _ := strconv.Atoi(power)
	return mantissa + "·10" + raised.Replace(strconv.Itoa(n))
}

var raised = strings.NewReplacer("-", "⁻", "0", "⁰", "1", "¹", "2", "²", "3", "³", "4", "⁴", "5", "⁵", "6", "⁶",
	"7", "⁷",
	"8", "⁸", "9", "⁹")

// exponent returns the power of ten of the first digit of v when written with that many digits; 0 for 0.
func exponent(v float64, digits int) int {
	_, power, _ := strings.Cut(strconv.FormatFloat(v, 'e', digits-1, 64), "e")
	n, _ := strconv.Atoi(power)
	return n
}

// decimalsFor returns the decimals with which v shows that many significant digits; at least 0.
func decimalsFor(v float64, digits int) int { return max(digits-1-exponent(v, digits), 0) }

// significant writes v with at most that many significant digits and without needless zeros; whole numbers whole.
func significant(v *float64, digits int) string {
	switch {
	case v == nil:
		return noFigure
	case *v == math.Trunc(*v) && math.Abs(*v) < 1e15:
		return fixedText(*v, 0)
	}
	return trimZeros(fixedText(*v, decimalsFor(*v, digits)))
}

// attainedText writes a computed probability in percent with two decimals at most.
func attainedText(p *float64) string {
	if p == nil {
		return notAsked
	}
	return trimZeros(fixedText(100**p, 2)) + " %"
}

// trimZeros takes off the zeros after the last digit that counts.
func trimZeros(text string) string {
	if strings.Contains(text, ".") && !strings.Contains(text, "·") {
		text = strings.TrimRight(strings.TrimRight(text, "0"), ".")
	}
	return text
}

// withUnit sets the unit beside a figure.
func withUnit(figure, unit string) string {
	if unit == "" || figure == noFigure || figure == notAsked {
		return figure
	}
	return figure + " " + unit
}

// minus gives a number of the plan, as the plan writes it, a real minus sign.
func minus(text string) string { return strings.ReplaceAll(strings.TrimPrefix(text, "+"), "-", "−") }

// mostDecimals returns the decimals that the figures of a statistic have at most: what the plan says, else as many as
// show four significant digits of the largest figure and two of the standard error.
func mostDecimals(s *record.Statistic) int {
	if s.Decimals >= 0 {
		return s.Decimals
	}
	largest := 0.0
	look := func(v *float64) {
		if v != nil {
			largest = max(largest, math.Abs(*v))
		}
	}
	look(s.Estimate)
	for i := range s.Intervals {
		look(s.Intervals[i].Lower)
		look(s.Intervals[i].Upper)
	}
	decimals := 3
	if largest > 0 {
		decimals = decimalsFor(largest, 4)
	}
	if s.StandardError != nil && *s.StandardError > 0 {
		decimals = max(decimals, decimalsFor(*s.StandardError, 2))
	}
	return decimals
}

// supported returns the most decimals, up to most, whose last digit the Monte-Carlo errors support: twice the error is
// at most half a unit of that digit (after JCGM 101:2008, 7.9, with its factor of two for a confidence of about 95 %).
func supported(most int, errors ...*float64) int {
	for _, e := range errors {
		if e == nil {
			continue
		}
		for most > 0 && 4**e > unitOf(most)*(1+1e-12) {
			most--
		}
	}
	return most
}

// unitOf returns the unit of the last of some decimals.
func unitOf(decimals int) float64 {
	v, _ := strconv.ParseFloat("1e-"+strconv.Itoa(decimals), 64)
	return v
}

// intervalDecimals returns the decimals of both limits of an interval. Those of the interval that carries a verdict are
// as many as keep limit and estimate, as printed, on the side of the criterion where they were found.
func intervalDecimals(s *record.Statistic, i *record.Interval) int {
	decimals := supported(mostDecimals(s), i.MonteCarloError.Lower, i.MonteCarloError.Upper)
	for decimals < mostDecimals(s) && !inOrder(s, i, decimals) {
		decimals++
	}
	if !i.Decides {
		return decimals
	}
	for before := -1; before != decimals; { // a decimal more for one figure can spoil another
		before = decimals
		for k := range s.Accept {
			a := &s.Accept[k]
			if a.Bound == nil {
				continue
			}
			decimals = enough(decimals, *a.Bound, a, boundRight(a))
			if s.Estimate != nil && a.Verdict != "met" {
				decimals = enough(decimals, *s.Estimate, a, estimateRight(a))
			}
		}
	}
	return decimals
}

// inOrder says whether the limits, as printed, still stand on their sides of the estimate and apart from each other, if they
// do so as found.
func inOrder(s *record.Statistic, i *record.Interval, decimals int) bool {
	printed := func(v float64) *big.Rat {
		d, _ := new(big.Rat).SetString(judgedDecimal(v).FloatString(decimals))
		return d
	}
	if i.Lower != nil && i.Upper != nil && *i.Lower < *i.Upper && printed(*i.Lower).Cmp(printed(*i.Upper)) >= 0 {
		return false
	}
	if s.Estimate == nil {
		return true
	}
	estimate := printedEstimate(s)
	if i.Lower != nil && *i.Lower <= *s.Estimate && printed(*i.Lower).Cmp(estimate) > 0 {
		return false
	}
	return i.Upper == nil || *i.Upper < *s.Estimate || printed(*i.Upper).Cmp(estimate) >= 0
}

// printedEstimate is the estimate with the decimals of its statistic.
func printedEstimate(s *record.Statistic) *big.Rat {
	d, _ := new(big.Rat).SetString(judgedDecimal(*s.Estimate).FloatString(mostDecimals(s)))
	return d
}

// boundRight says whether the bound was found on the right side of its criterion.
func boundRight(a *record.Accept) bool {
	limit, known := new(big.Rat).SetString(a.Limit)
	compared, ok := new(big.Rat).SetString(a.Compared)
	if !known || !ok {
		return a.Verdict == "met"
	}
	if a.Criterion == atLeast {
		return compared.Cmp(limit) >= 0
	}
	return compared.Cmp(limit) <= 0
}

// estimateRight says the same of the estimate: of a criterion that is not shown, one of the two is on the right side.
func estimateRight(a *record.Accept) bool {
	return a.Verdict == "met" || a.Verdict == "not shown" && !boundRight(a)
}

// enough raises the decimals until v, as printed, stands on the side of the criterion that was found. A bound that
// was not compared as it is, was rounded first to the decimals of the limit; then the printed figure is read in the
// same way.
func enough(decimals int, v float64, a *record.Accept, right bool) int {
	limit, ok := new(big.Rat).SetString(a.Limit)
	if !ok {
		return decimals
	}
	places := spec.Number{Text: a.Limit}.Decimals()
	compared, ok := new(big.Rat).SetString(a.Compared)
	rounded := ok && compared.Cmp(judgedDecimal(*a.Bound)) != 0
	for all := decimalsFor(v, judgedDigits); decimals < all; decimals++ {
		d, _ := new(big.Rat).SetString(judgedDecimal(v).FloatString(decimals))
		sides := []*big.Rat{d}
		if rounded && d.Cmp(judgedDecimal(v)) != 0 { // a half that only printing made could be read either way
			sides = []*big.Rat{roundDecimal(d, places, "even"), roundDecimal(d, places, "away")}
		} else if rounded {
			break
		}
		agrees := rounded || d.Cmp(limit) != 0 || judgedDecimal(v).Cmp(limit) == 0 // not equal in print alone
		for _, d := range sides {
			side := d.Cmp(limit)
			agrees = agrees && (a.Criterion == atLeast && side >= 0 || a.Criterion != atLeast && side <= 0) == right
		}
		if agrees {
			break
		}
	}
	return decimals
}

// judgedDecimal returns v as the decimal that the runner compares.
func judgedDecimal(v float64) *big.Rat {
	d, _ := new(big.Rat).SetString(strconv.FormatFloat(v, 'e', judgedDigits-1, 64))
	return d
}

// roundDecimal rounds to a number of decimals, a tie to the even digit or away from zero.
func roundDecimal(d *big.Rat, places int, ties string) *big.Rat {
	away, _ := new(big.Rat).SetString(d.FloatString(places)) // ties away from zero
	if ties == "away" {
		return away
	}
	unit, _ := new(big.Rat).SetString("1e-" + strconv.Itoa(places))
	half := new(big.Rat).Mul(unit, big.NewRat(1, 2))
	gap := new(big.Rat).Sub(away, d)
	if gap.Abs(gap).Cmp(half) != 0 {
		return away
	}
	steps := new(big.Rat).Quo(away, unit)
	if steps.Num().Bit(0) == 0 {
		return away
	}
	if d.Sign() < 0 {
		return away.Add(away, unit)
	}
	return away.Sub(away, unit)
}

// leadingInterval returns the interval that the reader looks at first: the one that carries the verdict, else the
// first with a limit, else nil.
func leadingInterval(s *record.Statistic) *record.Interval {
	var first *record.Interval
	for k := range s.Intervals {
		i := &s.Intervals[k]
		if i.Decides {
			return i
		}
		if first == nil && !i.Companion && (i.Lower != nil || i.Upper != nil) {
			first = i
		}
	}
	return first
}

// leadingDecimals returns the decimals of the limits that the reader looks at first.
func leadingDecimals(s *record.Statistic) int {
	if i := leadingInterval(s); i != nil {
		return intervalDecimals(s, i)
	}
	return mostDecimals(s)
}

// estimateDecimals returns the decimals of the estimate: as many as the statistic has, since no Monte-Carlo error touches
// it, and more where the limits beside it or its own side of a criterion need them.
func estimateDecimals(s *record.Statistic) int {
	decimals := max(mostDecimals(s), leadingDecimals(s))
	for k := range s.Accept {
		if a := &s.Accept[k]; s.Estimate != nil && a.Bound != nil && a.Verdict != "met" {
			decimals = enough(decimals, *s.Estimate, a, estimateRight(a))
		}
	}
	return decimals
}

// estimateFigure writes the estimate, without unit.
func estimateFigure(s *record.Statistic) string {
	return figureText(s.Estimate, estimateDecimals(s))
}

// groupFigure writes the estimate in group g of a comparison, without unit. The groups of a ratio have decimals of
// their own, because their unit is another.
func groupFigure(s *record.Statistic, g int) string {
	v := s.Compare.Estimates[g]
	if v == nil {
		return noFigure
	}
	if s.Compare.As == "ratio" {
		return fixedText(*v, decimalsFor(*v, 4))
	}
	return fixedText(*v, estimateDecimals(s))
}

// limitFigures writes the limits of an interval, without unit.
func limitFigures(s *record.Statistic, i *record.Interval) (lower, upper string) {
	decimals := intervalDecimals(s, i)
	lower, upper = notAsked, notAsked
	if i.Bound != spec.Upper {
		lower = figureText(i.Lower, decimals)
	}
	if i.Bound != spec.Lower {
		upper = figureText(i.Upper, decimals)
	}
	return lower, upper
}

// boundFigure writes the bound that was compared with a criterion, without unit.
func boundFigure(s *record.Statistic, a *record.Accept) string {
	return figureText(a.Bound, leadingDecimals(s))
}

func figureText(v *float64, decimals int) string {
	if v == nil {
		return noFigure
	}
	return fixedText(*v, decimals)
}

// errorFigure writes a Monte-Carlo error with two significant digits.
func errorFigure(e *float64) string {
	if e == nil {
		return notAsked
	}
	if *e == 0 {
		return "0"
	}
	return fixedText(*e, decimalsFor(*e, 2))
}

// standardErrorFigure writes the standard error: three significant digits, less if the number of resamples does not
// support them. The Monte-Carlo error of a standard deviation of B normal values is about SD/√(2B).
func standardErrorFigure(s *record.Statistic) string {
	if s.StandardError == nil {
		return noFigure
	}
	v := *s.StandardError
	return fixedText(v, standardErrorDecimals(s))
}

func standardErrorDecimals(s *record.Statistic) int {
	v := *s.StandardError
	if v == 0 {
		return mostDecimals(s)
	}
	e := v / math.Sqrt(2*float64(max(s.Resamples-s.FailedResamples, 1)))
	return max(supported(decimalsFor(v, 3), &e), decimalsFor(v, 1))
}

// biasFigure writes the bias with the decimals of the standard error, less if the number of resamples does not
// support them. The Monte-Carlo error of a mean of B values is SD/√B.
func biasFigure(s *record.Statistic) string {
	if s.Bias == nil || s.StandardError == nil {
		return noFigure
	}
	e := *s.StandardError / math.Sqrt(float64(max(s.Resamples-s.FailedResamples, 1)))
	return fixedText(*s.Bias, supported(standardErrorDecimals(s)+1, &e))
}

// countText writes a whole number with a narrow space between thousands.
func countText(n int) string { return grouped(int64(n)) }
