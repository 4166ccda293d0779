package main

import (
	"fmt"
	"os"

	"github.com/spf13/cobra"

	"railproof/checks/parts"
	"railproof/report"
)

func newParts(s *streams) *cobra.Command {
	var file string
	c := &cobra.Command{
		Use:   "parts [TYPE]",
		Short: "Print the built-in ratings, each with its source",
		Long: `parts without an argument lists the types. With a type, in any spelling a netlist may use, it prints the row that
the type is recognised as: every rating with its condition, its source, and whether it was read there or is from memory.`,
		Args:              cobra.MaximumNArgs(1),
		ValidArgsFunction: whileWanted(completeParts),
		RunE:              func(_ *cobra.Command, args []string) error { return runParts(s, file, args) },
	}
	c.Flags().StringVar(&file, "parts", "", "ratings of your own, a CSV `FILE`")
	completeFlag(c, "parts", completeFiles(".csv"))
	return c
}

func runParts(s *streams, file string, args []string) error {
	table := parts.Default()
	if file != "" {
		text, err := os.ReadFile(file)
		if err != nil {
			return err
		}
		if table, err = parts.Load(file, text); err != nil {
			return err
		}
	}
	colour := s.outStyle().Colour
	if len(args) == 0 {
		return report.WritePartTypes(s.out, table, colour)
	}
	row, ok := table.Find(args[0])
	if !ok {
		return fmt.Errorf("no row for type %q; `railproof parts` lists the types", args[0])
	}
	return report.WritePart(s.out, row, colour)
}
