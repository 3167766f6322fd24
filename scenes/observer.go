package scenes

import "math"

func (b *builder) observer() {
	get := func(key string) reading { return b.get("observer", 0, key) }
	o := &b.scene.Observer
	motion, radius := get("motion"), get("radius")
	o.Motion = motion.word
	o.Radius = math.Inf(1)
	switch {
	case radius.word == "":
		o.Radius = b.observerRadius(radius)
	case o.Motion != "static":
		b.failAt(motion, Error{Problem: "an observer at infinity does not move", Allowed: "static, or observer.radius in M"})
	}
	o.Inclination = b.plain(get("inclination"), 0)
	o.Azimuth = b.plain(get("azimuth"), 0)
	o.PositionAngle = b.plain(get("position_angle"), 0)
}

// observerRadius returns a finite radius, in M, held against what object and
// motion allow.
func (b *builder) observerRadius(r reading) float64 {
	limit, why := b.scene.observerLimit()
	r = r.limited(limit, why)
	if b.scene.Observer.Motion != "static" {
		r.key.Words = nil // not at infinity
	}
	x := b.length(r, 0)
	if o := b.scene.Object; o.Kind == shell && x == o.Radius {
		b.failAt(r, Error{Problem: "on the shell itself", Allowed: "less or more than " + formatNumber(o.Radius) + " M"})
	}
	return x
}

// observerLimit returns where an observer may be, in M, and why not
// elsewhere. Motion and object are known by then.
func (s Scene) observerLimit() (limit Range, why string) {
	o := s.Object
	switch s.Observer.Motion {
	case "orbit":
		if sphere := o.PhotonSphere(); sphere >= o.Radius {
			return above(sphere), "no mass moves on a circle at or inside the photon sphere"
		}
		return above(o.Radius), "the orbit must be outside the " + o.Kind
	case "infall":
		switch {
		case o.Kind != blackHole:
			return above(o.Radius), "the fall from infinity ends at the " + o.Kind
		case o.Charge != 0:
			return above(o.Horizon()), "the fall is not followed inside the horizon of a charged hole"
		}
		return above(0), "the fall ends at the centre"
	}
	switch o.Kind {
	case star:
		return above(o.Radius), "the observer must be outside the star"
	case shell:
		return atLeast(0), "" // also inside
	}
	return above(o.Horizon()), "a static observer must be outside the horizon"
}

// insideShell reports whether the observer is inside a shell.
func (s Scene) insideShell() bool {
	return s.Object.Kind == shell && s.Observer.Radius < s.Object.Radius
}

// finite says whether the observer is at a finite radius.
func (o Observer) finite() bool { return !math.IsInf(o.Radius, 1) }
