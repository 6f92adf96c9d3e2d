package main

import (
	"strings"

	"github.com/spf13/cobra"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/quantity"
)

// initialFlags are the flags that say how the initial particles of a reaction move.
type initialFlags struct {
	beam, beamKinetic, beamMomentum    string
	beam2, beam2Kinetic, beam2Momentum string
	angle, sqrtS                       string
}

// add adds the flags.
func (i *initialFlags) add(c *cobra.Command) {
	f := c.Flags()
	f.StringVar(&i.beam, "beam", "", `total energy of the beam, such as "1.2 GeV"; for a photon also its wavelength, such as "351.1 nm"`)
	f.StringVar(&i.beamKinetic, "beam-kinetic", "", "kinetic energy of the beam, in place of --beam")
	f.StringVar(&i.beamMomentum, "beam-momentum", "", "momentum of the beam, in place of --beam")
	f.StringVar(&i.beam2, "beam2", "", "total energy of a second beam, in place of a target at rest")
	f.StringVar(&i.beam2Kinetic, "beam2-kinetic", "", "kinetic energy of a second beam")
	f.StringVar(&i.beam2Momentum, "beam2-momentum", "", "momentum of a second beam")
	f.StringVar(&i.angle, "angle", "", `angle between the directions of the two beams, such as "10 deg"; head on if not given`)
	f.StringVar(&i.sqrtS, "sqrt-s", "", "energy in the centre-of-mass frame, in place of beams")
}

// initialState reads the flags; nil where none was given.
func (i *initialFlags) initialState(reaction string) (*kinegatev1.InitialState, error) {
	left, _, _ := strings.Cut(reaction, "->")
	names := strings.Fields(left)
	photon := func(k int) bool { return k < len(names) && names[k] == "gamma" }
	beam1, err := motion("--beam", i.beam, i.beamKinetic, i.beamMomentum, photon(0))
	if err != nil {
		return nil, err
	}
	beam2, err := motion("--beam2", i.beam2, i.beam2Kinetic, i.beam2Momentum, photon(1))
	if err != nil {
		return nil, err
	}
	switch {
	case i.sqrtS != "" && (beam1 != nil || beam2 != nil || i.angle != ""):
		return nil, badInput("--sqrt-s stands in place of beams; give one or the other")
	case i.sqrtS != "":
		sqrtS, err := energy("--sqrt-s", i.sqrtS)
		if err != nil {
			return nil, err
		}
		return &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_SqrtSGev{SqrtSGev: sqrtS}}, nil
	case beam1 == nil && (beam2 != nil || i.angle != ""):
		return nil, badInput("--beam2 and --angle need --beam")
	case beam1 == nil:
		return nil, nil //nolint:nilnil // no initial state is an answer: only the threshold is asked for
	case beam2 == nil && i.angle != "":
		return nil, badInput("--angle needs --beam2: a target at rest has no direction")
	case beam2 == nil:
		return &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_BeamOnTarget{
			BeamOnTarget: &kinegatev1.BeamOnTarget{Beam: beam1},
		}}, nil
	}
	two := &kinegatev1.TwoBeams{Beam1: beam1, Beam2: beam2}
	if i.angle != "" {
		angle, err := quantity.Parse(i.angle, quantity.Angle)
		if err != nil {
			return nil, badInput("--angle: %w", err)
		}
		two.AngleBetweenBeamsRad = &angle
	}
	return &kinegatev1.InitialState{Kind: &kinegatev1.InitialState_TwoBeams{TwoBeams: two}}, nil
}

// required is initialState where one must be given.
func (i *initialFlags) required(reaction string) (*kinegatev1.InitialState, error) {
	state, err := i.initialState(reaction)
	if err == nil && state == nil {
		return nil, badInput("say how the initial particles move: --beam, --beam-kinetic or --beam-momentum, with the same\n" +
			"of --beam2 for a second beam in place of a target at rest; or --sqrt-s")
	}
	return state, err
}

// motion reads the three flags of one beam; nil where none was given.
func motion(flag, total, kinetic, momentum string, photon bool) (*kinegatev1.BeamMotion, error) {
	given := 0
	for _, s := range []string{total, kinetic, momentum} {
		if s != "" {
			given++
		}
	}
	switch {
	case given == 0:
		return nil, nil //nolint:nilnil // a beam that is not given
	case given > 1:
		return nil, badInput("%s, %s-kinetic and %s-momentum say the same thing; give one", flag, flag, flag)
	case total != "" && photon:
		x, err := quantity.ParsePhotonEnergy(total)
		if err != nil {
			return nil, badInput("%s: %w", flag, err)
		}
		return &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_TotalEnergyGev{TotalEnergyGev: x}}, nil
	case total != "":
		x, err := energy(flag, total)
		return &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_TotalEnergyGev{TotalEnergyGev: x}}, err
	case kinetic != "":
		x, err := energy(flag+"-kinetic", kinetic)
		return &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_KineticEnergyGev{KineticEnergyGev: x}}, err
	}
	x, err := energy(flag+"-momentum", momentum)
	return &kinegatev1.BeamMotion{Value: &kinegatev1.BeamMotion_MomentumGev{MomentumGev: x}}, err
}

// energy reads a flag that is an energy, momentum or mass.
func energy(flag, value string) (float64, error) {
	x, err := quantity.Parse(value, quantity.Energy)
	if err != nil {
		return 0, badInput("%s: %w", flag, err)
	}
	return x, nil
}
