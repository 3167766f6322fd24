package scenes

// Kinds of object.
const (
	blackHole = "black-hole"
	star      = "star"
	shell     = "shell"
)

// Radii, in M, below which a star or shell is impossible or strange.
const (
	// buchdahlRadius: no star in equilibrium is this small. Source: Buchdahl,
	// Phys. Rev. 116, 1027 (1959).
	buchdahlRadius = 9. / 4
	// shellLeast: a shell this small is inside its own horizon.
	shellLeast = 2
	// uniformDominant: in a smaller star of uniform density the pressure at
	// the centre passes the density, p_c = ρ(1-s)/(3s-1) with s = √(1-2/R).
	uniformDominant = 8. / 3
	// shellDominant: in a smaller shell the stress p = σ(1-s)/4s passes the
	// surface density σ.
	shellDominant = 25. / 12
)

func (b *builder) object() {
	get := func(key string) reading { return b.get("object", 0, key) }
	o := &b.scene.Object
	o.Kind = get("kind").word
	b.foreign("object", 0, o.Kind)
	o.Mass = b.measure(get("mass"))
	o.Distance = b.measure(get("distance"))
	o.ThetaG = b.measure(get("theta_g"))
	o.Redshift = b.number(get("redshift"), 0)
	if o.ThetaG.Given && (o.Mass.Given || o.Distance.Given) {
		b.failAt(get("theta_g"), Error{Problem: "given together with mass or distance", Allowed: "theta_g, or mass and distance"})
	}
	// Lengths come last: in km they need the mass.
	switch o.Kind {
	case blackHole:
		o.Charge = b.length(get("charge"), 0)
	case star:
		o.Interior = get("interior").word
		o.Radius = b.objectRadius(above(buchdahlRadius), "no pressure holds up a star at or below the Buchdahl limit, 9/4 M")
	case shell:
		o.Radius = b.objectRadius(above(shellLeast), "a shell must be outside its horizon")
	}
}

// objectRadius returns the radius that a star and a shell must have, in M.
func (b *builder) objectRadius(limit Range, why string) float64 {
	kind := b.get("object", 0, "kind")
	r := b.get("object", 0, "radius").limited(limit, why)
	if !r.given {
		b.failAt(kind, Error{Problem: "a " + kind.word + " needs object.radius", Allowed: "object.radius of " + limit.In("M")})
		return 0
	}
	return b.length(r, 0)
}

// foreign refuses the keys of a table that another kind of object or emitter
// has, the first in the text.
func (b *builder) foreign(section string, index int, kind string) {
	for _, e := range b.src.entries {
		if e.section != section || e.index != index {
			continue
		}
		if r := b.readings[e.address]; !r.key.isFor(kind) {
			b.fail(r, e.keySpan, Error{Problem: e.key + " does not apply to " + article(kind),
				Allowed: "only for " + kinds(r.key.Kinds)})
		}
	}
}
