package output

import (
	"encoding/json"
	"fmt"
	"slices"
	"strings"

	"annulet/app/files"
	"annulet/raytrace"
	"annulet/scenes"
)

// Provenance is what every file says about where it comes from.
type Provenance struct {
	Title      string  `json:"title,omitempty"`
	Version    string  `json:"version"`     // of the program
	Tolerance  float64 `json:"tolerance"`   // of paths, relative
	MaxOrder   int     `json:"max_order"`   // image orders are 0 to this
	WorstBound float64 `json:"worst_bound"` // on r of any crossing shown, relative
	WorstAngle float64 `json:"worst_angle"` // on the swept angle of any path shown that ends on star or sky, rad
	Paths      int     `json:"paths"`
	Integrated int     `json:"integrated"` // of these, integrated one by one
	// Flux is that of the field by image order, in units of intensity times
	// M² or sr, and FluxBound its bound; nil where pixels are their middles.
	Flux        []float64 `json:"flux,omitempty"`
	FluxBound   []float64 `json:"flux_bound,omitempty"`
	NotIncluded []string  `json:"not_included"`
	Assumed     []string  `json:"assumed,omitempty"`
	Audit       string    `json:"audit,omitempty"` // its summary, if one was run
	Scene       string    `json:"-"`               // the text of the file
}

// Version is that of the programs.
const Version = "0.1.0"

// NotIncluded is what the model leaves out.
var NotIncluded = []string{"returning radiation", "self-occultation by thickness", "scattering"}

// NotIncludedIn is that and the effects which the scene leaves out.
func NotIncludedIn(s scenes.Scene) []string {
	return append(slices.Clone(NotIncluded), s.Trace.LeftOut()...)
}

// NotIncludedLine says for people what is not included.
func NotIncludedLine(all []string) string { return "Not included: " + strings.Join(all, ", ") + "." }

// NewProvenance gathers it; plate tells counts and bounds, and may be nil
// while they are not known.
func NewProvenance(d *scenes.Document, version string, plate *raytrace.Plate) Provenance {
	s := d.Scene()
	p := Provenance{
		Title: s.Title, Version: version, Tolerance: s.Trace.Tolerance, MaxOrder: s.Trace.MaxOrder,
		NotIncluded: NotIncludedIn(s), Assumed: s.Assumed(), Scene: string(d.Text()),
	}
	if plate != nil {
		p.WorstBound, p.WorstAngle, p.Paths, p.Integrated = plate.WorstBound, plate.WorstAngle, plate.Paths, plate.Integrated
		p.Flux, p.FluxBound = plate.Flux, plate.FluxBound
	}
	return p
}

// Keywords of the texts in a PNG.
const (
	sceneKeyword    = "Annulet scene"
	numericsKeyword = "Annulet numerics"
)

// WholeFlux is the sum over orders, and its bound.
func (p Provenance) WholeFlux() (flux, bound float64) {
	return (&raytrace.Plate{Flux: p.Flux, FluxBound: p.FluxBound}).WholeFlux()
}

// JSON is all of it but the scene, on one line.
func (p Provenance) JSON() string {
	text, err := json.Marshal(p)
	if err != nil {
		panic(err) // numbers are finite, texts are texts
	}
	return string(text)
}

// Lines says the same for people.
func (p Provenance) Lines() []string {
	lines := []string{
		fmt.Sprintf("Annulet %s, light paths at a relative tolerance of %g", p.Version, p.Tolerance),
		NotIncludedLine(p.NotIncluded),
	}
	if p.Paths > 0 {
		lines = append(lines, fmt.Sprintf("%d paths; worst bound on r %.1e relative, on swept angles %.1e rad", p.Paths, p.WorstBound, p.WorstAngle))
	}
	if p.Flux != nil {
		flux, bound := p.WholeFlux()
		lines = append(lines, fmt.Sprintf("flux of the field %.7g, bound %.1e, in units of intensity times M2 or sr", flux, bound))
	}
	for _, text := range p.Assumed {
		lines = append(lines, "Assumed: "+text+".")
	}
	if p.Audit != "" {
		lines = append(lines, "Audit: "+p.Audit)
	}
	return lines
}

// PNGTexts are the texts of a picture.
func (p Provenance) PNGTexts() []files.Text {
	return []files.Text{
		{Keyword: "Title", Value: p.Title},
		{Keyword: "Software", Value: "Annulet " + p.Version},
		{Keyword: "Comment", Value: NotIncludedLine(p.NotIncluded)},
		{Keyword: numericsKeyword, Value: p.JSON()},
		{Keyword: sceneKeyword, Value: p.Scene},
	}
}
