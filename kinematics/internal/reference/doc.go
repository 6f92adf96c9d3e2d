// Package reference compares the functions of kinematics with answers made outside
// the project: testdata/reference/precision-cases.json (50-digit answers to exact
// double inputs) and testdata/reference/checks.json (handbook and paper values). A
// second set of precision cases, own-cases.json, comes from more_cases.py beside it.
// It is imported by tests only.
//
// A test of one precision function:
//
//	func TestPrecisionKallen(t *testing.T) {
//		reference.Precision(t, "kallen", func(in reference.Input) (reference.Output, string) {
//			l := KallenSquares(in.Float("a"), in.Float("b"), in.Float("c"))
//			return reference.Output{"lambda": l}, ""
//		})
//	}
//
// A test of one class of checks:
//
//	func TestChecksDalitz(t *testing.T) {
//		reference.Checks(t, "dalitz", func(c reference.Check) (any, bool) {
//			switch { ... }
//			return value, true // in the unit c.Unit; false: not this package's
//		})
//	}
//
// Every function and class has a line in testdata/reference/ledger.csv that names
// the test that covers it; the test of this package holds the two together. The table
// of what all tests of precision functions measured is testdata/reference/precision.md,
// which TestPrecisionStatement holds to the measurement.
package reference
