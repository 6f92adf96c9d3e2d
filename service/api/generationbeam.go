package api

import (
	"strconv"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/generation"
	"example.org/kinegate/kinematics/momentum"
	"example.org/kinegate/kinematics/momentum/breakup"
	"example.org/kinegate/kinematics/particle"
	"example.org/kinegate/kinematics/photon"
	"example.org/kinegate/kinematics/reaction"
	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
)

// initialState converts the initial state of the first channel's particles.
func (g *generationForm) initialState(path string, m *kinegatev1.GenerationInitialState) {
	r := g.first
	if m == nil {
		if !r.IsDecay() {
			g.need(path, "", "beam_on_target, two_beams or total; only a decay needs none")
			return
		}
		g.config.Initial = generation.Total{SqrtSGeV: r.Initial[0].Mass}
		return
	}
	if _, total := m.GetKind().(*kinegatev1.GenerationInitialState_Total); r.IsDecay() && m.GetKind() != nil && !total {
		g.need(path, "", "total, or nothing, for a decay")
		return
	}
	switch kind := m.GetKind().(type) {
	case *kinegatev1.GenerationInitialState_BeamOnTarget:
		g.onTarget(path+".beam_on_target", r, kind.BeamOnTarget)
	case *kinegatev1.GenerationInitialState_TwoBeams:
		here := path + ".two_beams"
		g.move("initial.first.mass_gev", here+".beam1")
		g.move("initial.second.mass_gev", here+".beam2")
		g.move("initial.angle_rad", here+".angle_between_beams_rad")
		first := g.spectrum("initial.first.spectrum", here+".beam1", kind.TwoBeams.GetBeam1(), &r.Initial[0])
		second := g.spectrum("initial.second.spectrum", here+".beam2", kind.TwoBeams.GetBeam2(), &r.Initial[1])
		g.config.Initial = generation.CollidingBeams{
			First:    generation.Beam{MassGeV: r.Initial[0].Mass, Spectrum: first},
			Second:   generation.Beam{MassGeV: r.Initial[1].Mass, Spectrum: second},
			AngleRad: angleOf(kind.TwoBeams.AngleBetweenBeamsRad != nil, kind.TwoBeams.GetAngleBetweenBeamsRad()),
		}
	case *kinegatev1.GenerationInitialState_Total:
		here := path + ".total"
		g.move("initial.sqrt_s_gev", here+".sqrt_s_gev")
		g.move("initial.momentum", here+".px_gev")
		total := generation.Total{SqrtSGeV: kind.Total.GetSqrtSGev(), Momentum: momentum.Three{
			X: kind.Total.GetPxGev(), Y: kind.Total.GetPyGev(), Z: kind.Total.GetPzGev(),
		}}
		if kind.Total.SqrtSGev == nil {
			if !r.IsDecay() {
				g.need(here+".sqrt_s_gev", "", "an energy; only a decay needs none")
			}
			total.SqrtSGeV = r.Initial[0].Mass
		}
		g.config.Initial = total
	default:
		g.need(path, "empty", "beam_on_target, two_beams or total")
	}
}

// onTarget converts a beam on a target.
func (g *generationForm) onTarget(path string, r *reaction.Reaction, m *kinegatev1.SpectrumOnTarget) {
	g.move("initial.target_mass_gev", path)
	g.move("initial.beam.mass_gev", path+".beam")
	state := generation.FixedTarget{
		Beam: generation.Beam{
			MassGeV: r.Initial[0].Mass, Spectrum: g.spectrum("initial.beam.spectrum", path+".beam", m.GetBeam(), &r.Initial[0]),
		},
		TargetMassGeV: r.Initial[1].Mass,
	}
	if bound := m.GetBoundNucleon(); bound != nil {
		state.Motion = g.fermiGas(path+".bound_nucleon", r, bound)
	}
	g.config.Initial = state
}

// fermiGas converts a bound target.
func (g *generationForm) fermiGas(path string, r *reaction.Reaction, m *kinegatev1.BoundNucleon) *generation.FermiGas {
	g.move("initial.motion", path)
	g.move("initial.motion.nucleus_mass_gev", path+".nucleus")
	g.move("initial.motion.spectator_mass_gev", path+".nucleus")
	nucleus, err := g.table.Named(m.GetNucleus())
	if err != nil {
		g.found(err, at(path+".nucleus"))
		return nil
	}
	q, err := reaction.BoundNucleon(g.table, r, nucleus, m.GetFermiMomentumGev())
	if err != nil {
		g.found(err, within(path))
		return nil
	}
	return &generation.FermiGas{
		FermiMomentumGeV: m.GetFermiMomentumGev(), NucleusMassGeV: q.Nucleus.Mass,
		SpectatorMassGeV: q.Spectator.Mass, SpectatorNumber: q.Spectator.Number,
	}
}

// polarisation converts the polarisation of the first beam.
func (g *generationForm) polarisation(path string, m *kinegatev1.BeamPolarisation) {
	if m == nil {
		return
	}
	if len(g.first.Initial) != 2 || !isPhoton(&g.first.Initial[0]) {
		g.need(path, "given", "absent, as the first initial particle is not gamma")
		return
	}
	g.config.Polarisation = generation.Polarisation{
		Linear: m.GetLinearDegree(), PlaneRad: m.GetPlaneRad(), Circular: m.GetCircularDegree(),
	}
}

