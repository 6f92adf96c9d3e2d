package photon

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/num"
)

// LaserEdge returns the energy of a photon that a charged beam scatters straight back,
// after it met the beam head on:
//
//	w' = w (E + p)^2/(m^2 + 2 w (E + p)) = w/((m/(E + p))^2 + 2 w/(E + p))
//
// For p > w this is the largest photon energy there is. For p < w the beam takes
// energy from the photon and it is the smallest.
//
// Domain: E >= m > 0, w > 0, all in GeV and finite; other values give NaN.
// Accuracy: 2e-15; E - m is formed without loss near rest.
//
// Source: R. H. Milburn, Phys. Rev. Lett. 10 (1963) 75; F. R. Arutyunian and V. A.
// Tumanian, Phys. Lett. 4 (1963) 176, from memory.
func LaserEdge(beamEnergyGeV, massGeV, photonEnergyGeV float64) float64 {
	if !(massGeV > 0 && beamEnergyGeV >= massGeV && beamEnergyGeV <= math.MaxFloat64/2 &&
		photonEnergyGeV > 0 && photonEnergyGeV <= math.MaxFloat64/2) {
		return math.NaN()
	}
	sum := beamEnergyGeV + float64(math.Sqrt(beamEnergyGeV-massGeV)*math.Sqrt(beamEnergyGeV+massGeV))
	ratio := massGeV / sum
	return photonEnergyGeV / (float64(ratio*ratio) + 2*photonEnergyGeV/sum)
}

// Backscatter is a photon beam made by light that meets a beam of particles of
// spin 1/2 and unit charge at an angle. Angles of scattered photons are to the total
// momentum, which for head-on beams with p > w is the direction of the beam. Make one
// with NewBackscatter. It is immutable.
type Backscatter struct {
	mass, photonEnergy float64
	headOn             bool
	// rapid is E_tot + P_tot, momentum is P_tot, invariant s, product p.k.
	rapid, momentum, invariant, product num.DD
	lowest, highest                     num.DD
	// x is (s - m^2)/m^2 = 2 p.k/m^2.
	x float64
	// turned and kept are sin^2 and cos^2 of half the angle between the photon and
	// the total momentum in the centre of mass; head on one is 1 and the other 0.
	turned, kept float64
}

// NewBackscatter returns the photon beam from a charged beam of total energy
// beamEnergyGeV and mass massGeV and light of photonEnergyGeV, whose directions differ
// by angleRad (pi, the double nearest to it included, is head on).
//
// Domain: beamEnergyGeV >= massGeV > 0, photonEnergyGeV > 0, all in range,
// 0 <= angleRad <= pi, and (s - m^2)/m^2 <= 1e50. Head on with equal momenta the
// laboratory is the centre of mass, every photon has the same energy and there is no
// spectrum: that is refused, as are momenta equal to one part in 2^90.
func NewBackscatter(beamEnergyGeV, massGeV, photonEnergyGeV, angleRad float64) (Backscatter, error) {
	const op = "photon.NewBackscatter"
	flight := Flight{beamEnergyGeV, massGeV, photonEnergyGeV, angleRad}
	if err := flight.check(op); err != nil {
		return Backscatter{}, err
	}
	headOn := angleRad == math.Pi
	p := num.Sum2(beamEnergyGeV, -massGeV).Mul(num.Sum2(beamEnergyGeV, massGeV)).Sqrt()
	rapid := p.AddFloat(beamEnergyGeV)
	facing := haversine(angleRad)
	away := 1 - facing
	if !headOn {
		cosine := num.Cos(angleRad / 2)
		away = cosine * cosine
	}
	w := photonEnergyGeV
	// p.k = w (E - p cos) = w (m^2/(E + p) + 2 p sin(angle/2)^2).
	slow := num.Prod2(massGeV, massGeV).Div(rapid)
	product := slow.Add(p.MulFloat(facing).Scale(1)).MulFloat(w)
	invariant := num.Prod2(massGeV, massGeV).Add(product.Scale(1))
	// P^2 = (p - w)^2 + 4 p w cos(angle/2)^2.
	difference := p.SubFloat(w)
	momentum := difference.Abs()
	if !headOn {
		momentum = difference.Square().Add(p.MulFloat(w).MulFloat(away).Scale(2)).Sqrt()
	}
	if momentum.Hi <= 0x1p-90*(p.Hi+w) {
		return Backscatter{}, fault.Number("photon_energy_gev", photonEnergyGeV, "not the beam's momentum").In(op).
			Because("the laboratory is the centre of mass: one line, no spectrum")
	}
	total := num.Sum2(beamEnergyGeV, w).Add(momentum)
	b := Backscatter{
		mass: massGeV, photonEnergy: photonEnergyGeV, headOn: headOn,
		rapid: total, momentum: momentum, invariant: invariant, product: product,
		lowest:  product.Div(total),
		highest: product.Mul(total).Div(invariant),
		x:       2 * product.Float() / massGeV / massGeV,
	}
	if !(b.x <= 1e50) {
		return Backscatter{}, fault.Number("beam_energy_gev", beamEnergyGeV, "(s - m^2)/m^2 <= 1e50").In(op)
	}
	b.turned, b.kept = b.orientation(p, difference, facing, away)
	return b, nil
}

