package scenes

import "math"

// fastestEquator is the speed of the equator in the local static frame, in c,
// up to which rotation counts as slow. Method: oblateness and frame dragging,
// both left out, grow with its square.
const fastestEquator = 0.3

func (b *builder) surface(e *Emitter, get func(string) reading) {
	if o := b.scene.Object; o.Kind != star || o.Interior != "opaque" {
		b.failAt(get("kind"), Error{Problem: "a surface shines on an opaque star only", Allowed: `object.kind = "star" with interior = "opaque"`})
	}
	e.EmissionAngle = get("emission_angle").word
	if r := get("temperature"); r.given {
		e.Temperature = b.temperature(r)
	}
	if r := get("period"); r.given {
		e.Period = b.span(r)
		b.slow(r, e.Period)
	}
	e.Caps = b.caps(get("caps"))
	warm := e.Temperature > 0 || len(e.Caps) > 0
	switch light := get("light"); {
	case e.Light == monochromatic && warm:
		b.failAt(light, Error{Problem: "one frequency of a temperature is a blackbody", Allowed: "bolometric or blackbody"})
	case e.Light == blackbody && !warm:
		b.failAt(light, Error{Problem: "a blackbody surface needs emitter.temperature or emitter.caps", Allowed: "bolometric or monochromatic"})
	}
	b.thermal(e, get)
}

// slow refuses a period, in M, whose equator is too fast: it moves at
// ΩR/√(1-2/R) in the local static frame.
func (b *builder) slow(r reading, period float64) {
	radius := b.scene.Object.Radius
	travel := 2 * math.Pi * radius / math.Sqrt(1-2/radius) // M
	if speed := travel / period; speed > fastestEquator {
		least := formatShort(travel/fastestEquator) + " M"
		if seconds, ok := b.scene.ObservedSecondsPerM(); ok {
			least += " (" + formatShort(travel/fastestEquator*seconds) + " s)"
		}
		b.failAt(r, Error{Problem: "rotation is stated for slow rotation only, and this equator would move at " + formatShort(speed) + " c",
			Allowed: "at most " + formatNumber(fastestEquator) + " c, a period of about " + least + " or more"})
	}
}

// temperature converts a temperature to K; eV stand for kT.
func (b *builder) temperature(r reading) float64 {
	q := r.numbers[0]
	u := orDefault(q.unit, r.key.Unit)
	x := q.value * u.factor
	if u.base == "Hz" {
		x *= Planck / Boltzmann
	}
	b.inRange(r, q, x, r.key.Range, "K")
	return x
}
