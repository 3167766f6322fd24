package scenes

import (
	"fmt"
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
	b.telescope()
	b.measured()
	b.trace()
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
		v, ok := parseValue(k.Default)
		r, wrong := read(k, v)
		if !ok || wrong != nil {
			panic("scenes: bad default of " + k.Path())
		}
		all[address{section: k.Section, key: k.Name}] = r
	}
	return all
})

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
	case k.OnlyZero && x != 0:
		b.fail(r, q.span, Error{Problem: "other than 0 is " + notInVersion, Allowed: "0", Later: true})
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

func (b *builder) object() {
	get := func(key string) reading { return b.get("object", 0, key) }
	o := &b.scene.Object
	o.Kind = get("kind").word
	b.length(get("charge"), 0)
	o.Mass = b.measure(get("mass"))
	o.Distance = b.measure(get("distance"))
	o.ThetaG = b.measure(get("theta_g"))
	o.Redshift = b.number(get("redshift"), 0)
	if o.ThetaG.Given && (o.Mass.Given || o.Distance.Given) {
		b.failAt(get("theta_g"), Error{Problem: "given together with mass or distance", Allowed: "theta_g, or mass and distance"})
	}
}

func (b *builder) observer() {
	get := func(key string) reading { return b.get("observer", 0, key) }
	o := &b.scene.Observer
	o.Radius = math.Inf(1)
	if r := get("radius"); r.word == "" {
		o.Radius = b.length(r, 0)
	}
	o.Inclination = b.plain(get("inclination"), 0)
	o.Azimuth = b.plain(get("azimuth"), 0)
	o.Motion = get("motion").word
	o.PositionAngle = b.plain(get("position_angle"), 0)
}

// photonSphere is the radius, in M, at and inside which a parallel field has
// no meaning: there L/E no longer tells the inward paths apart.
const photonSphere = 3

func (b *builder) field() {
	get := func(key string) reading { return b.get("field", 0, key) }
	f := &b.scene.Field
	radius := b.get("observer", 0, "radius")
	projection := get("projection")
	f.Projection = projection.word
	infinite := math.IsInf(b.scene.Observer.Radius, 1)
	switch {
	case f.Projection == "perspective" && infinite:
		b.failAt(projection, Error{Problem: "a perspective field needs an observer at a finite radius", Allowed: "parallel, or observer.radius in M"})
	case f.Projection == "parallel" && b.scene.Observer.Radius <= photonSphere:
		b.failAt(radius, Error{Problem: "too close for a parallel field", Allowed: `more than 3 M, or field.projection = "perspective"`})
	}
	width := get("width")
	f.AutoWidth = width.word == "auto"
	if !f.AutoWidth {
		f.Width = b.extent(width, 0, inside(0, 180))
	}
	pixels := get("pixels")
	center := get("center")
	for i := range 2 {
		f.Pixels[i] = int(b.number(pixels, i))
		f.Center[i] = b.extent(center, i, inside(-90, 90))
	}
	frequency := get("frequency")
	for i := range frequency.numbers {
		f.Frequency = append(f.Frequency, b.plain(frequency, i))
	}
}

// extent converts a length on the field to M, or to deg when the field is
// one of angles; perspective is the range there.
func (b *builder) extent(r reading, i int, perspective Range) float64 {
	q := r.numbers[i]
	base := q.unit.base
	if b.scene.Field.Projection == "parallel" {
		switch {
		case base == "deg":
			b.fail(r, q.span, Error{Problem: "the unit " + q.unit.name + " needs a perspective field",
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
	b.inRange(r, q, x, perspective, "deg")
	return x
}

// memoryLimit bounds the float32 layers of a plate, in bytes.
const memoryLimit = 4 << 30

// Layers of a plate: the total, and intensity g r phi delay mu of each order.
const (
	layersOnce     = 1
	layersPerOrder = 6
	bytesPerValue  = 4 // float32
)

// memory refuses a plate too large, and says how large.
func (b *builder) memory() {
	pixels, maxOrder := b.get("field", 0, "pixels"), b.get("trace", 0, "max_order")
	columns, rows := pixels.numbers[0].value, pixels.numbers[1].value // float64: their product may pass every integer
	orders := b.scene.Trace.MaxOrder + 1
	perPixel := (layersOnce + layersPerOrder*orders) * bytesPerValue
	need := columns * rows * float64(perPixel)
	if need <= memoryLimit {
		return
	}
	blame := pixels
	if !pixels.given {
		blame = maxOrder
	}
	b.failAt(blame, Error{
		Problem: fmt.Sprintf("the image would need %s of memory, %d bytes for each of %.0f x %.0f pixels with max_order %d",
			gibibytes(need), perPixel, columns, rows, orders-1),
		Allowed: "at most " + gibibytes(memoryLimit),
	})
}

// gibibytes writes a number of bytes in GiB, large ones in TiB.
func gibibytes(n float64) string {
	if n >= 1<<40 {
		return fmt.Sprintf("%.4g TiB", n/(1<<40))
	}
	return fmt.Sprintf("%.4g GiB", n/(1<<30))
}

func (b *builder) emitter(index int) {
	get := func(key string) reading { return b.get("emitter", index, key) }
	inner := get("inner")
	e := Emitter{
		Kind:          get("kind").word,
		Inner:         Rim{Name: inner.word},
		Outer:         b.length(get("outer"), 0),
		Clockwise:     get("sense").word == "clockwise",
		Gas:           get("gas").word,
		Profile:       get("profile").word,
		Index:         b.number(get("index"), 0),
		Light:         get("light").word,
		SpectralIndex: b.number(get("spectral_index"), 0),
		Thick:         get("optical_depth").word == "thick",
	}
	switch inner.word {
	case "isco":
		e.Inner.Radius = iscoRadius
	case "horizon":
		e.Inner.Radius = horizonRadius
	default:
		e.Inner.Radius = b.length(inner, 0)
	}
	if e.Inner.Radius >= e.Outer {
		blame, allowed := inner, "less than the outer radius of "+formatNumber(e.Outer)+" M"
		if outer := get("outer"); !inner.given && outer.given {
			blame, allowed = outer, "more than the inner radius of "+formatNumber(e.Inner.Radius)+" M"
		}
		b.failAt(blame, Error{Problem: "the inner rim must lie inside the outer one", Allowed: allowed})
	}
	b.scene.Emitters = append(b.scene.Emitters, e)
}

// Radii of a black hole without spin and charge, in M.
const (
	horizonRadius = 2
	iscoRadius    = 6
)

func (b *builder) telescope() {
	beam := b.get("telescope", 0, "beam")
	if !beam.given {
		return
	}
	t := &b.scene.Telescope
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
	if len(effects.words) < len(allEffects) {
		b.failAt(effects, Error{Problem: effects.key.LaterForm + " is " + notInVersion, Allowed: "all of " + effects.key.Default, Later: true})
	}
}
