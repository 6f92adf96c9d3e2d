package selection

import (
	"math"

	"example.org/kinegate/kinematics/fault"
	"example.org/kinegate/kinematics/momentum"
)

// beam compiles the beam source.
func (d *drafter) beam() {
	source := d.from.Beam
	if source == nil {
		return
	}
	at := d.at + ".beam"
	if d.reaction == nil {
		if source.Tagged != nil {
			d.timeWindows(at+".tagged", source.Tagged)
		}
		return
	}
	if len(d.reaction.Initial) != 2 {
		d.fault(at, "given", "absent, since the reaction has no two initial particles")
		return
	}
	b := &d.out.beam
	b.mass, b.target = d.reaction.Initial[0].Mass, d.reaction.Initial[1].Mass
	switch {
	case (source.Tagged == nil) == (source.Fixed == nil):
		d.fault(at, "both or neither", "exactly one of tagged and fixed")
	case source.Tagged != nil:
		b.known, b.tagged = true, true
		if !(b.target > 0) {
			d.fault(at+".tagged", d.reaction.Initial[1].Name, "a target that has a mass and can be at rest")
		}
		d.timeWindows(at+".tagged", source.Tagged)
	default:
		b.known = true
		d.fixed(at+".fixed", source.Fixed)
	}
}

// timeWindows compiles the windows on the time of a beam candidate.
func (d *drafter) timeWindows(at string, t *TaggedBeam) {
	if t.Prompt == nil {
		if len(t.SideBands) > 0 {
			d.fault(at+".side_bands", "given", "absent without a prompt window")
		}
		return
	}
	windows := append([]TimeWindow{*t.Prompt}, t.SideBands...)
	for i := range windows {
		field := at + ".prompt"
		if i > 0 {
			field = indexed(at+".side_bands", i-1)
		}
		w := d.timeWindow(field, &windows[i])
		for _, other := range d.out.beam.windows {
			if other.low < w.high && w.low < other.high {
				d.fault(field, fault.Text(w.low)+" to "+fault.Text(w.high), "a window that overlaps no other")
				break
			}
		}
		d.out.beam.windows = append(d.out.beam.windows, w)
	}
}

// timeWindow compiles one window.
func (d *drafter) timeWindow(field string, w *TimeWindow) timeWindow {
	out := timeWindow{low: math.Inf(-1), high: math.Inf(1), weight: 1}
	for _, x := range []struct {
		name string
		from *float64
		to   *float64
	}{{".min_ns", w.MinNS, &out.low}, {".max_ns", w.MaxNS, &out.high}, {".weight", w.Weight, &out.weight}} {
		if x.from != nil {
			*x.to = *x.from
			d.finite(field+x.name, *x.from)
		}
	}
	if !(out.low < out.high) {
		d.fault(field+".max_ns", fault.Text(out.high), "> min_ns = "+fault.Text(out.low))
	}
	return out
}

// finite checks that a number is neither NaN nor infinite.
func (d *drafter) finite(field string, x float64) bool {
	if !finite(x) {
		d.fault(field, fault.Text(x), "a finite number")
	}
	return finite(x)
}

// fixed compiles an initial state that is the same for every event.
func (d *drafter) fixed(at string, s *InitialState) {
	given := 0
	for _, is := range [...]bool{s.BeamOnTarget != nil, s.TwoBeams != nil, s.FourMomenta != nil, s.SqrtSGeV != nil} {
		if is {
			given++
		}
	}
	if given != 1 {
		d.fault(at, "none or several", "exactly one of beam_on_target, two_beams, two_four_momenta, sqrt_s_gev")
		return
	}
	b := &d.out.beam
	var good bool
	switch {
	case s.BeamOnTarget != nil:
		var p float64
		p, good = d.momentum(at+".beam_on_target.beam", b.mass, s.BeamOnTarget)
		if !(b.target > 0) {
			d.fault(at+".beam_on_target", d.reaction.Initial[1].Name, "a target that has a mass and can be at rest")
			good = false
		}
		b.fixed.first = momentum.WithMass(momentum.Three{Z: p}, b.mass)
		b.fixed.second = momentum.Four{E: b.target}
	case s.TwoBeams != nil:
		good = d.twoBeams(at+".two_beams", s.TwoBeams)
	case s.FourMomenta != nil:
		good = d.fourMomenta(at+".two_four_momenta", s.FourMomenta)
	default:
		root := *s.SqrtSGeV
		bodies, err := momentum.TwoBodyMomentum(root, b.mass, b.target)
		if err != nil {
			d.fault(at+".sqrt_s_gev", fault.Text(root), "> 0 and >= "+fault.Text(b.mass+b.target))
			return
		}
		good = true
		b.fixed.first = momentum.WithMass(momentum.Three{Z: bodies.P}, b.mass)
		b.fixed.second = momentum.WithMass(momentum.Three{Z: -bodies.P}, b.target)
	}
	if !good {
		return
	}
	if square := momentum.MassSquared(b.fixed.first, b.fixed.second); square > 0 {
		b.fixed.setBoost(math.Sqrt(square))
	}
	d.reach(at, s)
}

