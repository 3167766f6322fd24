package scenes

import (
	"bytes"
	"fmt"
	"math"
	"strconv"
	"strings"
	"text/tabwriter"
)

// Format returns a complete text of the scene, every default written out.
// Parsing it gives an Equal scene; numbers come back to the last bit.
func Format(s Scene) []byte {
	var b bytes.Buffer
	w := writer{tabwriter.NewWriter(&b, 0, 0, 1, ' ', 0)}
	w.key("schema", strconv.Itoa(schema))
	w.key("title", quote(s.Title))

	w.header("[object]")
	w.key("kind", quote(s.Object.Kind))
	switch s.Object.Kind {
	case blackHole:
		w.quantity("charge", s.Object.Charge, "M")
	case star:
		w.quantity("radius", s.Object.Radius, "M")
		w.key("interior", quote(s.Object.Interior))
	case shell:
		w.quantity("radius", s.Object.Radius, "M")
	}
	w.measure("mass", s.Object.Mass, "Msun")
	w.measure("distance", s.Object.Distance, "Mpc", "kpc", "pc")
	w.measure("theta_g", s.Object.ThetaG, "uas")
	w.key("redshift", tomlNumber(s.Object.Redshift))

	o := s.Observer
	w.header("[observer]")
	if math.IsInf(o.Radius, 1) {
		w.key("radius", quote("infinity"))
	} else {
		w.quantity("radius", o.Radius, "M")
	}
	w.quantity("inclination", o.Inclination, "deg")
	w.quantity("azimuth", o.Azimuth, "deg")
	w.key("motion", quote(o.Motion))
	w.quantity("position_angle", o.PositionAngle, "deg")

	f := s.Field
	extent := "M"
	if f.angular() {
		extent = "deg"
	}
	w.header("[field]")
	w.key("projection", quote(f.Projection))
	if f.AutoWidth {
		w.key("width", quote("auto"))
	} else {
		w.quantity("width", f.Width, extent)
	}
	w.key("pixels", fmt.Sprintf("[%d, %d]", f.Pixels[0], f.Pixels[1]))
	w.list("center", []string{formatQuantity(f.Center[0], 0, extent), formatQuantity(f.Center[1], 0, extent)})
	if len(f.Frequency) > 0 {
		var items []string
		for _, nu := range f.Frequency {
			items = append(items, formatQuantity(nu, 0, "GHz", "Hz"))
		}
		w.list("frequency", items)
	}

	for _, e := range s.Emitters {
		w.emitter(e)
	}

	w.header("[time]")
	w.quantity("start", s.Time.Start, "M")
	w.quantity("end", s.Time.End, "M")
	if s.Time.Step > 0 {
		w.quantity("step", s.Time.Step, "M")
	}

	if t := s.Telescope; t != (Telescope{}) {
		w.header("[telescope]")
		if t.UV != "" {
			w.key("uv", quote(t.UV))
		}
		if t.Resolution > 0 {
			w.quantity("resolution", t.Resolution, "Hz")
		}
	}
	if s.Telescope.GivenBeam {
		beam := s.Telescope.Beam
		w.list("beam", []string{formatQuantity(beam[0], 0, "uas"), formatQuantity(beam[1], 0, "uas"), formatQuantity(beam[2], 0, "deg")})
	}

	if m := s.Measured; m.RingDiameter.Given || m.Estimator != "" {
		w.header("[measured]")
		w.measure("ring_diameter", m.RingDiameter, "uas")
		if m.Estimator != "" {
			w.key("estimator", quote(m.Estimator))
		}
	}

	w.header("[trace]")
	w.key("tolerance", tomlNumber(s.Trace.Tolerance))
	w.key("max_order", strconv.Itoa(s.Trace.MaxOrder))
	w.key("flux_tolerance", tomlNumber(s.Trace.FluxTolerance))
	w.list("effects", s.Trace.effects())
	for _, f := range s.Figures {
		w.figure(f)
	}
	w.Flush()
	return b.Bytes()
}

// writer writes keys of one table with their equal signs in one column.
type writer struct{ *tabwriter.Writer }

// header begins a table.
func (w writer) header(name string) { fmt.Fprintf(w, "\n%s\n", name) }

// key writes a key whose value is TOML already; TOML on one line holds no tab
// that would move the column.
func (w writer) key(name, toml string) { fmt.Fprintf(w, "%s\t= %s\n", name, toml) }

// quantity writes a number with a unit.
func (w writer) quantity(name string, x float64, unitName string) {
	w.key(name, quote(formatQuantity(x, 0, unitName)))
}

// measure writes a measure in the unit that makes it shortest, or nothing
// when it is not given.
func (w writer) measure(name string, m Measure, unitNames ...string) {
	if m.Given {
		w.key(name, quote(formatQuantity(m.Value, m.Sigma, unitNames...)))
	}
}

// list writes a list of text.
func (w writer) list(name string, items []string) {
	var all []string
	for _, item := range items {
		all = append(all, quote(item))
	}
	w.key(name, "["+strings.Join(all, ", ")+"]")
}

