package main

import (
	"fmt"
	"runtime"

	"github.com/spf13/cobra"

	"tidekiln/evolve"
)

func newVersion() *cobra.Command {
	return &cobra.Command{
		Use:     "version",
		Short:   "Print the version, the physics number and the platform",
		Example: "  tidekiln version",
		Args:    cobra.NoArgs,
		RunE: func(c *cobra.Command, _ []string) error {
			_, err := fmt.Fprintf(c.OutOrStdout(), "tidekiln %s\nphysics %d\n%s, %s\n", evolve.Version(), evolve.Physics, evolve.Platform(), runtime.Version())
			return err
		},
	}
}
