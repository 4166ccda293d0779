package netlist

import (
	"fmt"
	"math"
)

// unaryFunctions are the functions of one argument: value and derivative.
var unaryFunctions = map[string]func(x float64) (value, slope float64){
	"abs":    func(x float64) (float64, float64) { return math.Abs(x), math.Copysign(1, x) },
	"sqrt":   func(x float64) (float64, float64) { s := math.Sqrt(x); return s, 0.5 / s },
	"exp":    func(x float64) (float64, float64) { e := math.Exp(x); return e, e },
	"ln":     func(x float64) (float64, float64) { return math.Log(x), 1 / x },
	"log":    func(x float64) (float64, float64) { return math.Log(x), 1 / x },
	"log10":  func(x float64) (float64, float64) { return math.Log10(x), 1 / (x * math.Ln10) },
	"sin":    func(x float64) (float64, float64) { return math.Sin(x), math.Cos(x) },
	"cos":    func(x float64) (float64, float64) { return math.Cos(x), -math.Sin(x) },
	"tan":    func(x float64) (float64, float64) { t := math.Tan(x); return t, 1 + t*t },
	"asin":   func(x float64) (float64, float64) { return math.Asin(x), 1 / math.Sqrt(1-x*x) },
	"acos":   func(x float64) (float64, float64) { return math.Acos(x), -1 / math.Sqrt(1-x*x) },
	"atan":   func(x float64) (float64, float64) { return math.Atan(x), 1 / (1 + x*x) },
	"arctan": func(x float64) (float64, float64) { return math.Atan(x), 1 / (1 + x*x) },
	"sinh":   func(x float64) (float64, float64) { return math.Sinh(x), math.Cosh(x) },
	"cosh":   func(x float64) (float64, float64) { return math.Cosh(x), math.Sinh(x) },
	"tanh":   func(x float64) (float64, float64) { t := math.Tanh(x); return t, 1 - t*t },
	"sgn":    func(x float64) (float64, float64) { return sign(x), 0 },
	"sign":   func(x float64) (float64, float64) { return sign(x), 0 },
	"int":    func(x float64) (float64, float64) { return math.Trunc(x), 0 },
	"floor":  func(x float64) (float64, float64) { return math.Floor(x), 0 },
	"ceil":   func(x float64) (float64, float64) { return math.Ceil(x), 0 },
	"round":  func(x float64) (float64, float64) { return math.Round(x), 0 },
	"nint":   func(x float64) (float64, float64) { return math.Round(x), 0 },
	"u":      func(x float64) (float64, float64) { return truth(x > 0), 0 },
	"stp":    func(x float64) (float64, float64) { return truth(x > 0), 0 },
	"uramp":  func(x float64) (float64, float64) { return math.Max(x, 0), truth(x > 0) },
	"inv":    func(x float64) (float64, float64) { return truth(x <= 0.5), 0 },
	"buf":    func(x float64) (float64, float64) { return truth(x > 0.5), 0 },
}

// unknownFunction is a call of a function that neither the netlist nor this list has.
type unknownFunction struct{ name string }

func (e unknownFunction) Error() string { return "no function is named " + e.name }

func sign(x float64) float64 {
	switch {
	case x > 0:
		return 1
	case x < 0:
		return -1
	}
	return 0
}

// builtin compiles a call of a built-in function.
func builtin(name string, args []compiled) (compiled, error) {
	if f, ok := unaryFunctions[name]; ok && len(args) == 1 {
		of := args[0]
		return func(p []float64, t float64, wrt int) (float64, float64) {
			x, dx := of(p, t, wrt)
			v, slope := f(x)
			if dx == 0 {
				return v, 0
			}
			return v, slope * dx
		}, nil
	}
	need := func(n int) error {
		if len(args) == n {
			return nil
		}
		return fmt.Errorf("%s takes %d arguments, not %d", name, n, len(args))
	}
	switch name {
	case "min", "max":
		if len(args) < 1 {
			return nil, fmt.Errorf("%s takes at least one argument", name)
		}
		return extreme(args, name == "max"), nil
	case "if", "ternary_fcn":
		if err := need(3); err != nil {
			return nil, err
		}
		return choice(args[0], args[1], args[2]), nil
	case "pow":
		if err := need(2); err != nil {
			return nil, err
		}
		return raise(args[0], args[1]), nil
	case "pwr", "pwrs":
		if err := need(2); err != nil {
			return nil, err
		}
		return magnitudePower(args[0], args[1], name == "pwrs"), nil
	case "limit":
		if err := need(3); err != nil {
			return nil, err
		}
		return extreme([]compiled{extreme([]compiled{args[0], args[1]}, true), args[2]}, false), nil
	case "atan2":
		if err := need(2); err != nil {
			return nil, err
		}
		return func(p []float64, t float64, wrt int) (float64, float64) {
			y, dy := args[0](p, t, wrt)
			x, dx := args[1](p, t, wrt)
			return math.Atan2(y, x), (x*dy - y*dx) / (x*x + y*y)
		}, nil
	case "hypot":
		if err := need(2); err != nil {
			return nil, err
		}
		return func(p []float64, t float64, wrt int) (float64, float64) {
			x, dx := args[0](p, t, wrt)
			y, dy := args[1](p, t, wrt)
			h := math.Hypot(x, y)
			if h == 0 {
				return 0, 0
			}
			return h, (x*dx + y*dy) / h
		}, nil
	case "table":
		if len(args) < 3 || len(args)%2 == 0 {
			return nil, fmt.Errorf("table takes a quantity and pairs of numbers")
		}
		return lookupTable(args), nil
	}
	return nil, unknownFunction{name}
}

func extreme(args []compiled, largest bool) compiled {
	return func(p []float64, t float64, wrt int) (float64, float64) {
		v, d := args[0](p, t, wrt)
		for _, a := range args[1:] {
			if w, dw := a(p, t, wrt); w > v == largest && w != v {
				v, d = w, dw
			}
		}
		return v, d
	}
}

// magnitudePower is |x|^y, with the sign of x if signed.
func magnitudePower(base, exponent compiled, signed bool) compiled {
	return func(p []float64, t float64, wrt int) (float64, float64) {
		x, dx := base(p, t, wrt)
		y, _ := exponent(p, t, -1)
		v := math.Pow(math.Abs(x), y)
		slope := 0.0
		if dx != 0 {
			slope = y * math.Pow(math.Abs(x), y-1) * dx
		}
		if signed {
			return math.Copysign(v, x), slope
		}
		return v, slope * sign(x)
	}
}

// lookupTable interpolates linearly between pairs of constants, flat beyond the ends.
func lookupTable(args []compiled) compiled {
	n := (len(args) - 1) / 2
	xs, ys := make([]float64, n), make([]float64, n)
	for k := range n {
		xs[k], _ = args[1+2*k](nil, 0, -1)
		ys[k], _ = args[2+2*k](nil, 0, -1)
	}
	of := args[0]
	return func(p []float64, t float64, wrt int) (float64, float64) {
		x, dx := of(p, t, wrt)
		if !(x > xs[0]) {
			return ys[0], 0
		}
		for k := 1; k < n; k++ {
			if x <= xs[k] && xs[k] > xs[k-1] {
				slope := (ys[k] - ys[k-1]) / (xs[k] - xs[k-1])
				return ys[k-1] + slope*(x-xs[k-1]), slope * dx
			}
		}
		return ys[n-1], 0
	}
}
