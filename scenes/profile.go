package scenes

// Profiles of disks.
const (
	powerLaw      = "power"
	novikovThorne = "novikov-thorne"
	tabulated     = "table"
)

// profile reads how a disk's light depends on radius.
func (b *builder) profile(e *Emitter, get func(string) reading) {
	profile := get("profile")
	e.Profile = profile.word
	switch e.Profile {
	case powerLaw:
		b.indices(e, get)
	case tabulated:
		e.Table = get("table").word
		if e.Table == "" {
			b.failAt(profile, Error{Problem: "a table profile needs emitter.table", Allowed: "the path of a CSV file of r [M],value"})
		}
	case novikovThorne:
		switch o := b.scene.Object; {
		case o.Kind != blackHole || o.Charge != 0:
			b.failAt(profile, Error{Problem: "novikov-thorne is the disk of an uncharged black hole", Allowed: "power or table"})
		case e.Gas != "circular":
			b.failAt(get("gas"), Error{Problem: "the gas of a novikov-thorne disk circles", Allowed: "circular"})
		}
	}
}

// indices reads a power profile, broken or not.
func (b *builder) indices(e *Emitter, get func(string) reading) {
	index, breaks := get("index"), get("breaks")
	for i := range index.numbers {
		e.Index = append(e.Index, b.number(index, i))
	}
	for i, q := range breaks.numbers {
		r := b.length(breaks, i)
		if i > 0 && r <= e.Breaks[i-1] {
			b.fail(breaks, q.span, Error{Problem: "the breaks must grow", Allowed: "more than " + formatNumber(e.Breaks[i-1]) + " M"})
		}
		e.Breaks = append(e.Breaks, r)
	}
	if want := len(e.Index) - 1; len(e.Breaks) != want {
		blame := index
		if breaks.given {
			blame = breaks
		}
		b.failAt(blame, Error{Problem: formatNumber(float64(len(e.Index))) + " indices and " + formatNumber(float64(len(e.Breaks))) + " breaks",
			Allowed: "one index more than breaks"})
	}
}

// shines reads how bright a disk is.
func (b *builder) shines(e *Emitter, get func(string) reading) {
	e.Luminosity, e.AccretionRate = b.rate(get("luminosity")), b.rate(get("accretion_rate"))
	if t := get("temperature"); t.given {
		e.Temperature = b.temperature(t)
		if e.Light != blackbody || e.Profile != powerLaw {
			b.failAt(t, Error{Problem: "given without a blackbody power profile", Allowed: `only with light = "blackbody" and profile = "power"`})
		}
	}
	b.thermal(e, get)
	b.accretion(*e, get)
	flux := get("total_flux")
	if !flux.given {
		return
	}
	e.TotalFlux = b.plain(flux, 0)
	_, scaled := b.scene.ThetaG()
	switch o := b.scene; {
	case !scaled:
		b.failAt(flux, Error{Problem: o.noAngularScale("Jy")})
	case o.Field.Projection != parallel || o.Observer.finite():
		b.failAt(flux, Error{Problem: "total_flux needs the observer at infinity", Allowed: `observer.radius = "infinity" and a parallel field`})
	case o.Object.Kind == shell || o.Object.Interior == "uniform":
		b.failAt(flux, Error{Problem: "total_flux is not known where light passes through the object", Allowed: "a black hole or an opaque star"})
	}
	b.needsFrequency(flux, "total_flux")
}

// accretion refuses rates that are not enough or too much.
func (b *builder) accretion(e Emitter, get func(string) reading) {
	light, luminosity, rate := get("light"), get("luminosity"), get("accretion_rate")
	given := luminosity
	if !luminosity.given {
		given = rate
	}
	switch {
	case luminosity.given && rate.given:
		b.failAt(rate, Error{Problem: "given together with luminosity", Allowed: "luminosity or accretion_rate"})
	case given.given && !b.scene.Object.Mass.Given:
		b.failAt(given, Error{Problem: "the flux from an accretion disk needs object.mass", Allowed: "object.mass"})
	case e.Light != blackbody:
	case e.Profile == novikovThorne && !given.given:
		b.failAt(light, Error{Problem: "a blackbody accretion disk needs emitter.luminosity or emitter.accretion_rate", Allowed: "one of them"})
	case e.Profile == powerLaw && !get("temperature").given:
		b.failAt(light, Error{Problem: "a blackbody power profile needs emitter.temperature", Allowed: "the effective temperature at 1 M, in K"})
	}
}

// rate reads a power or an accretion rate, in the unit as written.
func (b *builder) rate(r reading) Rate {
	if !r.given {
		return Rate{}
	}
	q := r.numbers[0]
	u := orDefault(q.unit, r.key.Unit)
	b.inRange(r, q, q.value, r.key.Range, u.name)
	return Rate{Value: q.value, Unit: u.name}
}
