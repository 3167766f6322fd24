package verbs

import (
	"context"
	"errors"
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"

	"annulet/raytrace"
	"annulet/scenes"
)

// The sample that audit draws by default, and render with --audit.
const (
	auditSamples = 2000
	auditSeed    = 1
	maxSamples   = 10_000_000
)

func newAudit(s streams) *cobra.Command {
	var set []string
	var samples int
	var seed uint64
	var out string
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "audit SCENE",
		Short: "trace a sample of an image's paths by closed form and tell the differences",
		Long: "Draws pixels of the scene's image, follows the path of each pixel's centre as\n" +
			"render does, and compares radius, redshift factor, delay and intensity with\n" +
			"closed forms: elliptic integrals, and quadrature for the delay. The last lines are\n" +
			"a paragraph for a paper's methods section.",
		Example: "  " + programName() + " audit @first-light --samples 2000 --seed 1 -o check.json",
		Args:    takes(1, "one SCENE"),
		RunE: func(cmd *cobra.Command, args []string) error {
			if samples < 1 || samples > maxSamples {
				return refuse("--samples %d: allowed: 1 to %d", samples, maxSamples)
			}
			d, err := s.loadScene(args[0], set)
			if err != nil {
				return err
			}
			if out != "" {
				if err := checkWritable(out); err != nil {
					return err
				}
			}
			note, err := audit(cmd.Context(), d, samples, seed)
			if err != nil {
				return err
			}
			if out != "" {
				if err := writeFile(cmd.Context(), out, func(w io.Writer) error { return writeJSON(w, note) }); err != nil {
					return err
				}
			}
			if asJSON {
				return writeJSON(s.out, note)
			}
			return note.print(s.out)
		},
	}
	f := cmd.Flags()
	addSet(f, &set)
	f.IntVar(&samples, "samples", auditSamples, "how many pixels to draw")
	f.Uint64Var(&seed, "seed", auditSeed, "of the draw")
	f.StringVarP(&out, "output", "o", "", "JSON `FILE` for the check note")
	f.BoolVar(&asJSON, "json", false, "print one JSON document on stdout")
	return cmd
}

// checkNote is what an audit finds.
type checkNote struct {
	Scene     string            `json:"scene"` // first, where scene recover looks
	Units     map[string]string `json:"units"`
	Title     string            `json:"title"`
	Version   string            `json:"version"`
	Tolerance number            `json:"tolerance"`
	Samples   int               `json:"samples"`
	Seed      uint64            `json:"seed"`
	Crossings int               `json:"crossings"`
	Missed    int               `json:"missed"`
	Shared    int               `json:"shared"`
	R         auditRow          `json:"r"`
	G         auditRow          `json:"g"`
	Delay     auditRow          `json:"delay"`
	Angle     auditRow          `json:"angle"`
	Flux      auditRow          `json:"flux"`
	Text      string            `json:"text"`
}

// auditRow is null where nothing was compared.
type auditRow struct {
	Worst    number `json:"worst"`
	Median   number `json:"median"`
	Compared int    `json:"compared"`
}

func audit(ctx context.Context, d *scenes.Document, samples int, seed uint64) (*checkNote, error) {
	scene := d.Scene()
	view, err := raytrace.NewViewIn(scene, d.Dir())
	if err != nil {
		return nil, usage{err}
	}
	a, err := view.Audit(ctx, samples, seed)
	if errors.Is(err, raytrace.ErrNoAudit) {
		return nil, usage{err}
	}
	if err != nil {
		return nil, err
	}
	of := func(d raytrace.Difference) auditRow {
		return auditRow{number(d.Worst), number(d.Median), d.Compared}
	}
	n := &checkNote{
		Units: map[string]string{
			"samples": "count, pixels drawn", "crossings": "count, compared", "missed": "count, on one side only: paths that graze a rim",
			"shared": "count, paths from shared orbits; the others were integrated one by one",
			"r":      "relative, on the disk plane", "g": "relative", "delay": "M", "angle": "rad, place on star or sky", "flux": "of a pixel, relative to the brightest one drawn",
			"tolerance": "relative",
		},
		Scene: string(d.Text()), Title: scene.Title, Version: Version, Tolerance: number(scene.Trace.Tolerance), Samples: samples, Seed: seed,
		Crossings: a.Crossings, Missed: a.Missed, Shared: a.Shared,
		R: of(a.R), G: of(a.G), Delay: of(a.Delay), Angle: of(a.Angle), Flux: of(a.Intensity),
	}
	n.Text = n.paragraph()
	return n, nil
}

// paragraph is fit for a paper's methods section.
func (n *checkNote) paragraph() string {
	var parts []string
	add := func(d auditRow, what, unit string) {
		if d.Compared > 0 {
			parts = append(parts, fmt.Sprintf("%s by at most %.1e%s (median %.1e)", what, float64(d.Worst), unit, float64(d.Median)))
		}
	}
	add(n.R, "in radius", " relative")
	add(n.Angle, "in the place on the star or the sky", " rad")
	add(n.G, "in redshift factor", " relative")
	add(n.Delay, "in delay", " GM/c^3")
	add(n.Flux, "in intensity", " of the brightest pixel drawn")
	text := fmt.Sprintf("Light paths were computed with Annulet %s at a relative tolerance of %.0e. "+
		"For %d pixels drawn at random (seed %d) the path of the pixel's centre was traced again by closed form (elliptic integrals; delays by quadrature). ",
		n.Version, float64(n.Tolerance), n.Samples, n.Seed)
	if len(parts) == 0 {
		text += "None of these paths meets anything that shines."
	} else {
		text += fmt.Sprintf("In %d crossings the two differ %s; %d were found by one of them only.", n.Crossings, strings.Join(parts, ", "), n.Missed)
	}
	return text + " This tests the light paths in the stated metric, not the emission model."
}

// summary is one line, for the files of an image.
func (n *checkNote) summary() string {
	worst := n.R
	what := "r, relative"
	if n.R.Compared == 0 {
		worst, what = n.Angle, "place on star or sky, rad"
	}
	return fmt.Sprintf("%d paths (seed %d) against closed form: worst difference in %s %.1e, in g %.1e", n.Samples, n.Seed, what, float64(worst.Worst), float64(n.G.Worst))
}

func (n *checkNote) print(w io.Writer) error {
	var b strings.Builder
	fmt.Fprintf(&b, "%-24s  %10s  %10s  %s\n", "difference", "worst", "median", "compared")
	for _, row := range []struct {
		name string
		d    auditRow
	}{{"r, relative", n.R}, {"place on star, sky [rad]", n.Angle}, {"g, relative", n.G}, {"delay [M]", n.Delay}, {"flux of a pixel", n.Flux}} {
		if row.d.Compared > 0 {
			fmt.Fprintf(&b, "%-24s  %10.1e  %10.1e  %d\n", row.name, float64(row.d.Worst), float64(row.d.Median), row.d.Compared)
		}
	}
	fmt.Fprintf(&b, "\n%s\n", n.Text)
	_, err := io.WriteString(w, b.String())
	return err
}
