package figure

import (
	"fmt"
	"math"
	"strings"

	"annulet/app/output"
	"annulet/scenes"
)

// caption is a draft of the words under the figure, for the author to cut
// down: panels, object, observer, emission, numerics with bounds, and what is
// not included.
func (m *maker) caption(letters bool) string {
	s := m.Scene
	var b strings.Builder
	line := func(format string, args ...any) { fmt.Fprintf(&b, format+"\n", args...) }
	if s.Title != "" {
		line("%s.", strings.TrimSuffix(s.Title, "."))
	}
	for k, note := range m.notes {
		if letters {
			line("(%c) %s.", 'a'+k, note)
		} else {
			line("%s.", strings.ToUpper(note[:1])+note[1:])
		}
	}
	if len(m.over) > 0 {
		line("Over the images: %s.", strings.Join(m.over, "; "))
	}
	line("Object: %s.", object(s))
	o := s.Observer
	at := "at infinity"
	if !math.IsInf(o.Radius, 1) {
		at = fmt.Sprintf("at r = %.6g M", o.Radius)
	}
	line("Observer: %s, %s, inclination %.6g deg, azimuth %.6g deg; position angle of the disk axis %.6g deg.", o.Motion, at, o.Inclination, o.Azimuth, o.PositionAngle)
	for _, e := range s.Emitters {
		line("Emission: %s.", emission(s, e))
	}
	if len(s.Emitters) == 0 {
		line("Emission: none.")
	}
	line("Numerics: light paths at a relative tolerance of %.3g, image orders 0 to %d.", s.Trace.Tolerance, s.Trace.MaxOrder)
	for _, f := range []int{m.frequencies()[0]} {
		p := m.plates[f]
		if p == nil {
			continue
		}
		text := fmt.Sprintf("%d × %d pixels, %d paths", p.Columns, p.Rows, p.Paths)
		if p.WorstBound > 0 {
			text += fmt.Sprintf("; bound on radii %.1e, relative", p.WorstBound)
		}
		if p.WorstAngle > 0 {
			text += fmt.Sprintf("; bound on swept angles %.1e rad", p.WorstAngle)
		}
		line("%s.", text)
		if flux, bound := p.WholeFlux(); flux > 0 {
			line("Flux of the field %.6g (bound %.1e) in units of intensity times M² or sr.", flux, bound)
		}
	}
	line("%s", output.NotIncludedLine(output.NotIncludedIn(s)))
	for _, text := range s.Assumed() {
		line("Assumed: %s.", text)
	}
	return b.String()
}

func object(s scenes.Scene) string {
	text := strings.ReplaceAll(s.Object.Kind, "-", " ")
	if s.Object.Charge > 0 {
		text += fmt.Sprintf(", |Q| = %.4g M", s.Object.Charge)
	}
	if s.Object.Radius > 0 {
		text += fmt.Sprintf(", radius %.6g M", s.Object.Radius)
	}
	if m := s.Object.Mass; m.Given {
		text += ", mass " + measured(m, 1, "solar masses")
	}
	if d := s.Object.Distance; d.Given {
		unit, name := 1e3, "kpc"
		if d.Value >= 1e6 {
			unit, name = 1e6, "Mpc"
		}
		text += ", distance " + measured(d, unit, name)
	}
	if theta, ok := s.ThetaG(); ok {
		text += fmt.Sprintf("; M = GM/c² is %.5g µas on the sky", theta)
	}
	return text
}

func measured(m scenes.Measure, unit float64, name string) string {
	if m.Sigma > 0 {
		return fmt.Sprintf("%.6g ± %.2g %s", m.Value/unit, m.Sigma/unit, name)
	}
	return fmt.Sprintf("%.6g %s", m.Value/unit, name)
}

func emission(s scenes.Scene, e scenes.Emitter) string {
	text := e.Kind
	switch e.Kind {
	case "disk":
		inner := fmt.Sprintf("%.6g M", e.Inner.Radius)
		if e.Inner.Name == "horizon" {
			inner = "the horizon"
		}
		text += fmt.Sprintf(" from %s to %.6g M, %s gas", inner, e.Outer, e.Gas)
		switch e.Profile {
		case "power":
			text += fmt.Sprintf(", emissivity ∝ r^(−%s)", numberList(e.Index))
		default:
			text += ", profile " + e.Profile
		}
		switch {
		case e.OpticalDepth == 0:
			text += ", optically thin"
		case math.IsInf(e.OpticalDepth, 1):
			text += ", optically thick"
		default:
			text += fmt.Sprintf(", optical depth %.4g", e.OpticalDepth)
		}
		text += ", " + e.EmissionAngle
	case "spot":
		text += fmt.Sprintf(" at %.6g M, proper Gaussian sigma %.4g M, contrast %.4g", e.Radius, e.Size, e.Contrast)
	case "surface":
		text += fmt.Sprintf(" with %d caps", len(e.Caps))
	}
	if e.Light != "" {
		text += ", " + e.Light
	}
	if e.Light == "monochromatic" {
		text += fmt.Sprintf(" (spectral index %.4g)", e.SpectralIndex)
	}
	if nu := s.Field.Frequency; len(nu) > 0 && e.Kind == "disk" {
		text += fmt.Sprintf(", at %.5g GHz", nu[0]/1e9)
	}
	return text
}
