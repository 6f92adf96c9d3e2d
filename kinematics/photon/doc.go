// Package photon answers for photons against photons, charged particles and fields
// of photons in lowest-order quantum electrodynamics: creation and annihilation of
// pairs, Compton scattering at rest and in flight, photon beams backscattered from a
// charged beam, thresholds of pair creation in the field of a nucleus or an electron,
// and the absorption of a photon in a black-body or power-law field.
//
// Units are GeV, radian, metre, barn and kelvin, with c = 1. Cross-sections come as
// pure numbers in units of pi r^2 or r^2 per steradian, where
//
//	r = alpha hbar c / m
//
// is the classical radius of the particle of mass m (r_e for the electron), and in
// barn through ClassicalRadiusSquared.
//
// Left out throughout: higher orders in alpha and radiation of further photons,
// binding of the electrons, form factors and resonances (leptons and scalars are
// points, so that hadron pairs are right near threshold at best), weak interactions,
// and any field strong enough for several laser photons to act at once. Pairs near
// threshold lack the Coulomb attraction of their two charges, which matters for
// velocities of order alpha.
//
// In range, for an energy, a mass, a density or a length, means 1e-100 to 1e100 in its
// unit, or 0 where 0 is allowed; functions that return an error refuse others.
package photon
