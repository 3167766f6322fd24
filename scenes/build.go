package scenes

import (
	"math"
	"slices"
	"sync"
)

// builder makes a Scene of readings. Its err is the first thing that does not
// fit; what is built after it has no meaning.
type builder struct {
	src      *source
	readings map[address]reading
	scene    Scene
	err      *Error
}

// build checks ranges and what keys demand of one another, converts units
// and fills in defaults.
func build(src *source, readings map[address]reading) (Scene, *Error) {
	b := &builder{src: src, readings: readings}
	b.scene.Title = b.get("", 0, "title").word
	b.object()
	b.observer()
	b.field()
	for i := range src.count("emitter") {
		b.emitter(i)
	}
	b.spots()
	b.radiances()
	b.time()
	b.telescope()
	b.measured()
	b.trace()
	for i := range src.count(figureSection) {
		b.figure(i)
	}
	b.memory()
	if b.err != nil {
		return Scene{}, b.err
	}
	return b.scene, nil
}

// defaults holds the default of every key that has one, read as a file's
// value would be.
var defaults = sync.OnceValue(func() map[address]reading {
	all := map[address]reading{}
	for _, k := range keyTable {
		if k.Default == "" {
			continue
		}
		all[address{section: k.Section, key: k.Name}] = k.ownDefault()
	}
	return all
})

// ownDefault reads the key's default.
func (k Key) ownDefault() reading {
	v, ok := parseValue(k.Default)
	r, wrong := read(k, v)
	if !ok || wrong != nil {
		panic("scenes: bad default of " + k.Path())
	}
	return r
}

// get returns what the text says for a key, else the default. Without either
// the reading is empty.
func (b *builder) get(section string, index int, key string) reading {
	a := address{section, index, key}
	if r, ok := b.readings[a]; ok {
		return r
	}
	r := defaults()[address{section: section, key: key}]
	r.address = a
	return r
}

// fail records the first error, at the place when the reading is in the text.
func (b *builder) fail(r reading, at span, e Error) {
	if b.err != nil {
		return
	}
	e.File, e.Key = b.src.name, r.address.String()
	if r.part != "" {
		e.Problem = r.part + ": " + e.Problem
	}
	if r.given {
		e.Found = b.src.excerptOf(at)
		e.locate(b.src.text, at.from)
	} else if e.Found == "" {
		e.Found = "the default " + r.key.Default
	}
	b.err = &e
}

// failAt is fail for the reading's whole value.
func (b *builder) failAt(r reading, e Error) { b.fail(r, r.at, e) }

// inRange holds a number, converted to the unit of the range, against it.
func (b *builder) inRange(r reading, q quantity, x float64, limit Range, unitName string) {
	k := r.key
	switch {
	case math.IsNaN(x) || math.IsInf(x, 0):
		b.fail(r, q.span, Error{Problem: "not a finite number of " + unitName, Allowed: k.Allowed()})
	case !limit.Holds(x):
		allowed := limit.In(unitName)
		if len(k.Words) > 0 {
			allowed = `"` + k.Words[0] + `" or ` + allowed
		}
		problem := "out of range"
		if k.Why != "" {
			problem += ": " + k.Why
		}
		b.fail(r, q.span, Error{Problem: problem, Allowed: allowed})
	}
}

// number returns a number without unit, or 0 when there is none.
func (b *builder) number(r reading, i int) float64 {
	if len(r.numbers) <= i {
		return 0
	}
	q := r.numbers[i]
	b.inRange(r, q, q.value, r.key.Range, "")
	return q.value
}

// plain converts a quantity to the base unit of its key's units.
func (b *builder) plain(r reading, i int) float64 {
	q := r.numbers[i]
	u := orDefault(q.unit, r.key.Unit)
	x := q.value * u.factor
	b.inRange(r, q, x, r.key.Range, u.base)
	return x
}

// measure returns a quantity with its error in the base unit.
func (b *builder) measure(r reading) Measure {
	if len(r.numbers) == 0 {
		return Measure{}
	}
	q := r.numbers[0]
	u := orDefault(q.unit, r.key.Unit)
	m := Measure{Value: b.plain(r, 0), Sigma: q.sigma * u.factor, Given: true}
	if math.IsInf(m.Sigma, 0) {
		b.fail(r, q.span, Error{Problem: "not a finite error", Allowed: r.key.Allowed()})
	}
	return m
}

