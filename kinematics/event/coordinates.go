package event

// Kind names a coordinate set.
type Kind uint8

// The coordinate sets. The first three columns of each are the parameters that
// the measured mask and the covariance speak of, save EnergyMomentum and
// MomentumMass, whose fourth column is no parameter of its own.
const (
	// EnergyMomentum is px, py, pz and the energy.
	EnergyMomentum Kind = iota
	// MomentumMass is px, py, pz and the mass.
	MomentumMass
	// TransverseMomentum is transverse momentum, pseudorapidity, phi and the mass.
	TransverseMomentum
	// MomentumAngles is the size of the momentum, theta and phi. The momentum of
	// a photon is its energy, so mixed events fit.
	MomentumAngles
	// MomentumSlopes is the size of the momentum, px/pz and py/pz, for objects
	// with pz > 0. It is regular on the beam axis, where phi is not.
	MomentumSlopes
	kindCount
)

// maxColumns is the largest number of columns of a coordinate set.
const maxColumns = 4

// Coordinates holds the momenta of the objects in one coordinate set.
type Coordinates struct {
	Kind Kind
	// Columns are the set's columns in the order that its Kind states; those
	// beyond Kind.Columns() are unused and must be nil.
	Columns [maxColumns][]float64
}

// Valid reports whether the kind is one of the five known ones.
func (k Kind) Valid() bool { return k < kindCount }

// Columns is the number of columns of the set, 0 for an unknown kind.
func (k Kind) Columns() int {
	switch k {
	case EnergyMomentum, MomentumMass, TransverseMomentum:
		return maxColumns
	case MomentumAngles, MomentumSlopes:
		return maxColumns - 1
	case kindCount:
	}
	return 0
}

// String is the set's name in words.
func (k Kind) String() string {
	switch k {
	case EnergyMomentum:
		return "energy_momentum"
	case MomentumMass:
		return "momentum_mass"
	case TransverseMomentum:
		return "transverse_momentum"
	case MomentumAngles:
		return "momentum_angles"
	case MomentumSlopes:
		return "momentum_slopes"
	case kindCount:
	}
	return "unknown"
}

// ColumnName is the name of column i with its unit, empty beyond the set.
func (k Kind) ColumnName(i int) string {
	if i < 0 || i >= k.Columns() {
		return ""
	}
	switch k {
	case EnergyMomentum:
		return [...]string{"px_gev", "py_gev", "pz_gev", "energy_gev"}[i]
	case MomentumMass:
		return [...]string{"px_gev", "py_gev", "pz_gev", "mass_gev"}[i]
	case TransverseMomentum:
		return [...]string{"transverse_momentum_gev", "pseudorapidity", "phi_rad", "mass_gev"}[i]
	case MomentumAngles:
		return [...]string{"momentum_gev", "theta_rad", "phi_rad"}[i]
	case MomentumSlopes:
		return [...]string{"momentum_gev", "slope_x", "slope_y"}[i]
	case kindCount:
	}
	return ""
}
