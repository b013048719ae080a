package numeric

import "math"

// horner returns the polynomial with the coefficients c, highest power first, at x.
func horner(x float64, c ...float64) float64 {
	sum := c[0]
	for _, v := range c[1:] {
		sum = float64(sum*x) + v
	}
	return sum
}

// NormalDensity returns the density of the standard normal distribution at x.
func NormalDensity(x float64) float64 {
	const root = 0.398942280401432677939946059934381868 // 1/√(2π)
	return float64(root * expHalfSquare(math.Abs(x)))
}

// expHalfSquare returns exp(−x²/2) for x ≥ 0. The square is split so that its rounding error does not grow with it:
// Cody 1969.
func expHalfSquare(x float64) float64 {
	if x > 39 {
		return 0
	}
	head := float64(math.Trunc(x*16) / 16)
	rest := float64((x - head) * (x + head))
	return float64(Exp(-float64(head*head)/2) * Exp(-rest/2))
}

// NormalCDF returns the probability that a standard normal variable is at most x, to a relative error of about 10⁻¹⁵ in
// the lower tail too. It underflows to 0 below −38.5. NaN gives NaN.
//
// Rational approximations of erfc: Cody WJ, "Rational Chebyshev Approximations for the Error Function", Mathematics of
// Computation 23 (1969) 631–637.
func NormalCDF(x float64) float64 {
	const root2 = 1.41421356237309504880168872420969807857
	y := math.Abs(x) / root2
	if y <= 0.46875 {
		square := float64(y * y)
		top := horner(square, 1.85777706184603153e-1, 3.16112374387056560e00, 1.13864154151050156e02,
			3.77485237685302021e02, 3.20937758913846947e03)
		bottom := horner(square, 1, 2.36012909523441209e01, 2.44024637934444173e02, 1.28261652607737228e03,
			2.84423683343917062e03)
		half := float64(y*top) / bottom / 2
		if x < 0 {
			half = -half
		}
		return 0.5 + half
	}
	var erfc float64 // without the factor exp(−y²)
	if y <= 4 {
		top := horner(y, 2.15311535474403846e-8, 5.64188496988670089e-1, 8.88314979438837594e0, 6.61191906371416295e01,
			2.98635138197400131e02, 8.81952221241769090e02, 1.71204761263407058e03, 2.05107837782607147e03,
			1.23033935479799725e03)
		bottom := horner(y, 1, 1.57449261107098347e01, 1.17693950891312499e02, 5.37181101862009858e02,
			1.62138957456669019e03, 3.29079923573345963e03, 4.36261909014324716e03, 3.43936767414372164e03,
			1.23033935480374942e03)
		erfc = top / bottom
	} else {
		inverse := 1 / float64(y*y)
		top := horner(inverse, 1.63153871373020978e-2, 3.05326634961232344e-1, 3.60344899949804439e-1,
			1.25781726111229246e-1, 1.60837851487422766e-2, 6.58749161529837803e-4)
		bottom := horner(inverse, 1, 2.56852019228982242e00, 1.87295284992346725e00, 5.27905102951428412e-1,
			6.05183413124413191e-2, 2.33520497626869185e-3)
		const root = 0.56418958354775628694807945156077 // 1/√π
		erfc = (root - float64(inverse*top)/bottom) / y
	}
	tail := float64(float64(erfc*expHalfSquare(math.Abs(x))) / 2)
	if x < 0 {
		return tail
	}
	return 1 - tail // also for NaN, which no comparison above caught
}

// NormalQuantile returns the x with NormalCDF(x) = p, to a relative error of about 10⁻¹⁵, for 0 < p < 1. It returns
// −∞ for 0, +∞ for 1 and NaN for anything else.
//
// Wichura MJ, "Algorithm AS 241: The Percentage Points of the Normal Distribution", Applied Statistics 37 (1988)
// 477–484, routine PPND16.
func NormalQuantile(p float64) float64 {
	switch {
	case p == 0:
		return math.Inf(-1)
	case p == 1:
		return math.Inf(1)
	case !(p > 0 && p < 1):
		return math.NaN()
	}
	q := p - 0.5
	if math.Abs(q) <= 0.425 {
		r := 0.180625 - float64(q*q)
		return float64(q*horner(r, 2.5090809287301226727e+3, 3.3430575583588128105e+4, 6.7265770927008700853e+4,
			4.5921953931549871457e+4, 1.3731693765509461125e+4, 1.9715909503065514427e+3, 1.3314166789178437745e+2,
			3.3871328727963666080e0)) /
			horner(r, 5.2264952788528545610e+3, 2.8729085735721942674e+4, 3.9307895800092710610e+4,
				2.1213794301586595867e+4, 5.3941960214247511077e+3, 6.8718700749205790830e+2, 4.2313330701600911252e+1, 1)
	}
	r := p
	if q > 0 {
		r = 1 - p
	}
	r = math.Sqrt(-Log(r))
	var x float64
	if r <= 5 {
		r -= 1.6
		x = horner(r, 7.74545014278341407640e-4, 2.27238449892691845833e-2, 2.41780725177450611770e-1,
			1.27045825245236838258e0, 3.64784832476320460504e0, 5.76949722146069140550e0, 4.63033784615654529590e0,
			1.42343711074968357734e0) /
			horner(r, 1.05075007164441684324e-9, 5.47593808499534494600e-4, 1.51986665636164571966e-2,
				1.48103976427480074590e-1, 6.89767334985100004550e-1, 1.67638483018380384940e0, 2.05319162663775882187e0, 1)
	} else {
		r -= 5
		x = horner(r, 2.01033439929228813265e-7, 2.71155556874348757815e-5, 1.24266094738807843860e-3,
			2.65321895265761230930e-2, 2.96560571828504891230e-1, 1.78482653991729133580e0, 5.46378491116411436990e0,
			6.65790464350110377720e0) /
			horner(r, 2.04426310338993978564e-15, 1.42151175831644588870e-7, 1.84631831751005468180e-5,
				7.86869131145613259100e-4, 1.48753612908506148525e-2, 1.36929880922735805310e-1, 5.99832206555887937690e-1, 1)
	}
	if q < 0 {
		return -x
	}
	return x
}
