package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"example.org/kinegate/kinematics"
	"example.org/kinegate/kinematics/particle"
)

// versionCommand prints what determines every number that the program gives.
func versionCommand(p program) *cobra.Command {
	return &cobra.Command{
		Use:   "version",
		Short: "Print the versions of the program, its numerics and its particle table",
		Args:  usage(cobra.NoArgs),
		RunE: func(*cobra.Command, []string) error {
			_, err := fmt.Fprintf(p.out, "kinegate %s\nnumerics %d\nparticle table %s\n",
				version(), kinematics.NumericsVersion, particle.StandardVersion)
			if err != nil {
				return fmt.Errorf("printing the version: %w", err)
			}
			return nil
		},
	}
}