// spectrum converts the spectrum of a beam of the particle; the core has it at a path of
// its own. It is never nil: faults of a missing one are noted.
func (g *generationForm) spectrum(from, path string, m *kinegatev1.BeamSpectrum, p *particle.Particle) generation.Spectrum {
	// What is wrong already is not checked again.
	broken := generation.Fixed{EnergyGeV: 1 + p.Mass}
	switch kind := m.GetKind().(type) {
	case *kinegatev1.BeamSpectrum_Fixed:
		here := path + ".fixed"
		g.move(from+".energy_gev", here)
		total, ok := g.totalEnergy(here, kind.Fixed, p.Mass)
		if !ok {
			return broken
		}
		return generation.Fixed{EnergyGeV: total}
	case *kinegatev1.BeamSpectrum_Even:
		here := path + ".even"
		g.move(from+".min_gev", here+".min_gev")
		g.move(from+".max_gev", here+".max_gev")
		even := generation.Flat{LowGeV: kind.Even.GetMinGev(), HighGeV: kind.Even.GetMaxGev()}
		if even.LowGeV > 0 && !(even.HighGeV > even.LowGeV) {
			g.faults = append(g.faults, fault.Number(here+".max_gev", even.HighGeV, "> min_gev and finite"))
			return broken
		}
		return even
	case *kinegatev1.BeamSpectrum_Bremsstrahlung:
		here := path + ".bremsstrahlung"
		g.move(from, here)
		g.photonBeam(here, p)
		b := generation.Bremsstrahlung{
			ElectronGeV: kind.Bremsstrahlung.GetElectronGev(),
			LowGeV:      kind.Bremsstrahlung.GetMinGev(), HighGeV: kind.Bremsstrahlung.GetMaxGev(),
			CompleteScreening: kind.Bremsstrahlung.GetCompleteScreening(),
		}
		n := kind.Bremsstrahlung.GetChannelCount()
		switch {
		case n < 0 || n > maxPoints:
			g.need(here+".channel_count", strconv.FormatInt(n, 10), "0 to "+strconv.Itoa(maxPoints))
		case n > 0 && b.LowGeV > 0 && b.LowGeV < b.HighGeV && b.HighGeV <= b.ElectronGeV:
			return b.Channels(int(n))
		}
		return b
	case *kinegatev1.BeamSpectrum_Histogram:
		here := path + ".histogram"
		g.move(from, here)
		if n := len(kind.Histogram.GetEdgesGev()); n > maxPoints {
			g.need(here+".edges_gev", strconv.Itoa(n)+" edges", "at most "+strconv.Itoa(maxPoints))
			return broken
		}
		return generation.Histogram{EdgesGeV: kind.Histogram.GetEdgesGev(), Contents: kind.Histogram.GetContents()}
	case *kinegatev1.BeamSpectrum_Backscatter:
		here := path + ".backscatter"
		g.move(from, here)
		g.photonBeam(here, p)
		if b, ok := g.backscatter(here, kind.Backscatter); ok {
			return b
		}
		return broken
	}
	g.need(path, "empty", "fixed, even, bremsstrahlung, histogram or backscatter")
	return broken
}

// photonBeam refuses spectra of photons for other particles.
func (g *generationForm) photonBeam(path string, p *particle.Particle) {
	if !isPhoton(p) {
		g.need(path, p.Name, "only for a beam of gamma")
	}
}

// totalEnergy converts the motion of a particle of mass m.
func (g *generationForm) totalEnergy(path string, motion *kinegatev1.BeamMotion, m float64) (float64, bool) {
	known := len(g.faults)
	given := g.motionOf(path, motion)
	if len(g.faults) > known {
		return 0, false
	}
	moving, err := motionOfBody(breakup.Body{Mass: m, Given: given.Given, Value: given.Value})
	if err != nil {
		g.found(err, at(path))
		return 0, false
	}
	return moving.Total, true
}

// backscatter converts the spectrum of backscattered light.
func (g *generationForm) backscatter(path string, m *kinegatev1.BackscatterSpectrum) (generation.LaserBackscatter, bool) {
	var b generation.LaserBackscatter
	name := m.GetParticle()
	if name == "" {
		name = "e-"
	}
	lepton, err := g.table.Named(name)
	switch {
	case err != nil:
		g.found(err, at(path+".particle"))
		return b, false
	case !isChargedLepton(&lepton):
		g.need(path+".particle", name, "e-, mu- or tau-, of either charge")
		return b, false
	}
	total, ok := g.totalEnergy(path+".beam", m.GetBeam(), lepton.Mass)
	if !ok {
		return b, false
	}
	b = generation.LaserBackscatter{
		BeamGeV: total, MassGeV: lepton.Mass, LightGeV: m.GetLightEnergyGev(),
		AngleRad: angleOf(m.AngleBetweenBeamsRad != nil, m.GetAngleBetweenBeamsRad()),
		LowGeV:   m.GetMinGev(), HighGeV: m.GetMaxGev(),
	}
	if _, err := photon.NewBackscatter(b.BeamGeV, b.MassGeV, b.LightGeV, b.AngleRad); err != nil {
		g.found(err, func(field string) string {
			if field == corePhotonEnergy {
				field = "light_energy_gev"
			}
			return join(path, field)
		})
		return b, false
	}
	if b.LowGeV < 0 || b.HighGeV < 0 {
		g.faults = append(g.faults, fault.Number(path+".min_gev", min(b.LowGeV, b.HighGeV), ">= 0"))
	}
	return b, true
}
