package api

import (
	"math"

	"example.org/kinegate/kinematics/decay"
	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// numberPhoton is the particle number of the photon.
const numberPhoton = 22

// describeDaughters adds where daughters and granddaughters can go, and what holds for two
// daughters alone.
func describeDaughters(
	m *kinegatev1.DescribeDecayResponse, r *reaction.Reaction, c *reaction.Channel, parent decay.Parent,
	request *kinegatev1.DescribeDecayRequest,
) error {
	if err := pairFaults(r, request); err != nil {
		return err
	}
	kind := limitMasses(c)
	if kind == kinegatev1.LimitMasses_LIMIT_MASSES_UNSPECIFIED || r.Inclusive || len(r.Top) < 2 {
		return nil
	}
	if len(r.Top) > maxDaughters {
		m.Remarks = append(m.Remarks, "no limits of the daughters: they are given for at most eight")
		return nil
	}
	masses := topMasses(r, kind)
	d, err := decay.Describe(parent, masses...)
	if err != nil {
		return In("parent", err)
	}
	m.LimitMasses = kind
	for i, number := range r.Top {
		m.Daughters = append(m.Daughters, daughterLimits(r.Products[number].Name, &d.Daughters[i]))
	}
	if err := granddaughters(m, r, parent, masses, kind); err != nil {
		return err
	}
	if len(masses) != 2 {
		return nil
	}
	two, err := decay.NewTwoBody(parent, masses[0], masses[1])
	if err != nil {
		return In("parent", err)
	}
	m.OpeningAngle = angleRange(two.Opening())
	for _, daughter := range m.GetDaughters() {
		daughter.LaboratoryEnergyDensityPerGev = finite(two.BoxHeight())
	}
	if err := pairs(m, &two, request); err != nil {
		return err
	}
	return openingAngles(m, parent, request.GetOpeningAnglesRad())
}

// pairFaults refuses what only decays to two daughters, or to two photons, have.
func pairFaults(r *reaction.Reaction, request *kinegatev1.DescribeDecayRequest) error {
	f := &former{}
	two := len(r.Top) == 2 && !r.Inclusive
	photons := two
	for _, number := range r.Top {
		photons = photons && r.Products[number].Particle.Number == numberPhoton
	}
	if len(request.GetOpeningAnglesRad()) > 0 && !photons {
		f.need("opening_angles_rad", r.String(), "a decay to two photons beside them")
	}
	if len(request.GetRestFrameCosines()) > 0 && !two {
		f.need("rest_frame_cosines", r.String(), "a decay to two daughters beside them")
	}
	if len(request.GetLaboratoryAnglesRad()) > 0 && !two {
		f.need("laboratory_angles_rad", r.String(), "a decay to two daughters beside them")
	}
	f.within("opening_angles_rad", request.GetOpeningAnglesRad(), 0, math.Pi, ">= 0 and <= pi")
	f.within("rest_frame_cosines", request.GetRestFrameCosines(), -1, 1, ">= -1 and <= 1")
	f.within("laboratory_angles_rad", request.GetLaboratoryAnglesRad(), 0, math.Pi, ">= 0 and <= pi")
	return f.faults.Err()
}

// within reports the values of a list that are out of range.
func (f *former) within(field string, values []float64, least, most float64, allowed string) {
	for i, x := range values {
		if !(x >= least && x <= most) {
			f.faults = append(f.faults, fault.Number(index(field, i), x, allowed))
		}
	}
}

func daughterLimits(name string, d *decay.Daughter) *kinegatev1.DaughterLimits {
	return &kinegatev1.DaughterLimits{
		Product: name, MassGev: d.Mass,
		RestFrameEnergy: energyRange(d.RestEnergy), RestFrameMomentum: energyRange(d.RestMomentum),
		LaboratoryEnergy: energyRange(d.Energy), LaboratoryMomentum: energyRange(d.Momentum),
		LaboratoryAngle: angleRange(d.Angle), DoubleValued: d.TwoBranch,
	}
}

// granddaughters adds where the daughters of the daughters can go.
func granddaughters(
	m *kinegatev1.DescribeDecayResponse, r *reaction.Reaction, parent decay.Parent, masses []float64, kind kinegatev1.LimitMasses,
) error {
	for i, number := range r.Top {
		from := &r.Products[number]
		if len(from.Daughters) < 2 || len(from.Daughters) > maxDaughters {
			continue
		}
		own := make([]float64, len(from.Daughters))
		for k, n := range from.Daughters {
			own[k] = r.Products[n].Particle.Mass
			if kind == kinegatev1.LimitMasses_LIMIT_MASSES_LIGHTEST {
				own[k] = r.LightestMass(n)
			}
		}
		if short := breakup.Sum(append([]float64{masses[i]}, negative(own)...)...).Float(); short < 0 {
			m.Remarks = append(m.Remarks, "no limits of the daughters of "+from.Name+": its mass lacks "+fault.Text(-short)+" GeV")
			continue
		}
		for k, n := range from.Daughters {
			l, err := decay.Granddaughter(parent, toFront(masses, i), toFront(own, k))
			if err != nil {
				return In("parent", err)
			}
			g := &kinegatev1.GranddaughterLimits{
				Parent: from.Name,
				Limits: daughterLimits(r.Products[n].Name, &decay.Daughter{Limits: l, Mass: own[k]}),
			}
			if len(masses) == 2 && len(own) == 2 {
				g.RestFrameEnergyDensityPerGev = finite(1 / (l.RestEnergy.Max - l.RestEnergy.Min))
			}
			m.Granddaughters = append(m.Granddaughters, g)
		}
	}
	return nil
}

// toFront returns the list with element i moved to the front.
func toFront(list []float64, i int) []float64 {
	moved := []float64{list[i]}
	moved = append(moved, list[:i]...)
	return append(moved, list[i+1:]...)
}

func negative(list []float64) []float64 {
	out := make([]float64, len(list))
	for i, x := range list {
		out[i] = -x
	}
	return out
}

// pairs adds where both daughters go in the directions asked for.
func pairs(m *kinegatev1.DescribeDecayResponse, two *decay.TwoBody, request *kinegatev1.DescribeDecayRequest) error {
	for i, cosine := range request.GetRestFrameCosines() {
		pair, err := two.At(cosine)
		if err != nil {
			return moved(err, index("rest_frame_cosines", i))
		}
		m.RestFramePairs = append(m.RestFramePairs, pairMessage(&pair))
	}
	for i, angle := range request.GetLaboratoryAnglesRad() {
		found, err := two.AtLabAngle(0, angle)
		if err != nil {
			return moved(err, index("laboratory_angles_rad", i))
		}
		solution := &kinegatev1.DecaySolution{}
		for k := range found {
			solution.Pairs = append(solution.Pairs, pairMessage(&found[k]))
		}
		m.LaboratorySolutions = append(m.LaboratorySolutions, solution)
	}
	return nil
}

func pairMessage(p *decay.Pair) *kinegatev1.DecayPair {
	m := &kinegatev1.DecayPair{OpeningAngleRad: p.Opening}
	for i := range p.Daughters {
		d := &p.Daughters[i]
		m.Daughters = append(m.Daughters, &kinegatev1.DecayMotion{
			RestFrameAngleRad: d.RestAngle, LaboratoryAngleRad: d.Angle, LaboratoryTotalEnergyGev: d.Energy,
			LaboratoryKineticEnergyGev: d.Kinetic, LaboratoryMomentumGev: d.Momentum,
			RestFramePerLaboratory: finite(d.RestPerLab),
		})
	}
	return m
}

// openingAngles adds the densities of the opening angle of two photons.
func openingAngles(m *kinegatev1.DescribeDecayResponse, parent decay.Parent, angles []float64) error {
	if len(angles) == 0 {
		return nil
	}
	photons, err := decay.NewPhotonPair(parent)
	if err != nil {
		return In("parent", err)
	}
	for i, angle := range angles {
		density, err := photons.OpeningDensity(angle)
		if err != nil {
			return moved(err, index("opening_angles_rad", i))
		}
		below, err := photons.OpeningFraction(angle)
		if err != nil {
			return moved(err, index("opening_angles_rad", i))
		}
		m.OpeningAngles = append(m.OpeningAngles, &kinegatev1.OpeningAngleDensity{
			DensityPerRad: finite(density), FractionBelow: below,
		})
	}
	return nil
}
