package main

import (
	"errors"
	"fmt"
	"io"
	"os"
	"strings"
	"text/tabwriter"

	"github.com/spf13/cobra"

	"tidekiln/evolve"
	"tidekiln/scenarios"
)

func newScenarios() *cobra.Command {
	c := &cobra.Command{
		Use:   "scenarios",
		Short: "List, show and check scenarios; the reference of their keys",
		Args:  subcommand,
		RunE:  func(c *cobra.Command, _ []string) error { return c.Help() },
		Example: `  tidekiln scenarios list
  tidekiln scenarios show volcanic-cycle > my.toml
  tidekiln scenarios check my.toml
  tidekiln scenarios keys viscosity`,
	}
	c.AddCommand(newScenariosList(), newScenariosShow(), newScenariosCheck(), newScenariosKeys())
	return c
}

func newScenariosList() *cobra.Command {
	return &cobra.Command{
		Use: "list", Short: "List the shipped scenarios", Example: "  tidekiln scenarios list", Args: cobra.NoArgs,
		RunE: func(c *cobra.Command, _ []string) error {
			t := tabwriter.NewWriter(c.OutOrStdout(), 0, 0, 2, ' ', 0)
			for _, s := range scenarios.Shipped() {
				fmt.Fprintf(t, "%s\t%s\n", s.Name, s.Title)
			}
			return t.Flush()
		},
	}
}

func newScenariosShow() *cobra.Command {
	var resolved bool
	var run string
	var e edits
	c := &cobra.Command{
		Use:   "show SCENARIO | DATASET",
		Short: "Print a scenario: a shipped one, a file, or that of a dataset",
		Long: `Print a shipped scenario or a file as it was written, or, with --resolved, with
every default filled in. For a dataset, print the resolved scenario that gives
its rows again; write DATASET/ if a shipped scenario has its name.`,
		Example: `  tidekiln scenarios show volcanic-cycle > my.toml
  tidekiln scenarios show runs/strong --run 3f2a90c41b7d6e58`,
		Args:              cobra.ExactArgs(1),
		ValidArgsFunction: completeScenario,
		RunE: func(c *cobra.Command, args []string) error {
			text, err := show(args[0], run, resolved, e)
			if err != nil {
				return request(err)
			}
			_, err = io.WriteString(c.OutOrStdout(), text)
			return err
		},
	}
	e.flags(c)
	c.Flags().BoolVar(&resolved, "resolved", false, "fill in every default")
	c.Flags().StringVar(&run, "run", "", "`ID` of the run in the dataset (default: its only one)")
	return c
}

func show(name, run string, resolved bool, e edits) (string, error) {
	isShipped := false
	for _, s := range scenarios.Shipped() {
		isShipped = isShipped || s.Name == name
	}
	if info, err := os.Stat(name); err == nil && info.IsDir() && !isShipped {
		about, err := evolve.Describe(name)
		if err != nil {
			return "", err
		}
		if run != "" && run != about.RunID {
			return "", fmt.Errorf("%s holds run %s, not %s", name, about.RunID, run)
		}
		return about.Scenario, nil
	}
	if run != "" {
		return "", errors.New("--run chooses a run of a dataset, and " + name + " is no dataset")
	}
	list, err := e.list()
	if err != nil {
		return "", err
	}
	s, err := scenarios.Open(name, list...)
	if err != nil {
		return "", err
	}
	if resolved || len(list) > 0 {
		return s.TOML(), nil
	}
	for _, shipped := range scenarios.Shipped() {
		if shipped.Name == strings.TrimSuffix(name, ".toml") {
			if _, err := os.Stat(name); err != nil {
				return string(shipped.Source), nil
			}
		}
	}
	source, err := os.ReadFile(name)
	return string(source), err
}

func newScenariosCheck() *cobra.Command {
	var e edits
	c := &cobra.Command{
		Use:     "check SCENARIO...",
		Short:   "Check scenarios and report all their mistakes",
		Example: "  tidekiln scenarios check my.toml other.toml",
		Args:    cobra.MinimumNArgs(1),
		RunE: func(c *cobra.Command, args []string) error {
			list, err := e.list()
			if err != nil {
				return err
			}
			bad := 0
			for _, name := range args {
				s, err := scenarios.Open(name, list...)
				var cautions []string
				if err == nil {
					cautions, err = evolve.Check(s)
				}
				if err != nil {
					bad++
					complain(c.ErrOrStderr(), err)
					continue
				}
				fmt.Fprintf(c.OutOrStdout(), "%s: valid, scenario %s\n", name, s.ID())
				for _, caution := range cautions {
					fmt.Fprintf(c.OutOrStdout(), "  caution: %s\n", caution)
				}
			}
			if bad > 0 {
				return &exit{exitRequest, nil}
			}
			return nil
		},
	}
	e.flags(c)
	return c
}

func newScenariosKeys() *cobra.Command {
	return &cobra.Command{
		Use:   "keys [TEXT]",
		Short: "The reference of every key a scenario may hold",
		Example: `  tidekiln scenarios keys
  tidekiln scenarios keys viscosity`,
		Args: cobra.MaximumNArgs(1),
		RunE: func(c *cobra.Command, args []string) error {
			found := 0
			for _, k := range scenarios.Keys() {
				if len(args) > 0 && !strings.Contains(strings.ToLower(k.Path+" "+k.Law+" "+k.Meaning), strings.ToLower(args[0])) {
					continue
				}
				found++
				printKey(c.OutOrStdout(), k)
			}
			if found == 0 {
				return request(fmt.Errorf("no key, law or meaning holds %q: tidekiln scenarios keys lists all", args[0]))
			}
			return nil
		},
	}
}

// printKey writes one entry of the reference.
func printKey(w io.Writer, k scenarios.Reference) {
	kind := k.Kind
	if k.Unit != "" {
		kind += " in " + k.Unit
	}
	switch {
	case k.Default != "":
		kind += ", default " + k.Default
	case k.Required:
		kind += ", required"
	default:
		kind += ", optional"
	}
	fmt.Fprintf(w, "%s\n    %s\n    %s", k.Path, k.Meaning, kind)
	if k.Range != "" {
		fmt.Fprintf(w, "; %s", k.Range)
	}
	if len(k.Choices) > 0 {
		fmt.Fprintf(w, "; one of %s", strings.Join(k.Choices, ", "))
	}
	if k.Fixed {
		fmt.Fprint(w, "; no change may set it")
	}
	fmt.Fprintln(w)
	if k.Law != "" {
		fmt.Fprintf(w, "    where %s\n", k.Law)
	}
	if k.Source != "" {
		fmt.Fprintf(w, "    %s\n", k.Source)
	}
}