// orientation returns sin^2 and cos^2 of half the angle in the centre of mass between
// the photon before and the total momentum. The energy of the photon before is
// w = lowest + (highest - lowest) cos^2, and with highest - lowest = 2 P p.k/s
//
//	cos^2 = w (w + P + p cos(angle)) s/(2 P p.k (E_tot + P))
//	sin^2 = ((E_tot + P) p.k/s - w) s/(2 P p.k)
//
// Where w + p cos(angle) is negative, its sum with P is rebuilt as
// p^2 sin(angle)^2/(P - w - p cos(angle)).
func (b Backscatter) orientation(p, difference num.DD, facing, away float64) (turned, kept float64) {
	if b.headOn {
		if difference.Sign() > 0 {
			return 1, 0
		}
		return 0, 1
	}
	// w + p cos(angle) = p (cos^2 - sin^2 of the half angle) + w.
	along := p.MulFloat(away - facing).AddFloat(b.photonEnergy)
	reach := b.momentum.Add(along)
	if along.Sign() < 0 {
		reach = p.Square().MulFloat(4 * facing * away).Div(b.momentum.Sub(along))
	}
	scale := b.invariant.Div(b.momentum.Mul(b.product).Scale(1))
	kept = reach.MulFloat(b.photonEnergy).Mul(scale).Div(b.rapid).Float()
	kept = math.Min(1, kept) // rounding can pass 1 by one unit where the angle is 0
	return 1 - kept, kept
}

// Highest returns the largest energy of a scattered photon,
//
//	w_max = p.k (E_tot + P_tot)/s
//
// the edge of the spectrum. Head on with p > w it is LaserEdge; head on with p < w it
// is the photon's own energy. Accuracy: 1e-15 at head on; at another angle times the
// condition number of its sine.
func (b Backscatter) Highest() float64 { return b.highest.Float() }

// Lowest returns the smallest energy of a scattered photon, p.k/(E_tot + P_tot): head
// on with p > w the energy of the light itself.
func (b Backscatter) Lowest() float64 { return b.lowest.Float() }

// Invariant returns x = (s - m^2)/m^2, with E much larger than m and head on
// 4 E w/m^2. The edge is E x/(1 + x) in that limit.
func (b Backscatter) Invariant() float64 { return b.x }

// TotalBarn returns the total cross-section in barn: KleinNishinaTotal at k = x/2.
func (b Backscatter) TotalBarn() float64 {
	ratio := ElectronMassGeV / b.mass
	return ThomsonBarn * (ratio * ratio) * KleinNishinaTotal(b.x/2)
}

// EnergyAt returns the energy of a photon scattered at thetaRad from the total
// momentum, 0 <= thetaRad <= pi:
//
//	w' = p.k/(E_tot - P cos(theta)) = p.k/(s/(E_tot + P) + 2 P sin(theta/2)^2)
//
// Accuracy: 2e-15.
func (b Backscatter) EnergyAt(thetaRad float64) (float64, error) {
	if err := within("photon.Backscatter.EnergyAt", "theta_rad", thetaRad, 0, math.Pi, "0 <= theta <= pi"); err != nil {
		return 0, err
	}
	denominator := b.invariant.Div(b.rapid).Add(b.momentum.MulFloat(haversine(thetaRad)).Scale(1))
	return b.product.Div(denominator).Float(), nil
}

// AngleAt returns the angle to the total momentum at which photons have the energy
// energyGeV, the inverse of EnergyAt:
//
//	tan(theta/2)^2 = ((w_max - w')/(w' - w_min)) (w_min/w_max)
//
// The differences are formed to double-double precision from exactly the energy
// given. Domain: Lowest() <= energyGeV <= Highest(), the rounded ends included; else
// fault.Outside. Accuracy: 2e-15 times the condition number at the ends.
func (b Backscatter) AngleAt(energyGeV float64) (float64, error) {
	share, rest, err := b.position("photon.Backscatter.AngleAt", energyGeV)
	if err != nil {
		return 0, err
	}
	ratio := b.lowest.Div(b.highest).Float()
	return 2 * num.Atan2(math.Sqrt(rest*ratio), math.Sqrt(share)), nil
}

// position returns where an energy lies between the ends of the spectrum:
// h = (w' - w_min)/(w_max - w_min) and 1 - h, each from its own difference.
func (b Backscatter) position(op string, energyGeV float64) (share, rest float64, err error) {
	if !(energyGeV >= b.lowest.Float() && energyGeV <= b.highest.Float()) {
		return 0, 0, fault.New(fault.Outside, "photon_energy_gev", fault.Text(energyGeV),
			fault.Text(b.lowest.Float())+" <= energy <= "+fault.Text(b.highest.Float())).In(op)
	}
	energy := num.FromFloat(energyGeV)
	width := b.width()
	// The rounded end may lie outside the exact one by half a unit of its last place.
	share = math.Max(0, energy.Sub(b.lowest).Div(width).Float())
	rest = math.Max(0, b.highest.Sub(energy).Div(width).Float())
	return share, rest, nil
}

// width returns highest - lowest = 2 P p.k/s.
func (b Backscatter) width() num.DD {
	return b.momentum.Mul(b.product).Scale(1).Div(b.invariant)
}
