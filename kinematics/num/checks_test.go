package num_test

import (
	"testing"

	"example.org/kinegate/kinematics/internal/reference"
	"example.org/kinegate/kinematics/num"
)

func TestChecksChiSquare(t *testing.T) {
	reference.Checks(t, "chi-square", func(c reference.Check) (any, bool) {
		switch {
		case c.Has("upper_tail"):
			return num.ChiSquareQuantile(c.Float("upper_tail"), c.Int("ndf")), true
		case c.Has("coverage"):
			return num.ChiSquareQuantile(1-c.Float("coverage"), c.Int("m")), true
		case c.Has("chi2"):
			return num.ChiSquareTail(c.Float("chi2"), c.Int("ndf")), true
		}
		return nil, false
	})
}
