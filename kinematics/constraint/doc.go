// Package constraint fits measured momenta under exact constraints: least
// squares with Lagrange multipliers.
//
// The fit finds the stationary point of
//
//	L(y, u, lambda) = (y - y0)' V^-1 (y - y0)/2 + lambda' f(y, u)
//
// where y0 are the measured parameters with covariance V (one 3x3 block per
// object), u the unmeasured parameters, and f = 0 the constraints: conservation
// of four-momentum, the masses of sets of objects, equal masses of two sets. The
// chi-square is twice the first term at the solution, with as many degrees of
// freedom as there are constraints less unmeasured parameters.
//
// Each step is Newton's on the conditions of stationarity, with the second
// derivatives of the constraints; iterated linearisation alone diverges on some
// ordinary events. A step is taken in full or shortened until it lowers an
// augmented Lagrangian; where the second derivatives spoil the curvature along
// the constraints they are scaled down. The fit has converged when the
// stationarity and the constraints are met within Bound, both in units of standard
// deviations.
//
// Parameters are counted in standard deviations from their measured values, so a
// variance of zero is a parameter that is known exactly and a correlation of one
// is a line on which two of them lie. Angles run over the reals from the measured
// value; they are folded back only when reported.
//
// The covariances are taken as they are given. With those at the true values, probabilities
// are flat and pulls normal as far as the constraints are linear over the errors; what is left
// of the mean of a pull is proportional to the resolutions: at most 0.06 standard deviations
// for photons of 5 %/sqrt(E) and 3 mrad in the channels of TestNonLinearity. A detector knows
// its resolutions at the measured values, where an object that came out low looks more precise
// than it is: the largest mean is then 0.10, and proportional too.
//
// A Problem is compiled once for a hypothesis. Each worker has its own Fitter,
// whose steady state allocates nothing. Units: GeV (c = 1), radian, metre.
//
// Sources: A. G. Frodesen, O. Skjeggestad and H. Tofte, Probability and
// Statistics in Particle Physics (1979), on least squares with constraints;
// J. Nocedal and S. J. Wright, Numerical Optimization, 2nd edition (2006),
// chapter 18; chapters from memory.
package constraint
