package main

import (
	"fmt"
	"os"

	"github.com/spf13/cobra"

	"railproof/checks/policy"
	"railproof/report"
)

func newBasis(s *streams) *cobra.Command {
	var table string
	c := &cobra.Command{
		Use:   "basis [CHECK]",
		Short: "Print what a check rests on: formula, severity rule, source",
		Long: `basis without an argument lists the checks. With the name of one it prints its formula, assumptions, severity
rule and published source. With --policy it prints a derating table with the source of each row.`,
		Args:              cobra.MaximumNArgs(1),
		ValidArgsFunction: whileWanted(completeChecks),
		RunE:              func(_ *cobra.Command, args []string) error { return runBasis(s, table, args) },
	}
	c.Flags().StringVar(&table, "policy", "", "print this derating policy, a built-in `NAME` or a CSV file")
	completeFlag(c, "policy", completePolicy)
	return c
}

func runBasis(s *streams, table string, args []string) error {
	colour := s.outStyle().Colour
	switch {
	case table != "" && len(args) > 0:
		return fmt.Errorf("basis takes a check or --policy, not both")
	case table != "":
		p, err := readPolicy(table)
		if err != nil {
			return err
		}
		return report.WritePolicy(s.out, p, colour)
	case len(args) == 0:
		return report.WriteCatalogue(s.out, colour)
	}
	check, ok := report.CheckNamed(args[0])
	if !ok {
		return fmt.Errorf("no check is named %q; `railproof basis` lists them", args[0])
	}
	return report.WriteBasis(s.out, check, colour)
}

func readPolicy(name string) (*policy.Policy, error) {
	if !policy.IsFile(name) {
		return policy.Named(name)
	}
	text, err := os.ReadFile(name)
	if err != nil {
		return nil, err
	}
	return policy.FromCSV(name, text)
}
