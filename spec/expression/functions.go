package expression

import (
	"errors"
	"math"
)

// Reasons why an expression has no value in a row.
var (
	ErrZeroDivisor = errors.New("division by zero")
	ErrRoot        = errors.New("square root of a negative number")
	ErrLogarithm   = errors.New("logarithm of a number that is not positive")
	ErrTooLarge    = errors.New("a number too large to be represented")
)

// A function is one that an expression may call.
type function struct {
	least, most int // number of arguments
	usage       string
	bind        func(f Functions, of []func(*run) float64) func(*run) float64
}

// functionNames lists the functions as messages do.
var functionNames = []string{"abs", "sqrt", "min", "max", "exp", "log", "log10"}

var functions = map[string]function{
	"abs": {1, 1, "abs(x)", func(_ Functions, of []func(*run) float64) func(*run) float64 {
		x := of[0]
		return func(r *run) float64 { return math.Abs(x(r)) }
	}},
	"sqrt": {1, 1, "sqrt(x)", func(_ Functions, of []func(*run) float64) func(*run) float64 {
		x := of[0]
		return func(r *run) float64 {
			v := x(r)
			if v < 0 {
				r.fail(ErrRoot)
			}
			return math.Sqrt(v)
		}
	}},
	"min": {2, maxNodes, "min(x, y)", func(_ Functions, of []func(*run) float64) func(*run) float64 {
		return func(r *run) float64 {
			v := of[0](r)
			for _, x := range of[1:] {
				v = math.Min(v, x(r))
			}
			return v
		}
	}},
	"max": {2, maxNodes, "max(x, y)", func(_ Functions, of []func(*run) float64) func(*run) float64 {
		return func(r *run) float64 {
			v := of[0](r)
			for _, x := range of[1:] {
				v = math.Max(v, x(r))
			}
			return v
		}
	}},
	"exp": {1, 1, "exp(x)", func(f Functions, of []func(*run) float64) func(*run) float64 {
		x := of[0]
		return func(r *run) float64 { return r.finite(f.Exp(x(r))) }
	}},
	"log":   {1, 1, "log(x)", logarithm(func(f Functions) func(float64) float64 { return f.Log })},
	"log10": {1, 1, "log10(x)", logarithm(func(f Functions) func(float64) float64 { return f.Log10 })},
}

func logarithm(of func(Functions) func(float64) float64) func(Functions, []func(*run) float64) func(*run) float64 {
	return func(f Functions, arguments []func(*run) float64) func(*run) float64 {
		log, x := of(f), arguments[0]
		return func(r *run) float64 {
			v := x(r)
			if v <= 0 {
				r.fail(ErrLogarithm)
				return 0
			}
			return r.finite(log(v))
		}
	}
}

// finite passes v on, and notes that there is no value if v is not finite.
func (r *run) finite(v float64) float64 {
	if v-v != 0 {
		r.fail(ErrTooLarge)
		return 0
	}
	return v
}

// arithmetic returns the function of an arithmetic operator, or nil.
func arithmetic(operator string, a, b func(*run) float64) func(*run) float64 {
	switch operator {
	case "+":
		return func(r *run) float64 { return r.finite(a(r) + b(r)) }
	case "-":
		return func(r *run) float64 { return r.finite(a(r) - b(r)) }
	case "*":
		return func(r *run) float64 { return r.finite(float64(a(r) * b(r))) }
	case "/":
		return func(r *run) float64 {
			x, y := a(r), b(r)
			if y == 0 {
				r.fail(ErrZeroDivisor)
				return 0
			}
			return r.finite(x / y)
		}
	}
	return nil
}

// comparison returns the function of a comparison operator on numbers, or nil.
func comparison(operator string, a, b func(*run) float64) func(*run) bool {
	switch operator {
	case "==":
		return func(r *run) bool { return a(r) == b(r) }
	case "!=":
		return func(r *run) bool { return a(r) != b(r) }
	case "<":
		return func(r *run) bool { return a(r) < b(r) }
	case "<=":
		return func(r *run) bool { return a(r) <= b(r) }
	case ">":
		return func(r *run) bool { return a(r) > b(r) }
	case ">=":
		return func(r *run) bool { return a(r) >= b(r) }
	}
	return nil
}
