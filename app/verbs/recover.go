package verbs

import (
	"github.com/spf13/cobra"

	"annulet/app/output"
	"annulet/scenes"
)

func newSceneRecover(s streams) *cobra.Command {
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "recover FILE",
		Short: "print the scene inside any file that Annulet wrote",
		Long: "Prints the scene inside a PNG, TIFF, FITS, NPZ, CSV, ECSV or JSON file that Annulet\n" +
			"wrote, to the byte; render it again for the same numbers.",
		Example: "  " + programName() + " scene recover figure.png > scene.toml",
		Args:    takes(1, "one FILE"),
		RunE: func(_ *cobra.Command, args []string) error {
			text, err := output.Recover(args[0])
			if err != nil {
				return usage{err}
			}
			d, err := scenes.Parse(args[0], text)
			if err != nil { // by another version, perhaps: it is still the user's
				s.note("this version cannot read it: %v", err)
			}
			if asJSON {
				title := ""
				if d != nil {
					title = d.Scene().Title
				}
				return writeJSON(s.out, struct {
					File  string `json:"file"`
					Title string `json:"title"`
					Scene string `json:"scene"`
				}{args[0], title, string(text)})
			}
			_, err = s.out.Write(text)
			return err
		},
	}
	cmd.Flags().BoolVar(&asJSON, "json", false, "print one JSON document on stdout")
	return cmd
}
