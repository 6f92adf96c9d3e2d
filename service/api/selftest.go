package api

import (
	"fmt"

	"example.org/kinegate/kinematics/num"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/reaction"
)

// SelfTest recomputes a known answer through the core and reports an error if it does
// not come out. It uses the standard table, as files may change masses on purpose.
//
// The answer: gamma p -> K+ Lambda opens on a proton at rest at a photon energy of
// ((m_K + m_Lambda)^2 - m_p^2)/(2 m_p) = 0.911 GeV (common knowledge of the trade, to
// the digits stated), so it is closed at 0.910 GeV and open at 0.912 GeV.
func SelfTest() error {
	table, err := particle.New()
	if err != nil {
		return err
	}
	r, err := reaction.Parse(table, "gamma p -> K+ Lambda")
	if err != nil {
		return err
	}
	for _, c := range []struct {
		energy float64
		want   num.Side
	}{{0.910, num.Below}, {0.912, num.Above}} {
		beam := reaction.Body{Mass: r.Initial[0].Mass, Given: reaction.ByTotal, Value: c.energy}
		collision, err := reaction.OnTarget(beam, r.Initial[1].Mass)
		if err != nil {
			return err
		}
		var masses []float64
		for _, i := range r.Top {
			masses = append(masses, r.Products[i].Particle.Mass)
		}
		if excess, side := collision.Excess(masses...); side != c.want {
			return fmt.Errorf("gamma p -> K+ Lambda at %g GeV has the excess energy %g GeV", c.energy, excess)
		}
	}
	return nil
}
