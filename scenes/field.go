package scenes

import "math"

// Projections of a field.
const (
	parallel    = "parallel"
	perspective = "perspective"
	allSky      = "all-sky"
)

// angular reports whether the field holds directions at the observer.
func (f Field) angular() bool { return f.Projection != parallel }

func (b *builder) field() {
	get := func(key string) reading { return b.get("field", 0, key) }
	f := &b.scene.Field
	f.Projection = get("projection").word
	b.projection()
	width := get("width")
	f.AutoWidth = width.word == "auto"
	if !f.AutoWidth {
		f.Width = b.extent(width, 0, f.widths())
	}
	pixels := get("pixels")
	center := get("center")
	for i := range 2 {
		f.Pixels[i] = int(b.number(pixels, i))
		f.Center[i] = b.extent(center, i, f.centers())
	}
	frequency := get("frequency")
	for i := range frequency.numbers {
		f.Frequency = append(f.Frequency, b.plain(frequency, i))
	}
}

// projection refuses a projection that does not suit the observer.
func (b *builder) projection() {
	projection, motion := b.get("field", 0, "projection"), b.get("observer", 0, "motion")
	radius := b.get("observer", 0, "radius")
	o, f := b.scene.Observer, b.scene.Field
	const instead = `field.projection = "perspective" or "all-sky"`
	sphere := b.scene.Object.PhotonSphere()
	switch {
	case f.angular() && math.IsInf(o.Radius, 1):
		b.failAt(projection, Error{Problem: "the " + f.Projection + " field needs an observer at a finite radius", Allowed: "parallel, or observer.radius in M"})
	case f.angular():
	case o.Motion != "static":
		blame := motion
		if projection.given {
			blame = projection
		}
		b.failAt(blame, Error{Problem: "a parallel field needs a static observer", Allowed: `observer.motion = "static", or ` + instead})
	case b.scene.insideShell():
		b.failAt(radius, Error{Problem: "a parallel field has no meaning inside the shell",
			Allowed: "more than " + formatNumber(b.scene.Object.Radius) + " M, or " + instead})
	case o.Radius <= sphere: // L/E no longer tells the inward paths apart
		b.failAt(radius, Error{Problem: "too close for a parallel field", Allowed: "more than " + formatNumber(sphere) + " M, or " + instead})
	}
}

// widths is the range of an angular field's width, in deg.
func (f Field) widths() Range {
	if f.Projection == allSky {
		return between(360, 360)
	}
	return inside(0, 180)
}

// centers is the range of an angular field's centre, in deg.
func (f Field) centers() Range {
	if f.Projection == allSky {
		return between(0, 0)
	}
	return inside(-90, 90)
}

// extent converts a length on the field to M, or to deg when the field is
// one of angles; angles is the range there.
func (b *builder) extent(r reading, i int, angles Range) float64 {
	q := r.numbers[i]
	base := q.unit.base
	if !b.scene.Field.angular() {
		switch {
		case base == "deg":
			b.fail(r, q.span, Error{Problem: "the unit " + q.unit.name + " needs a perspective or all-sky field",
				Allowed: "a length (units M rg rs km s uas mas)"})
			return 0
		case base == "uas" && !math.IsInf(b.scene.Observer.Radius, 1):
			b.fail(r, q.span, Error{Problem: "the unit " + q.unit.name + " on a parallel field needs the observer at infinity",
				Allowed: `a length (units M rg rs km s), or observer.radius = "infinity"`})
			return 0
		}
		return b.length(r, i)
	}
	x := q.value
	switch {
	case base == "deg":
		x *= q.unit.factor
	case base == "uas":
		x *= q.unit.factor / microarcsecondsPerDegree
	case base != "" && r.given:
		b.fail(r, q.span, Error{Problem: "the unit " + q.unit.name + " needs a parallel field", Allowed: "an angle (units deg rad uas mas)"})
	}
	b.inRange(r, q, x, angles, "deg")
	return x
}