// momentum returns the momentum of a beam of mass m.
func (d *drafter) momentum(at string, m float64, motion *BeamMotion) (float64, bool) {
	given := 0
	var state momentum.Motion
	var err error
	field := at
	if x := motion.TotalEnergyGeV; x != nil {
		given, field = given+1, at+".total_energy_gev"
		state, err = momentum.MotionFromTotal(m, *x)
	}
	if x := motion.KineticEnergyGeV; x != nil {
		given, field = given+1, at+".kinetic_energy_gev"
		state, err = momentum.MotionFromKinetic(m, *x)
	}
	if x := motion.MomentumGeV; x != nil {
		given, field = given+1, at+".momentum_gev"
		state, err = momentum.MotionFromMomentum(m, *x)
	}
	switch {
	case given != 1:
		d.fault(at, "none or several", "exactly one of total_energy_gev, kinetic_energy_gev, momentum_gev")
		return 0, false
	case err != nil:
		d.adopt(field, err)
		return 0, false
	}
	return state.Momentum, true
}

// twoBeams compiles two beams with an angle between them.
func (d *drafter) twoBeams(at string, t *TwoBeams) bool {
	b := &d.out.beam
	p1, first := d.momentum(at+".beam1", b.mass, &t.Beam1)
	p2, second := d.momentum(at+".beam2", b.target, &t.Beam2)
	angle := math.Pi
	if t.AngleRad != nil {
		angle = *t.AngleRad
	}
	if !(angle >= 0 && angle <= math.Pi) {
		d.fault(at+".angle_between_beams_rad", fault.Text(angle), ">= 0 and <= pi")
		return false
	}
	if !first || !second {
		return false
	}
	if angle == math.Pi {
		// Head on exactly: the double pi is not, and cos(pi/2) would leave a momentum across.
		b.fixed.first = momentum.WithMass(momentum.Three{Z: p1}, b.mass)
		b.fixed.second = momentum.WithMass(momentum.Three{Z: -p2}, b.target)
		return true
	}
	b.fixed.first, b.fixed.second = momentum.BeamsAtAngle(b.mass, p1, b.target, p2, angle)
	return true
}

// fourMomenta compiles two given four-momenta. Rounding of the components to doubles
// moves the square of the mass by at most 2 x 2^-53 (E^2 + p^2); twice that is
// allowed, for a caller that rounded in the conversion of units too.
func (d *drafter) fourMomenta(at string, momenta *[2]momentum.Four) bool {
	b := &d.out.beam
	good := true
	for i, mass := range [...]float64{b.mass, b.target} {
		p := &momenta[i]
		field := at + [...]string{".first", ".second"}[i]
		size := float64(p.E*p.E) + p.P.Square()
		if !finite(size) || !(p.E > 0) {
			d.fault(field, fault.Text(p.E), "finite components and an energy > 0")
			good = false
			continue
		}
		if m2 := momentum.MassSquared(*p); !(math.Abs(m2-float64(mass*mass)) <= 0x1p-51*size) {
			d.fault(field, "mass squared "+fault.Text(m2), "on the mass shell of "+d.reaction.Initial[i].Name+", "+fault.Text(mass)+" GeV")
			good = false
		}
	}
	b.fixed.first, b.fixed.second = momenta[0], momenta[1]
	return good
}
