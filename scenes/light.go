package scenes

import (
	"slices"
	"strings"
)

// Lights of emitters.
const (
	bolometric    = "bolometric"
	monochromatic = "monochromatic"
	lineLight     = "line"
	blackbody     = "blackbody"
)

const clockwise = "clockwise"

// lights refuses light that a kind of emitter does not give.
func (b *builder) lights(e Emitter, get func(string) reading) {
	light := get("light")
	switch {
	case e.Light == lineLight && e.Kind != disk && e.Kind != spot:
		b.failAt(light, Error{Problem: article(e.Kind) + " has no line", Allowed: "light of a disk or a spot"})
	case e.Light == blackbody && e.Kind != disk && e.Kind != surface:
		b.failAt(light, Error{Problem: article(e.Kind) + " has no temperature", Allowed: "light of a disk or a surface"})
	}
}

// idle leaves out the keys of an emitter that mean nothing for its profile or
// light, and notes them: a scene may be tried with one profile after another.
func (b *builder) idle(index int, profile, light string) {
	for _, entry := range b.src.entries {
		if entry.section != "emitter" || entry.index != index {
			continue
		}
		r := b.readings[entry.address]
		blame := func(what, is string, fit []string) {
			if len(fit) == 0 || slices.Contains(fit, is) || !b.readings[entry.address].given {
				return
			}
			b.scene.Idle = append(b.scene.Idle, entry.address.String()+" means nothing with "+what+" = "+quote(is)+" and is ignored.")
			delete(b.readings, entry.address)
		}
		blame("profile", profile, r.key.Profiles)
		blame("light", light, r.key.Lights)
	}
}

// thermal reads what a blackbody has, and refuses it elsewhere.
func (b *builder) thermal(e *Emitter, get func(string) reading) {
	if colour := get("colour_correction"); colour.given {
		e.ColourCorrection = b.number(colour, 0)
	}
	if e.Light == blackbody {
		b.needsFrequency(get("light"), "a blackbody")
	}
}

// needsFrequency refuses what only has a meaning at a frequency.
func (b *builder) needsFrequency(r reading, what string) {
	if len(b.scene.Field.Frequency) == 0 {
		b.failAt(r, Error{Problem: what + " needs field.frequency", Allowed: `field.frequency, "230 GHz" or "2 keV", say`})
	}
}

// Radiance is what the intensities of a scene are measured in.
type Radiance uint8

// The radiances.
const (
	Relative   Radiance = iota // to the emitter's own unit
	PerHertz                   // W m⁻² Hz⁻¹ sr⁻¹
	Bolometric                 // W m⁻² sr⁻¹
)

// Radiance says what the emitter's intensity is measured in.
func (e Emitter) Radiance() Radiance {
	switch {
	case e.Light == blackbody || e.TotalFlux > 0:
		return PerHertz
	case e.Luminosity.Given() || e.AccretionRate.Given():
		return Bolometric
	}
	return Relative
}

// Radiance says what the scene's intensities are measured in: all of its
// emitters agree.
func (s Scene) Radiance() Radiance {
	for _, e := range s.Emitters {
		if e.Kind != spot || s.SpotDisk(e) < 0 {
			return e.Radiance()
		}
	}
	return Relative
}

// radiances refuses emitters that cannot be added up.
func (b *builder) radiances() {
	words := map[Radiance]string{Relative: "relative", PerHertz: "per Hz", Bolometric: "over all frequencies"}
	want := b.scene.Radiance()
	for k, e := range b.scene.Emitters {
		if e.Kind == spot && b.scene.SpotDisk(e) >= 0 {
			continue
		}
		if r := e.Radiance(); r != want {
			b.failAt(b.get("emitter", k, "light"), Error{
				Problem: "this emitter's intensity is " + words[r] + ", that of the others " + words[want] + ": they cannot be added up",
				Allowed: "emitters that are all " + strings.Join([]string{words[Relative], words[PerHertz], words[Bolometric]}, ", all ")})
		}
	}
}
