package main

import (
	"fmt"
	"runtime/debug"

	"github.com/spf13/cobra"

	"railproof/checks/parts"
	"railproof/checks/policy"
)

// version is the tool's own; a release build may set it with -ldflags "-X main.version=...".
var version = "0.1.0"

func newVersion(s *streams) *cobra.Command {
	return &cobra.Command{
		Use:   "version",
		Short: "Print the version of the tool, its parts tables and its policies",
		Args:  cobra.NoArgs,
		RunE: func(*cobra.Command, []string) error {
			fmt.Fprintf(s.out, "railproof %s%s\n", version, revision())
			fmt.Fprintf(s.out, "parts tables %s\n", parts.Default().Version())
			for _, name := range policy.Names() {
				p, err := policy.Named(name)
				if err != nil {
					return err
				}
				fmt.Fprintf(s.out, "policy %s\n", p.Version())
			}
			return nil
		},
	}
}

// revision is the commit the binary was built from, where the build knows it.
func revision() string {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return ""
	}
	for _, setting := range info.Settings {
		if setting.Key == "vcs.revision" && len(setting.Value) >= 12 {
			return " (" + setting.Value[:12] + ")"
		}
	}
	return ""
}
