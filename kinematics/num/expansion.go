package num

import "slices"

// Expansion is an exact number: the unevaluated sum of its components, which are
// non-zero, do not overlap and grow in magnitude. The empty Expansion is 0.
//
// All operations are exact while no component overflows and every non-zero
// product of two components is at least 2^-969 in magnitude (see TwoProd); sums
// need no lower limit. For products of two doubles that means magnitudes within
// 2^-400..2^500, say; kinematics uses 1e-80..1e100.
//
// Source: J. R. Shewchuk, Adaptive precision floating-point arithmetic and fast
// robust geometric predicates, Discrete Comput. Geom. 18 (1997) 305; theorem
// numbers below are his.
type Expansion []float64

// Add returns e + x (theorem 10, grow-expansion, zeros eliminated). In the manner
// of append it may reuse the memory of e.
func (e Expansion) Add(x float64) Expansion {
	out := e[:0]
	for _, component := range e {
		var low float64
		x, low = TwoSum(x, component)
		if low != 0 {
			out = append(out, low)
		}
	}
	if x != 0 {
		out = append(out, x)
	}
	return out
}

// AddProduct returns e + a*b. In the manner of append it may reuse the memory of e.
func (e Expansion) AddProduct(a, b float64) Expansion {
	high, low := TwoProd(a, b)
	return e.Add(low).Add(high)
}

// AddProduct3 returns e + a*b*c. In the manner of append it may reuse the memory
// of e.
func (e Expansion) AddProduct3(a, b, c float64) Expansion {
	high, low := TwoProd(a, b)
	return e.AddProduct(low, c).AddProduct(high, c)
}

// Sum returns e + f in new memory.
func (e Expansion) Sum(f Expansion) Expansion {
	out := append(make(Expansion, 0, len(e)+len(f)), e...)
	for _, component := range f {
		out = out.Add(component)
	}
	return out
}

// Neg returns -e in new memory.
func (e Expansion) Neg() Expansion {
	out := make(Expansion, len(e))
	for i, component := range e {
		out[i] = -component
	}
	return out
}

// Scale returns e * x in new memory (theorem 19).
func (e Expansion) Scale(x float64) Expansion {
	out := make(Expansion, 0, 2*len(e))
	for _, component := range e {
		out = out.AddProduct(component, x)
	}
	return out
}

// Mul returns e * f in new memory.
func (e Expansion) Mul(f Expansion) Expansion {
	out := make(Expansion, 0, 2*len(e)*len(f))
	for _, a := range e {
		for _, b := range f {
			out = out.AddProduct(a, b)
		}
	}
	return out
}

// Sign returns -1, 0 or +1, exactly: the largest component outweighs the sum of
// the others.
func (e Expansion) Sign() int {
	if len(e) == 0 {
		return 0
	}
	return FromFloat(e[len(e)-1]).Sign()
}

// Side returns on which side of zero e lies, exactly.
func (e Expansion) Side() Side {
	if len(e) == 0 {
		return At
	}
	return SideOf(e[len(e)-1], 0)
}

// DD returns e as a double-double with relative error below 2^-100.
func (e Expansion) DD() DD {
	// Summing from the largest component down loses nothing but what lies under
	// the second word; three components reach 2^-106 unless they are short, and
	// the loop takes all.
	var sum DD
	for _, component := range slices.Backward(e) {
		sum = sum.AddFloat(component)
	}
	return sum
}

// Float returns e rounded to a double, to the nearest one except where e lies
// within 2^-100 of the middle between two.
func (e Expansion) Float() float64 { return e.DD().Float() }
