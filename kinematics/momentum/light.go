package momentum

// Constants of the International System of Units, 9th brochure (2019), which are exact.
const (
	// LightSpeed is the speed of light in metres per second.
	LightSpeed = 299792458.0
	// PlanckGeVSecond is the Planck constant in GeV second, from h = 6.62607015e-34 J s
	// and e = 1.602176634e-19 C. The frequency of a photon is its energy over it.
	PlanckGeVSecond = 6.62607015e-34 / 1.602176634e-10
	// PlanckGeVMetre is h c in GeV metre. The wavelength of a photon in vacuum is it over
	// the energy.
	PlanckGeVMetre = 6.62607015e-34 * LightSpeed / 1.602176634e-10
)

// Flight returns how long the particle takes for a distance >= 0 in metres, and how much
// longer than light in vacuum, both in seconds:
//
//	time = (L/c)/beta,  delay = (L/c) (1-beta)/beta
//
// so that no difference of times is formed. Within 1e-15 relative on top of the motion's
// own errors. Special cases: a distance of 0 takes no time; a particle at rest needs +Inf
// for any other.
func (m *Motion) Flight(distance float64) (time, delay float64) {
	if distance == 0 {
		return 0, 0
	}
	light := distance / LightSpeed
	return light / m.Beta, light * (m.OneMinusBeta / m.Beta)
}
