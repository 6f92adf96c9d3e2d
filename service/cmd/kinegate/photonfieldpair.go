package main

import (
	"github.com/spf13/cobra"

	kinegatev1 "example.org/kinegate/proto/kinegate/v1"
	"example.org/kinegate/service/cmd/kinegate/internal/text"
)

// photonFieldPairCommand gives the threshold of a pair in the field of a particle.
func photonFieldPairCommand(p program) *cobra.Command {
	e := newEnvironment(p)
	var target, mass string
	c := &cobra.Command{
		Use:   "field-pair [PARTICLE]",
		Short: "Threshold of a pair made in the field of a nucleus or an electron",
		Long: "field-pair gives the energy of a photon that makes a pair, e- e+ if none is given, in\n" +
			"the field of a target at rest, which takes the recoil and stays whole.",
		Example: `  kinegate photon field-pair --target p
  kinegate photon field-pair mu- --target-mass "193.7 GeV"`,
		Args: usage(cobra.MaximumNArgs(1)),
		RunE: func(c *cobra.Command, args []string) error {
			q := &kinegatev1.FieldPairCreation{Particle: named(args)}
			if (target == "") == (mass == "") {
				return badInput("give one of --target and --target-mass")
			}
			if target != "" {
				q.Target = &kinegatev1.FieldPairCreation_TargetParticle{TargetParticle: target}
			} else {
				x, err := energy("--target-mass", mass)
				if err != nil {
					return err
				}
				q.Target = &kinegatev1.FieldPairCreation_TargetMassGev{TargetMassGev: x}
			}
			_, err := e.photonAnswer(c.Context(), &kinegatev1.DescribePhotonProcessRequest{
				Process: &kinegatev1.DescribePhotonProcessRequest_FieldPair{FieldPair: q},
			}, func(r *kinegatev1.DescribePhotonProcessResponse) error {
				a := r.GetFieldPair()
				e.print("gamma -> %s in the field of a mass of %s at rest", pairNames(a.GetParticle()), gev(a.GetTargetMassGev()))
				t := text.NewTable("", "")
				t.Row("photon at threshold", gev(a.GetPhotonEnergyThresholdGev()))
				t.Row("mass of the pair", gev(2*a.GetMassGev()))
				return t.Write(e.out)
			})
			return err
		},
	}
	e.flags(c)
	f := c.Flags()
	f.StringVar(&target, "target", "", "particle in whose field the pair is made, such as p or e-")
	f.StringVar(&mass, "target-mass", "", "mass of the target, such as that of a nucleus, in place of --target")
	return c
}
