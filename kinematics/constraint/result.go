package constraint

// Status says how a fit ended.
type Status uint8

// The states of a fit.
const (
	// Converged: the conditions of the minimum are met within Bound.
	Converged Status = iota + 1
	// NotConverged: they were not met after the largest number of steps.
	NotConverged
	// Infeasible: the constraints cannot be met together near the measurement; the
	// fit stands where they are violated least.
	Infeasible
	// Singular: a measured value is not a number, a covariance is not positive
	// semidefinite, or the constraints do not determine the unmeasured parameters or
	// depend on one another.
	Singular
	statusEnd
)

// Valid reports whether the status is a known one.
func (s Status) Valid() bool { return s >= Converged && s < statusEnd }

// String is the status in words.
func (s Status) String() string {
	switch s {
	case Converged:
		return "converged"
	case NotConverged:
		return "not converged"
	case Infeasible:
		return "infeasible"
	case Singular:
		return "singular"
	case statusEnd:
	}
	return "unknown"
}

// Result is what a fit found.
type Result struct {
	Status Status
	// ChiSquare is the chi-square, with DegreesOfFreedom; it is the minimum only
	// where the fit Converged.
	ChiSquare        float64
	DegreesOfFreedom int
	// Probability is that of a larger chi-square; NaN unless Converged with a degree
	// of freedom.
	Probability float64
	// Iterations is the number of steps.
	Iterations int
	// Stationarity and Violation are the largest component of the gradient of the
	// Lagrangian and the largest constraint at the end, in standard deviations.
	Stationarity, Violation float64
}
