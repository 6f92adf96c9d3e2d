// Package num holds the arithmetic that every other package of kinematics builds
// on: error-free sums and products, double-double numbers, exact expansions, and
// elementary functions that give the same bits on every processor.
//
// Rules kept here and above: a product that feeds an addition is written
// float64(a*b) or math.FMA(a, b, c), because the compiler may otherwise fuse the
// two on some processors and not on others; from package math only functions with
// an exactly rounded or exact result are used.
//
// The polynomials of the elementary functions are those of FreeBSD's mathematical library
// and the Go standard library; see NOTICE.
package num
