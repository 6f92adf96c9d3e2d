package photon

import (
	"math"

	"example.org/kinegate/kinematics/fault"
)

// LaserPolarisation is the polarisation of the light and the beam of a Backscatter.
// The zero value is unpolarised.
type LaserPolarisation struct {
	// Circular is the mean helicity of the light, -1 to 1.
	Circular float64
	// Linear is the degree of linear polarisation of the light in its plane, 0 to 1.
	Linear float64
	// BeamHelicity is twice the mean helicity of the beam particles, -1 to 1.
	BeamHelicity float64
}

// PolarisedPoint is one energy of the spectrum of polarised beams.
type PolarisedPoint struct {
	// DifferentialBarn is d sigma/d w' in barn per GeV.
	DifferentialBarn float64
	// Circular is the mean helicity of the scattered photons, -1 to 1.
	Circular float64
	// Linear is their mean degree of linear polarisation in the plane of the light's,
	// averaged over azimuth, 0 to 1.
	Linear float64
}

// Polarised returns the spectrum and the polarisation of the scattered photons at the
// energy energyGeV, for head-on beams. With y and r as for DifferentialBarn, light of
// helicity P and linear degree T, and beam helicity L (twice the mean),
//
//	d sigma/d y = (2 pi r_0^2/x) C,  C = 1/(1-y) + 1-y - 4 r (1-r) - L P r x (2 r - 1)(2 - y)
//	circular = (L r x (1 + (1-y)(2 r - 1)^2) - P (2 r - 1)(1/(1-y) + 1-y))/C
//	linear   = 2 r^2 T/C
//
// At the edge (r = 1) of a soft beam the photons take the opposite helicity and the
// whole linear polarisation of the light.
//
// Domain: |Circular|, |BeamHelicity| <= 1, Linear >= 0, Circular^2 + Linear^2 <= 1;
// Lowest() <= energyGeV <= Highest(). Beams that do not meet head on are
// fault.Unsupported. Accuracy: 1e-14 times the condition number at the ends. Left out:
// transverse polarisation of the beam, higher orders, several laser photons at once
// (linear quantum electrodynamics).
//
// Source: I. F. Ginzburg, G. L. Kotkin, S. L. Panfil, V. G. Serbo and V. I. Telnov,
// Nucl. Instrum. Meth. A 219 (1984) 5, equations for C_00, C_20 and C_13, from memory.
func (b Backscatter) Polarised(energyGeV float64, p LaserPolarisation) (PolarisedPoint, error) {
	const op = "photon.Backscatter.Polarised"
	if !b.headOn {
		return PolarisedPoint{}, fault.New(fault.Unsupported, "angle_between_beams_rad", "", "pi").In(op).
			Because("polarisation transfer is for head-on beams")
	}
	if err := p.check(op); err != nil {
		return PolarisedPoint{}, err
	}
	share, rest, err := b.position(op, energyGeV)
	if err != nil {
		return PolarisedPoint{}, err
	}
	if b.kept > b.turned { // p < w: the largest energy is the photon that passed
		share, rest = rest, share
	}
	// 1 - y = (1 + x rest)/(1 + x), r = y/(x (1 - y)) = share/(1 + x rest).
	kept := (1 + float64(b.x*rest)) / (1 + b.x)
	r := share / (1 + float64(b.x*rest))
	slope := float64(2*r) - 1
	sum := 1/kept + kept
	rx := r * b.x
	c := sum - float64(4*r*(1-r)) - float64(p.BeamHelicity*p.Circular*rx*slope*(1+kept))
	transferred := p.BeamHelicity * rx * (1 + float64(kept*slope*slope))
	return PolarisedPoint{
		DifferentialBarn: b.perShare() * c / b.width().Float(),
		Circular:         (float64(transferred) - float64(p.Circular*slope*sum)) / c,
		Linear:           2 * r * r * p.Linear / c,
	}, nil
}

func (p LaserPolarisation) check(op string) error {
	if err := first(
		within(op, "circular", p.Circular, -1, 1, "-1 <= circular <= 1"),
		within(op, "linear", p.Linear, 0, 1, "0 <= linear <= 1"),
		within(op, "beam_helicity", p.BeamHelicity, -1, 1, "-1 <= beam_helicity <= 1"),
	); err != nil {
		return err
	}
	// The bound leaves room for degrees rounded to doubles: the squares of two rounded
	// numbers sum to at most 1 + 4 u.
	if sum := math.FMA(p.Linear, p.Linear, p.Circular*p.Circular); sum > 1+0x1p-50 {
		return fault.Number("linear", p.Linear, "circular^2 + linear^2 <= 1").In(op)
	}
	return nil
}
