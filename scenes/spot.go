package scenes

import "math"

// SpotReach is how many of its sigmas a spot reaches: beyond lie 4e-6 of a
// Gaussian. Taste.
const SpotReach = 5

// spot reads a hot spot.
func (b *builder) spot(e *Emitter, get func(string) reading) {
	radius := get("radius")
	if !radius.given {
		b.failAt(get("kind"), Error{Problem: "a spot needs emitter.radius", Allowed: "the radius of its orbit, " + atLeast(b.scene.Object.ISCO()).In("M")})
		return
	}
	e.Radius = b.length(radius.limited(atLeast(b.scene.Object.ISCO()), "a spot follows a stable circular geodesic outside the object"), 0)
	e.Azimuth = b.plain(get("azimuth"), 0)
	e.Size = b.length(get("size"), 0)
	e.Contrast = b.number(get("contrast"), 0)
	e.Clockwise = get("sense").word == clockwise
	e.EmissionAngle = get("emission_angle").word
}

// SpotDisk returns which emitter is the disk that a spot lies on, the first
// one that holds its radius; -1 for a spot that shines on its own.
func (s Scene) SpotDisk(e Emitter) int {
	for k, d := range s.Emitters {
		if d.Kind == disk && d.Inner.Radius <= e.Radius && e.Radius <= d.Outer {
			return k
		}
	}
	return -1
}

// spots finds the disks of the spots, when all emitters are known.
func (b *builder) spots() {
	var disks []string
	for _, e := range b.scene.Emitters {
		if e.Kind == disk {
			disks = append(disks, formatNumber(e.Inner.Radius)+" to "+formatNumber(e.Outer)+" M")
		}
	}
	for k := range b.scene.Emitters {
		e := &b.scene.Emitters[k]
		if e.Kind != spot {
			continue
		}
		get := func(key string) reading { return b.get("emitter", k, key) }
		at := b.scene.SpotDisk(*e)
		switch {
		case at < 0 && len(disks) > 0:
			b.failAt(get("radius"), Error{Problem: "the spot lies off the disk", Allowed: joined(disks)})
		case at >= 0:
			for _, key := range []string{"light", "spectral_index", "rest", "sense", "emission_angle"} {
				if r := get(key); r.given {
					b.failAt(r, Error{Problem: "a spot on a disk shines and turns like the disk", Allowed: key + " of the disk only"})
				}
			}
			d := b.scene.Emitters[at]
			e.Light, e.SpectralIndex, e.EmissionAngle, e.Clockwise = "", 0, "", d.Clockwise
			if d.Gas != "circular" {
				b.failAt(get("kind"), Error{Problem: "the gas of the spot's disk is at rest", Allowed: `a disk with gas = "circular"`})
			}
		}
	}
}

// joined lists alternatives.
func joined(all []string) string {
	text := ""
	for k, part := range all {
		if k > 0 {
			text += " or "
		}
		text += part
	}
	return text
}

// OrbitalPeriod returns that of a circular geodesic at r, M, in M of time
// seen from infinity: 2π r^(3/2) without charge.
func (o Object) OrbitalPeriod(r float64) float64 {
	return 2 * math.Pi * r * math.Sqrt(r) / math.Sqrt(1-o.Charge*o.Charge/r)
}
