package api

import (
	"context"
	"math"
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// maxMotionValues bounds the distances and the indices of one request.
const maxMotionValues = 1000

// chargeUnit is the charge of the positron in thirds.
const chargeUnit = 3

// ConvertMotion turns one quantity of a particle's motion into all others.
func (s *reactionService) ConvertMotion(
	_ context.Context, request *kinegatev1.ConvertMotionRequest,
) (*kinegatev1.ConvertMotionResponse, error) {
	m := &kinegatev1.ConvertMotionResponse{TableVersion: s.table.Version()}
	if err := s.body(m, request); err != nil {
		return nil, err
	}
	motion, err := motionOf(request, m.GetMassGev(), m.GetChargeThirds())
	if err != nil {
		return nil, err
	}
	m.TotalEnergyGev, m.KineticEnergyGev, m.MomentumGev = motion.Total, motion.Kinetic, motion.Momentum
	m.Beta, m.OneMinusBeta = motion.Beta, motion.OneMinusBeta
	if motion.Mass > 0 {
		m.Gamma, m.GammaMinusOne, m.BetaGamma = &motion.Gamma, &motion.GammaMinusOne, &motion.BetaGamma
	} else {
		m.WavelengthM = new(momentum.PlanckGeVMetre / motion.Total)
		m.FrequencyHz = new(motion.Total / momentum.PlanckGeVSecond)
	}
	if m.GetChargeThirds() != 0 {
		m.RigidityGv = new(motion.Momentum / charge(m.GetChargeThirds()))
	}
	if m.Flights, err = flights(&motion, request.GetDistancesM()); err != nil {
		return nil, err
	}
	m.CherenkovLights, err = cherenkovLights(&motion, m.GetChargeThirds() != 0, request.GetRefractiveIndices())
	return m, err
}

// charge is the magnitude of a charge in units of the positron's.
func charge(thirds int32) float64 { return math.Abs(float64(thirds)) / chargeUnit }

// body reads mass and charge.
func (s *reactionService) body(m *kinegatev1.ConvertMotionResponse, request *kinegatev1.ConvertMotionRequest) error {
	switch body := request.GetBody().(type) {
	case *kinegatev1.ConvertMotionRequest_Particle:
		p, err := s.table.Named(body.Particle)
		if err != nil {
			return moved(err, "particle")
		}
		if c := request.GetChargeThirds(); c != 0 {
			return fault.New(fault.Invalid, "charge_thirds", strconv.Itoa(int(c)), "0 beside a particle, which has its own")
		}
		m.Particle, m.MassGev, m.ChargeThirds = p.Name, p.Mass, int32Of(p.ChargeThirds())
		return nil
	case *kinegatev1.ConvertMotionRequest_MassGev:
		m.MassGev, m.ChargeThirds = body.MassGev, request.GetChargeThirds()
		return nil
	}
	return fault.New(fault.Invalid, "body", "", "particle or mass_gev").Because("neither is set")
}

// motionOf reads the one quantity of the motion.
func motionOf(request *kinegatev1.ConvertMotionRequest, mass float64, thirds int32) (momentum.Motion, error) {
	switch value := request.GetValue().(type) {
	case *kinegatev1.ConvertMotionRequest_TotalEnergyGev:
		return momentum.MotionFromTotal(mass, value.TotalEnergyGev)
	case *kinegatev1.ConvertMotionRequest_KineticEnergyGev:
		return momentum.MotionFromKinetic(mass, value.KineticEnergyGev)
	case *kinegatev1.ConvertMotionRequest_MomentumGev:
		return momentum.MotionFromMomentum(mass, value.MomentumGev)
	case *kinegatev1.ConvertMotionRequest_Beta:
		if mass == 0 {
			return momentum.Motion{}, massive("beta", value.Beta)
		}
		return momentum.MotionFromBeta(mass, value.Beta)
	case *kinegatev1.ConvertMotionRequest_Gamma:
		if mass == 0 {
			return momentum.Motion{}, massive("gamma", value.Gamma)
		}
		return momentum.MotionFromGamma(mass, value.Gamma)
	case *kinegatev1.ConvertMotionRequest_RigidityGv:
		if thirds == 0 {
			return momentum.Motion{}, fault.Number("rigidity_gv", value.RigidityGv, "a charged particle").
				Because("a neutral particle has no rigidity")
		}
		motion, err := momentum.MotionFromMomentum(mass, value.RigidityGv*charge(thirds))
		return motion, renamed(err, "rigidity_gv", value.RigidityGv)
	case *kinegatev1.ConvertMotionRequest_WavelengthM:
		return lightOf("wavelength_m", mass, value.WavelengthM, momentum.PlanckGeVMetre/value.WavelengthM)
	case *kinegatev1.ConvertMotionRequest_FrequencyHz:
		return lightOf("frequency_hz", mass, value.FrequencyHz, momentum.PlanckGeVSecond*value.FrequencyHz)
	}
	return momentum.Motion{}, fault.New(fault.Invalid, "value", "",
		"total_energy_gev, kinetic_energy_gev, momentum_gev, beta, gamma, rigidity_gv, wavelength_m or frequency_hz").
		Because("none is set")
}

// massive refuses a quantity that says nothing about a massless particle.
func massive(field string, value float64) error {
	return fault.Number(field, value, "a particle with a mass").
		Because("a massless particle moves with light at any energy")
}

// lightOf is the motion of a massless particle by its wavelength or frequency.
func lightOf(field string, mass, value, energy float64) (momentum.Motion, error) {
	if mass != 0 {
		return momentum.Motion{}, fault.Number(field, value, "a massless particle").
			Because("wavelength and frequency are those of light")
	}
	motion, err := momentum.MotionFromMomentum(0, energy)
	return motion, renamed(err, field, value)
}

// renamed puts the field and value of the request in the place of those that follow from
// them; the mass keeps its own.
func renamed(err error, field string, value float64) error {
	if err == nil {
		return nil
	}
	f := *Explain(err)
	f.Violations = append([]Violation(nil), f.Violations...)
	for i := range f.Violations {
		if f.Violations[i].Field != "mass_gev" {
			e := fault.Number(field, value, "> 0 and finite, for an energy within 1e-75..1e75 GeV")
			f.Violations[i] = Violation{Field: e.Field, Value: e.Value, Allowed: e.Allowed, Problem: sentence(e)}
			f.Message = sentence(e)
		}
	}
	return &f
}

// flights gives the times for distances.
func flights(motion *momentum.Motion, distances []float64) ([]*kinegatev1.FlightTime, error) {
	const field, least, largest = "distances_m", 1e-30, 1e30
	if n := len(distances); n > maxMotionValues {
		return nil, fault.New(fault.Invalid, field, strconv.Itoa(n)+" distances", "at most "+strconv.Itoa(maxMotionValues))
	}
	var list []*kinegatev1.FlightTime
	var faults fault.List
	for i, d := range distances {
		if d != 0 && !(d >= least && d <= largest) {
			faults = append(faults, fault.Number(index(field, i), d, "0 or within 1e-30..1e30"))
			continue
		}
		time, delay := motion.Flight(d)
		list = append(list, &kinegatev1.FlightTime{DistanceM: d, TimeS: finite(time), DelayAfterLightS: finite(delay)})
	}
	return list, faults.Err()
}

// cherenkovLights gives the light at refractive indices.
func cherenkovLights(motion *momentum.Motion, charged bool, indices []float64) ([]*kinegatev1.CherenkovLight, error) {
	const field = "refractive_indices"
	if n := len(indices); n > maxMotionValues {
		return nil, fault.New(fault.Invalid, field, strconv.Itoa(n)+" indices", "at most "+strconv.Itoa(maxMotionValues))
	}
	var list []*kinegatev1.CherenkovLight
	for i, n := range indices {
		c, err := motion.Cherenkov(n)
		if err != nil {
			return nil, moved(err, index(field, i))
		}
		m := &kinegatev1.CherenkovLight{RefractiveIndex: n}
		list = append(list, m)
		if !charged {
			continue
		}
		if m.Radiates = c.Radiates; c.Radiates {
			m.AngleRad = &c.Angle
		}
		if !c.Reachable {
			continue
		}
		m.ThresholdBeta = &c.ThresholdBeta
		if motion.Mass > 0 {
			m.ThresholdMomentumGev, m.ThresholdTotalEnergyGev = &c.ThresholdMomentum, &c.ThresholdTotal
			m.ThresholdKineticEnergyGev = &c.ThresholdKinetic
		}
	}
	return list, nil
}
