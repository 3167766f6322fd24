package scenes

import (
	"slices"
	"strings"
)

// Notes returns what is legal but worth telling, in full sentences.
func (s Scene) Notes() []string {
	notes := slices.Clone(s.Idle)
	o := s.Object
	if o.Kind == star && o.Interior == "uniform" && o.Radius < uniformDominant {
		notes = append(notes, "A uniform star smaller than 8/3 M breaks the dominant energy condition: its pressure at the centre passes its density.")
	}
	if o.Kind == shell && o.Radius < shellDominant {
		notes = append(notes, "A shell smaller than 25/12 M breaks the dominant energy condition: its stress passes its surface density.")
	}
	if isco := stableOrbit(o.Charge); s.Observer.Motion == "orbit" && s.Observer.Radius < isco {
		notes = append(notes, "The observer's circular orbit at "+formatShort(s.Observer.Radius)+" M is unstable, as all below "+formatShort(isco)+" M.")
	}
	if left := s.Trace.LeftOut(); len(left) > 0 {
		notes = append(notes, "Left out on purpose (trace.effects): "+strings.Join(left, ", ")+".")
	}
	if len(s.Emitters) == 0 {
		notes = append(notes, "The scene has no emitter: its image is empty.")
	}
	return notes
}

// LeftOut names the effects that trace.effects leaves out, in words.
func (t Trace) LeftOut() []string {
	var words []string
	if t.NoBending {
		words = append(words, "light bending (paths are straight)")
	}
	if t.NoGravity {
		words = append(words, "gravitational redshift")
	}
	if t.NoMotion {
		words = append(words, "motion of the gas")
	}
	return words
}

// Assumed says in words what the scene's brightness rests on that the file
// does not say.
func (s Scene) Assumed() []string {
	var words []string
	for _, e := range s.Emitters {
		watts, ok := s.AccretionPower(e)
		if !ok {
			continue
		}
		text := "accretion of " + formatShort(watts) + " W of rest energy, of which the disk radiates 0.0572"
		if e.Luminosity.Unit == "Edd" || e.AccretionRate.Unit == "Edd" {
			text += "; Edd is the Eddington luminosity of ionised hydrogen"
		}
		words = append(words, text)
	}
	return words
}
