package photon

import "example.org/kinegate/kinematics/num"

// FieldPairThreshold returns the smallest energy of a photon that makes a pair of
// particles of mass pairMassGeV each in the field of a target at rest of mass
// targetMassGeV, which takes the recoil and stays whole:
//
//	E = ((M + 2 m)^2 - M^2)/(2 M) = 2 m (1 + m/M)
//
// For an electron pair in the field of an electron M = m and E = 4 m. The threshold is
// that of free particles: binding of an atomic electron, excitation or break-up of a
// nucleus are left out, and near the threshold in an electron's field the cross-section
// is very small.
//
// Domain: both masses in range. Accuracy: one rounding.
//
// Source: conservation of energy and momentum; R. D. Evans, The Atomic Nucleus (1955),
// chapter 24.
func FieldPairThreshold(pairMassGeV, targetMassGeV float64) (float64, error) {
	const op = "photon.FieldPairThreshold"
	if err := first(
		positive(op, "pair_mass_gev", pairMassGeV),
		positive(op, "target_mass_gev", targetMassGeV),
	); err != nil {
		return 0, err
	}
	return num.Quo2(pairMassGeV, targetMassGeV).AddFloat(1).MulFloat(pairMassGeV).Scale(1).Float(), nil
}
