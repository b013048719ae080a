// Package numeric holds the special functions on the way to a result: exponential and logarithm, normal distribution,
// quantiles of the Student, chi-square and beta distributions, incomplete beta and gamma functions.
//
// Each function gives the same bits on every machine. It uses only operations that IEEE 754 rounds in one way,
// + − × ÷ and square root, the exact functions of package math (Abs, Floor, Frexp and the like), and integers. Every
// product is written float64(a*b), so that no compiler fuses it with a sum. A test pins the bits.
//
// An argument outside the domain that a function documents gives NaN; nothing panics and nothing loops for ever.
package numeric
