package momentum_test

import (
	"testing"

	"example.org/kinegate/kinematics/internal/golden"
	"example.org/kinegate/kinematics/momentum"
)

// seededMomentum draws a momentum over many decades.
func seededMomentum(s *golden.Source) momentum.Three {
	return momentum.Three{
		X: s.Sign() * s.Magnitude(-20, 10),
		Y: s.Sign() * s.Magnitude(-20, 10),
		Z: s.Sign() * s.Magnitude(-20, 20),
	}
}

// addFour adds the components of a four-momentum to a digest.
func addFour(d *golden.Digest, p momentum.Four) {
	d.Float(p.P.X, p.P.Y, p.P.Z, p.E)
}

// TestGoldenMomenta holds boosts, invariant masses, breakup momenta and rotations to the same
// bits on every processor.
func TestGoldenMomenta(t *testing.T) {
	const count = 2000

	golden.Check(t, "momenta", func(d *golden.Digest) {
		s := golden.NewSource(1)

		d.Section("boosts")

		for range count {
			boost, err := momentum.NewBoost(seededMomentum(s), s.Magnitude(-12, 8))
			if err != nil {
				t.Fatal(err)
			}

			p := momentum.WithMass(seededMomentum(s), s.Magnitude(-12, 8))
			addFour(d, boost.FromRest(p))
			addFour(d, boost.ToRest(p))
		}

		d.Section("masses_squared")

		for range count {
			a := momentum.WithMass(seededMomentum(s), s.Magnitude(-12, 8))
			b := momentum.WithMass(seededMomentum(s), s.Magnitude(-12, 8))
			c := momentum.WithMass(seededMomentum(s), 0)
			d.Float(momentum.MassSquared(a, b), momentum.MassSquared(a, b, c), a.Dot(b))
			d.Float(momentum.MassSquaredOnShell(
				momentum.NewOnShell(a.P, s.Magnitude(-12, 8)), momentum.NewOnShell(b.P, s.Magnitude(-12, 8))))
		}

		d.Section("two_bodies")

		for range count {
			m1, m2 := s.Magnitude(-12, 8), s.Magnitude(-12, 8)

			pair, err := momentum.TwoBodyFromExcess(s.Magnitude(-40, 8), m1, m2)
			if err != nil {
				t.Fatal(err)
			}

			d.Float(pair.P, pair.E1, pair.E2, pair.T1, pair.T2)
		}

		d.Section("directions")

		for range count {
			p := momentum.FromAngles(s.Magnitude(-20, 20), s.Between(0, 3.1), s.Between(-3.1, 3.1))
			q := p.Rotate(seededMomentum(s), s.Between(-3.1, 3.1))
			d.Float(q.X, q.Y, q.Z, momentum.Rapidity(q, s.Magnitude(-12, 8)), momentum.Pseudorapidity(q))
		}
	})
}
