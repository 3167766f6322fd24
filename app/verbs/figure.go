package verbs

import (
	"errors"
	"io"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"annulet/app/figure"
	"annulet/raytrace"
	"annulet/scenes"
)

// drawing is what the flags of figure say.
type drawing struct {
	set, out []string
	which    int
	workers  int
	json     bool
}

func newFigure(s streams) *cobra.Command {
	var o drawing
	cmd := &cobra.Command{
		Use:   "figure SCENE -o FILE [-o FILE ...]",
		Short: "draw a figure for a paper",
		Long: "Draws what a [[figure]] table of the scene describes (see scene keys): images with\n" +
			"axes and colour bar, line profiles, spectra, visibilities, light curves, cuts and\n" +
			"light paths, alone or in a grid. Without such a table it draws the total intensity;\n" +
			"--set figure.panels='[\"image\", \"line\"]' and the like describe one, too. Files: PDF\n" +
			"and SVG hold lines, text in embedded fonts and each picture as one image; PNG and\n" +
			"TIFF have figure.resolution pixels an inch. All carry the scene (see scene recover).\n" +
			"Beside each file goes a draft of its caption, FILE without its extension and with\n" +
			".caption.txt.",
		Example: "  " + programName() + " figure @first-light -o first-light.pdf\n" +
			"  " + programName() + " figure scene.toml --figure 2 -o fig2.pdf -o fig2.svg",
		Args: takes(1, "one SCENE"),
		RunE: func(cmd *cobra.Command, args []string) error { return drawFigure(cmd, s, o, args[0]) },
	}
	f := cmd.Flags()
	f.StringArrayVarP(&o.out, "output", "o", nil, "`FILE` to write: "+strings.Join(figure.Formats, ", ")+"; repeatable")
	addSet(f, &o.set)
	f.IntVar(&o.which, "figure", 0, "`NUMBER` of the [[figure]] table, counted from 1; needed where there are several")
	f.IntVar(&o.workers, "workers", 0, "tiles traced at a time; 0 means one a processor")
	f.BoolVar(&o.json, "json", false, "print a summary as one JSON document on stdout")
	return cmd
}

// chooseFigure returns the figure that is asked for.
func (o drawing) chooseFigure(scene scenes.Scene) (scenes.Figure, error) {
	n := len(scene.Figures)
	switch {
	case o.which < 0 || o.which > max(n, 1):
		return scenes.Figure{}, refuse("--figure %d: the scene has %d; allowed: 1 to %d", o.which, n, max(n, 1))
	case o.which == 0 && n > 1:
		return scenes.Figure{}, refuse("the scene has %d figures: which? --figure 1 to %d", n, n)
	case n == 0:
		return scenes.PlainFigure(), nil
	}
	return scene.Figures[max(o.which, 1)-1], nil
}

func drawFigure(cmd *cobra.Command, s streams, o drawing, scenePath string) error {
	if err := checkWorkers(o.workers); err != nil {
		return err
	}
	document, err := s.loadScene(scenePath, o.set)
	if err != nil {
		return err
	}
	scene := document.Scene()
	described, err := o.chooseFigure(scene)
	if err != nil {
		return err
	}
	allowed := strings.Join(figure.Formats, ", ")
	if len(o.out) == 0 {
		return refuse("figure needs an output: -o FILE.pdf, say; allowed: %s", allowed)
	}
	var captions []string
	err = checkFiles(o.out, scenePath, func(path string) error {
		if !slices.Contains(figure.Formats, strings.ToLower(filepath.Ext(path))) {
			return refuse("-o %s: extension %q is not that of a figure; allowed: %s", path, filepath.Ext(path), allowed)
		}
		if c := figure.CaptionPath(path); !slices.Contains(captions, c) {
			captions = append(captions, c)
		}
		return nil
	})
	if err != nil {
		return err
	}
	for _, path := range captions {
		if err := checkWritable(path); err != nil {
			return err
		}
	}
	for _, n := range scene.Notes() {
		s.note("%s", n)
	}
	if _, err := raytrace.NewViewIn(scene, document.Dir()); err != nil {
		return usage{err}
	}
	made, err := figure.Make(cmd.Context(), figure.Request{
		Document: document, Figure: described, Workers: o.workers, Measured: reporter(s), Allow: s.confine,
		Begin: func(columns, rows int) (func(raytrace.Progress), func()) {
			shown := newProgress(s.err)
			shown.begin(columns, rows)
			return shown.report, shown.end
		},
	})
	if errors.Is(err, figure.ErrRefused) {
		return usage{err}
	}
	if err != nil {
		return err
	}
	p := made.Provenance(document, Version)
	for _, path := range o.out {
		if err := writeFile(cmd.Context(), path, func(w io.Writer) error { return made.Write(w, path, p) }); err != nil {
			return err
		}
	}
	for _, path := range captions {
		if err := writeFile(cmd.Context(), path, func(w io.Writer) error { _, err := io.WriteString(w, made.Caption); return err }); err != nil {
			return err
		}
	}
	if o.json {
		return writeJSON(s.out, ordered{{"units", ordered{{"width", "mm"}, {"height", "mm"}, {"resolution", "1/inch"}}},
			{"files", o.out}, {"captions", captions}, {"width", number(made.Width)}, {"height", number(made.Height)},
			{"resolution", number(made.Dpi)}, {"caption", made.Caption}, {"numerics", p}, {"not_included", p.NotIncluded}})
	}
	for _, path := range o.out {
		s.note("%s: %.2f x %.2f mm", path, made.Width, made.Height)
	}
	return nil
}