func (w writer) emitter(e Emitter) {
	w.header("[[emitter]]")
	w.key("kind", quote(e.Kind))
	switch e.Kind {
	case disk:
		w.disk(e)
	case spot:
		w.spot(e)
	case surface:
		w.surface(e)
	case sky:
		w.sky(e)
	}
	if e.Light != "" { // a spot on a disk shines like the disk
		w.key("light", quote(e.Light))
		w.key("spectral_index", tomlNumber(e.SpectralIndex))
	}
	if e.Rest > 0 {
		w.key("rest", quote(formatQuantity(e.Rest, 0, "keV", "Hz")))
	}
}

func (w writer) disk(e Emitter) {
	if e.Inner.Name != "" {
		w.key("inner", quote(e.Inner.Name))
	} else {
		w.quantity("inner", e.Inner.Radius, "M")
	}
	w.quantity("outer", e.Outer, "M")
	w.key("sense", quote(pick(e.Clockwise, "clockwise", "counter-clockwise")))
	w.key("gas", quote(e.Gas))
	w.key("profile", quote(e.Profile))
	if len(e.Index) > 0 {
		w.key("index", formatNumbers(e.Index))
	}
	if len(e.Breaks) > 0 {
		var breaks []string
		for _, r := range e.Breaks {
			breaks = append(breaks, formatQuantity(r, 0, "M"))
		}
		w.list("breaks", breaks)
	}
	if e.Table != "" {
		w.key("table", quote(e.Table))
	}
	if e.TotalFlux > 0 {
		w.quantity("total_flux", e.TotalFlux, "Jy")
	}
	w.rate("luminosity", e.Luminosity)
	w.rate("accretion_rate", e.AccretionRate)
	w.thermal(e)
	w.key("optical_depth", formatDepth(e.OpticalDepth))
	w.key("emission_angle", quote(e.EmissionAngle))
}

func (w writer) surface(e Emitter) {
	w.thermal(e)
	if e.Period > 0 {
		w.quantity("period", e.Period, "M")
	}
	if len(e.Caps) > 0 {
		w.key("caps", formatCaps(e.Caps))
	}
	w.key("emission_angle", quote(e.EmissionAngle))
}

func (w writer) sky(e Emitter) {
	if e.Image != "" {
		w.key("image", quote(e.Image))
	} else {
		w.key("pattern", quote(e.Pattern))
	}
	w.key("seed", strconv.FormatInt(e.Seed, 10))
}

// pick returns yes or no.
func pick(is bool, yes, no string) string {
	if is {
		return yes
	}
	return no
}

// tomlNumber writes a number so that TOML does not take a large one for a
// whole number out of its range.
func tomlNumber(x float64) string {
	text := formatNumber(x)
	if !strings.ContainsAny(text, ".e") && math.Abs(x) >= 1<<53 {
		text += ".0"
	}
	return text
}

// formatQuantity writes x, which is in the base unit, and its error in the
// shortest of the units that gives it back exactly. The last unit must be a
// base unit.
func formatQuantity(x, sigma float64, unitNames ...string) string {
	best := ""
	for _, name := range unitNames {
		u, _ := findUnit(name)
		text := formatNumber(x/u.factor) + " " + name
		if sigma != 0 {
			text = formatNumber(x/u.factor) + " +- " + formatNumber(sigma/u.factor) + " " + name
		}
		exact := x/u.factor*u.factor == x && sigma/u.factor*u.factor == sigma
		if exact && (best == "" || len(text) < len(best)) {
			best = text
		}
	}
	return best
}

// formatDepth writes an optical depth.
func formatDepth(depth float64) string {
	switch {
	case depth == 0:
		return quote("thin")
	case math.IsInf(depth, 1):
		return quote("thick")
	}
	return tomlNumber(depth)
}

// rate writes a power or an accretion rate, or nothing when it is not given.
func (w writer) rate(name string, r Rate) {
	if r.Given() {
		w.quantity(name, r.Value, r.Unit)
	}
}

// thermal writes what a blackbody has.
func (w writer) thermal(e Emitter) {
	if e.Temperature > 0 {
		w.quantity("temperature", e.Temperature, "K")
	}
	if e.ColourCorrection > 0 {
		w.key("colour_correction", tomlNumber(e.ColourCorrection))
	}
}

func (w writer) spot(e Emitter) {
	w.quantity("radius", e.Radius, "M")
	w.quantity("azimuth", e.Azimuth, "deg")
	w.quantity("size", e.Size, "M")
	w.key("contrast", tomlNumber(e.Contrast))
	if e.Light != "" {
		w.key("sense", quote(pick(e.Clockwise, clockwise, "counter-clockwise")))
		w.key("emission_angle", quote(e.EmissionAngle))
	}
}

// formatNumbers writes one number, or a list of them.
func formatNumbers(all []float64) string {
	var items []string
	for _, x := range all {
		items = append(items, tomlNumber(x))
	}
	if len(items) == 1 {
		return items[0]
	}
	return "[" + strings.Join(items, ", ") + "]"
}

// effects are those that are not left out.
func (t Trace) effects() []string {
	left := map[string]bool{bending: t.NoBending, gravity: t.NoGravity, motion: t.NoMotion}
	var all []string
	for _, e := range allEffects {
		if !left[e] {
			all = append(all, e)
		}
	}
	return all
}
