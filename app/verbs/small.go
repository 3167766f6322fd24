package verbs

import (
	"fmt"
	"runtime"
	"slices"
	"strings"

	"github.com/spf13/cobra"
)

func newVersion(s streams) *cobra.Command {
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "version",
		Short: "print the version",
		Args:  takes(0, ""),
		RunE: func(*cobra.Command, []string) error {
			if asJSON {
				return writeJSON(s.out, struct {
					Version  string `json:"version"`
					Go       string `json:"go"`
					Platform string `json:"platform"`
				}{Version, runtime.Version(), runtime.GOOS + "/" + runtime.GOARCH})
			}
			_, err := fmt.Fprintf(s.out, "annulet %s (%s, %s/%s)\n", Version, runtime.Version(), runtime.GOOS, runtime.GOARCH)
			return err
		},
	}
	cmd.Flags().BoolVar(&asJSON, "json", false, "print one JSON document on stdout")
	return cmd
}

// shells are those that newCompletion knows.
var shells = []string{"bash", "zsh", "fish", "powershell"}

func newCompletion(s streams) *cobra.Command {
	allowed := strings.Join(shells, ", ")
	return &cobra.Command{
		Use:       "completion SHELL",
		Short:     "print the completion script of a shell",
		Long:      "Prints the script that completes verbs and flags, for " + allowed + ".",
		Example:   "  source <(" + programName() + " completion bash)",
		ValidArgs: shells,
		Args: func(cmd *cobra.Command, args []string) error {
			if err := takes(1, "the name of one shell ("+allowed+")")(cmd, args); err != nil {
				return err
			}
			if !slices.Contains(shells, args[0]) {
				return refuse("no completion for %q; allowed: %s", args[0], allowed)
			}
			return nil
		},
		RunE: func(cmd *cobra.Command, args []string) error {
			root := cmd.Root()
			switch args[0] {
			case "bash":
				return root.GenBashCompletionV2(s.out, true)
			case "zsh":
				return root.GenZshCompletion(s.out)
			case "fish":
				return root.GenFishCompletion(s.out, true)
			}
			return root.GenPowerShellCompletionWithDesc(s.out)
		},
	}
}
