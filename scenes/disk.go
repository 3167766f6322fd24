package scenes

import "math"

func (b *builder) disk(e *Emitter, get func(string) reading) {
	outer := get("outer")
	if outer.given { // a default is for rims to judge
		outer = outer.limited(b.scene.Object.outerLimit())
	}
	e.Outer = b.length(outer, 0)
	e.Clockwise = get("sense").word == clockwise
	e.Gas = get("gas").word
	e.OpticalDepth = b.opticalDepth(get("optical_depth"))
	e.EmissionAngle = get("emission_angle").word
	e.Inner = b.innerRim(get("inner"), e.Gas)
	b.circles(get("inner"), *e)
	b.rims(get("inner"), outer, *e)
	b.profile(e, get)
	b.shines(e, get)
}

// outerLimit returns where a disk may end outwards, in M, and why not
// elsewhere.
func (o Object) outerLimit() (Range, string) {
	switch o.Kind {
	case star:
		return above(o.Radius), "the disk must be outside the star"
	case shell:
		return above(0), ""
	}
	return above(o.Horizon()), "the disk must end outside the horizon"
}

// innerLimit returns where gas of that motion may begin, in M, and why not
// elsewhere; whether it can circle there is another question.
func (o Object) innerLimit(gas string) (Range, string) {
	switch {
	case o.Kind == star:
		return atLeast(o.Radius), "the disk must be outside the star"
	case o.Kind == shell:
		return above(0), ""
	case gas == "static":
		return above(o.Horizon()), "static gas must be outside the horizon"
	}
	return atLeast(o.Horizon()), "the disk must end outside the horizon"
}

// innerRim resolves the inner rim of gas of that motion.
func (b *builder) innerRim(inner reading, gas string) Rim {
	o := b.scene.Object
	limit, why := o.innerLimit(gas)
	switch inner.word {
	case "isco":
		return Rim{"isco", o.ISCO()}
	case "horizon":
		switch {
		case o.Kind != blackHole:
			b.failAt(inner, Error{Problem: article(o.Kind) + " has no horizon", Allowed: `"isco" or ` + limit.In("M")})
		case gas == "static":
			b.failAt(inner, Error{Problem: why, Allowed: `"isco" or ` + limit.In("M")})
		}
		return Rim{"horizon", o.Horizon()}
	}
	return Rim{Radius: b.length(inner.limited(limit, why), 0)}
}

// circles refuses circular gas around a star or shell where it cannot stay:
// unlike a hole's it has nothing to plunge into that this package describes.
func (b *builder) circles(inner reading, e Emitter) {
	o := b.scene.Object
	isco := o.ISCO()
	if o.Kind == blackHole || e.Gas != "circular" || e.Inner.Radius >= isco {
		return
	}
	radius := formatNumber(o.Radius) + " M"
	problem := "circular orbits are unstable inside 6 M"
	switch {
	case o.Kind == shell && e.Outer <= o.Radius:
		problem = "gas inside the shell of " + radius + " feels no pull and cannot circle"
	case o.Kind == shell && e.Inner.Radius < o.Radius:
		problem = "the disk straddles the shell of " + radius + ", and inside it gas cannot circle"
	case e.Inner.Radius <= o.PhotonSphere():
		problem = "circular orbits are impossible at and inside 3 M, unstable inside 6 M"
	}
	b.failAt(inner, Error{Problem: problem, Allowed: `"isco" or ` + atLeast(isco).In("M") + `, or gas = "static"`})
}

// rims refuses rims in the wrong order, and blames one that the text gives.
func (b *builder) rims(inner, outer reading, e Emitter) {
	if e.Inner.Radius < e.Outer {
		return
	}
	const problem = "the inner rim must lie inside the outer one"
	innerText, outerText := formatNumber(e.Inner.Radius)+" M", formatNumber(e.Outer)+" M"
	switch {
	case inner.given:
		b.failAt(inner, Error{Problem: problem, Allowed: "less than the outer radius of " + outerText})
	case outer.given:
		b.failAt(outer, Error{Problem: problem, Allowed: "more than the inner radius of " + innerText})
	default: // only a large object moves the default rims past each other
		b.failAt(b.get("object", 0, "radius"), Error{Problem: "a disk from here outwards needs emitter.outer",
			Allowed: "less than its default, " + outerText + ", or emitter.outer of more than " + innerText})
	}
}

// opticalDepth returns that at normal incidence.
func (b *builder) opticalDepth(r reading) float64 {
	switch r.word {
	case "thin":
		return 0
	case "thick":
		return math.Inf(1)
	}
	return b.number(r, 0)
}