// length converts a quantity to M; kilometres and the like need the scene's
// scale, so object must have run.
func (b *builder) length(r reading, i int) float64 {
	q := r.numbers[i]
	x, missing := b.scene.lengthInM(q.value, orDefault(q.unit, r.key.Unit))
	if missing != "" {
		b.fail(r, q.span, Error{Problem: missing})
		return 0
	}
	b.inRange(r, q, x, r.key.Range, "M")
	return x
}

// orDefault returns the unit as written, or the one of a bare number.
func orDefault(u unit, name string) unit {
	if u.name == "" {
		u, _ = findUnit(name)
	}
	return u
}

func (b *builder) telescope() {
	t := &b.scene.Telescope
	uv := b.get("telescope", 0, "uv")
	t.UV = uv.word
	if uv.given {
		b.needsAngularScale(uv)
	}
	if resolution := b.get("telescope", 0, "resolution"); resolution.given {
		t.Resolution = b.plain(resolution, 0)
	}
	beam := b.get("telescope", 0, "beam")
	if !beam.given {
		return
	}
	t.GivenBeam = true
	for i, q := range beam.numbers {
		base, limit := "uas", above(0)
		if i == 2 {
			base, limit = "deg", between(-360, 360)
		}
		u := orDefault(q.unit, base)
		if u.base != base {
			b.fail(beam, q.span, Error{Problem: "the unit " + u.name + " does not fit here", Allowed: "FWHM major and minor in uas or mas, position angle in deg or rad"})
		}
		t.Beam[i] = q.value * u.factor
		b.inRange(beam, q, t.Beam[i], limit, base)
	}
	if t.Beam[1] > t.Beam[0] {
		b.fail(beam, beam.numbers[1].span, Error{Problem: "the minor FWHM is larger than the major one", Allowed: "major, minor, position angle"})
	}
	b.needsAngularScale(beam)
}

func (b *builder) measured() {
	ring := b.get("measured", 0, "ring_diameter")
	b.scene.Measured = Measured{RingDiameter: b.measure(ring), Estimator: b.get("measured", 0, "estimator").word}
	if ring.given {
		b.needsAngularScale(ring)
	}
}

// needsAngularScale refuses an angle on the sky when the scene cannot turn it
// into M.
func (b *builder) needsAngularScale(r reading) {
	if _, ok := b.scene.ThetaG(); !ok {
		b.failAt(r, Error{Problem: b.scene.noAngularScale("uas")})
	}
}

func (b *builder) trace() {
	get := func(key string) reading { return b.get("trace", 0, key) }
	b.scene.Trace = Trace{
		Tolerance:     b.number(get("tolerance"), 0),
		MaxOrder:      int(b.number(get("max_order"), 0)),
		FluxTolerance: b.number(get("flux_tolerance"), 0),
	}
	effects := get("effects")
	for i, word := range effects.words {
		if slices.Contains(effects.words[:i], word) {
			b.failAt(effects, Error{Problem: "named twice: " + word, Allowed: effects.key.Allowed()})
		}
	}
	without := func(effect string) bool { return !slices.Contains(effects.words, effect) }
	t := &b.scene.Trace
	t.NoBending, t.NoGravity, t.NoMotion = without(bending), without(gravity), without(motion)
	scaled := func(e Emitter) bool { return e.TotalFlux > 0 }
	switch o := b.scene.Observer; {
	case t.NoBending && slices.ContainsFunc(b.scene.Emitters, scaled):
		b.failAt(effects, Error{Problem: "total_flux is a flux of bent light", Allowed: "bending among the effects, or no emitter.total_flux"})
	case t.NoBending && o.Motion != "static":
		b.failAt(effects, Error{Problem: "without bending the observer must be at rest", Allowed: `observer.motion = "static", or bending among the effects`})
	case t.NoGravity && o.Radius <= b.scene.Object.Horizon():
		b.failAt(effects, Error{Problem: "an observer inside the horizon sees no light without gravity", Allowed: "observer.radius of more than " + formatNumber(b.scene.Object.Horizon()) + " M, or gravity among the effects"})
	}
}
