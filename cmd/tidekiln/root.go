package main

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"tidekiln/evolve"
	"tidekiln/scenarios"
)

func newRoot() *cobra.Command {
	root := &cobra.Command{
		Use:   "tidekiln",
		Short: "Histories of tidally heated moons and planets",
		Long: `tidekiln steps the orbits, resonances, mantle temperatures and tidal
dissipation of moons or planets together over millions to billions of years,
accounts for every watt, and leaves the history as Parquet tables.`,
		Example: `  tidekiln scenarios list
  tidekiln survey volcanic-cycle
  tidekiln evolve volcanic-cycle`,
		SilenceUsage:  true,
		SilenceErrors: true,
		Version:       evolve.Version(),
		Args:          subcommand,
		RunE:          func(c *cobra.Command, _ []string) error { return c.Help() },
	}
	root.SuggestionsMinimumDistance = 2
	root.SetVersionTemplate("tidekiln {{.Version}}\n")
	root.AddCommand(newEvolve(), newSurvey(), newFigure(), newScenarios(), newVersion())
	return root
}

// complain prints an error the way all of them are printed.
func complain(w io.Writer, err error) {
	text := err.Error()
	if _, many := err.(scenarios.Errors); many || strings.Contains(text, "\n") {
		fmt.Fprintln(w, text)
		return
	}
	fmt.Fprintf(w, "tidekiln: %s\n", text)
}

// edits are the --set and --unset flags of a command.
type edits struct {
	set, unset []string
}

func (e *edits) flags(c *cobra.Command) {
	c.Flags().StringArrayVar(&e.set, "set", nil, "set a key of the scenario, `PATH=VALUE`; may be repeated")
	c.Flags().StringArrayVar(&e.unset, "unset", nil, "remove a key of the scenario, `PATH`; may be repeated")
	err := c.RegisterFlagCompletionFunc("set", func(*cobra.Command, []string, string) ([]string, cobra.ShellCompDirective) {
		var paths []string
		for _, k := range scenarios.Keys() {
			paths = append(paths, k.Path+"=\t"+k.Meaning)
		}
		return paths, cobra.ShellCompDirectiveNoSpace | cobra.ShellCompDirectiveNoFileComp
	})
	if err != nil {
		panic(err) // the flag was declared above
	}
}

// list returns the edits in the order sets, then unsets.
func (e *edits) list() ([]scenarios.Edit, error) {
	var out []scenarios.Edit
	for _, s := range e.set {
		path, value, found := strings.Cut(s, "=")
		if !found || path == "" {
			return nil, request(fmt.Errorf("--set %s: write it as PATH=VALUE, e.g. --set run.span=\"500 Myr\"", s))
		}
		out = append(out, scenarios.Edit{Path: strings.TrimSpace(path), Value: strings.TrimSpace(value)})
	}
	for _, p := range e.unset {
		out = append(out, scenarios.Edit{Path: strings.TrimSpace(p), Unset: true})
	}
	return out, nil
}

// completeScenario offers the shipped scenarios and the .toml files here.
func completeScenario(_ *cobra.Command, args []string, _ string) ([]string, cobra.ShellCompDirective) {
	if len(args) > 0 {
		return nil, cobra.ShellCompDirectiveNoFileComp
	}
	var names []string
	for _, s := range scenarios.Shipped() {
		names = append(names, s.Name+"\t"+s.Title)
	}
	return names, cobra.ShellCompDirectiveDefault
}

// subcommand refuses a word that is no subcommand, and says which is near.
func subcommand(c *cobra.Command, args []string) error {
	if len(args) == 0 {
		return nil
	}
	hint := c.CommandPath() + " --help lists what there is"
	if near := c.SuggestionsFor(args[0]); len(near) > 0 {
		hint = "did you mean " + near[0] + "?"
	}
	return fmt.Errorf("%s has no command %q: %s", c.CommandPath(), args[0], hint)
}
