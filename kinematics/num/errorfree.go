package num

import "math"

// TwoSum returns the rounded sum s = RN(a+b) and its exact rounding error e:
//
//	s + e = a + b
//
// exactly, for all finite a and b whose sum does not overflow. Addition of doubles
// cannot underflow inexactly, so no lower limit applies. If s overflows or an
// argument is infinite or NaN, e is NaN or meaningless.
//
// Source: D. E. Knuth, The Art of Computer Programming vol. 2, 3rd ed. (1998),
// section 4.2.2, theorem B; O. Moller, BIT 5 (1965) 37.
func TwoSum(a, b float64) (s, e float64) {
	s = a + b
	bv := s - a
	av := s - bv
	return s, (a - av) + (b - bv)
}

// FastTwoSum returns the same as TwoSum for |a| >= |b| or a = 0 with fewer operations.
// For other arguments e is only an approximation of the error.
//
// Source: T. J. Dekker, A floating-point technique for extending the available
// precision, Numer. Math. 18 (1971) 224, formula (4.14).
func FastTwoSum(a, b float64) (s, e float64) {
	s = a + b
	return s, b - (s - a)
}

// TwoProd returns the rounded product p = RN(a*b) and its exact rounding error e:
//
//	p + e = a * b
//
// exactly, if p is finite and the product is 0 or |a*b| >= 2^-969 (a smaller product may
// have an error term below the smallest double, which is then rounded to a
// multiple of 2^-1074).
//
// Source: P. Karp and P. Markstein, ACM Trans. Math. Softw. 23 (1997) 561; the
// fused multiply-add makes the error term one instruction.
func TwoProd(a, b float64) (p, e float64) {
	p = float64(a * b) // Rounded here: inlined, it would fuse with the caller's sums.
	return p, math.FMA(a, b, -p)
}
